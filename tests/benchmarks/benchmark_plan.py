"""How a plan over 60 shades grows from 10 to 10,000 bracelets; prints, asserts nothing.

Run with the project's own Python: tests/benchmarks/benchmark_plan.py [BRACELETS ...]

Each size is measured in a process of its own, so that its peak of memory is its own. The kinds are
the same from 90 bracelets on; ten bracelets have ten kinds.
"""

import json
import os
import resource
import subprocess
import sys
import tempfile
import time
from collections.abc import Callable
from itertools import pairwise
from pathlib import Path
from typing import Any

sys.path.insert(0, str(Path(__file__).parents[2]))
os.environ.setdefault("DJANGO_SETTINGS_MODULE", "planner.settings.test")

SIZES = (10, 100, 1_000, 10_000)
SOLVING = ("explode", "net and cut")
SAVING = ("compose", "store")
SHEETS = ("tags", "cutting")


class Watch:
    """Seconds by part, in the order in which they were spent."""

    def __init__(self) -> None:
        self.seconds: dict[str, float] = {}
        self.peaks: dict[str, float] = {}

    def time(self, name: str, work: Callable[[], Any]) -> Any:
        started = time.perf_counter()
        result = work()
        self.seconds[name] = time.perf_counter() - started
        self.peaks[name] = peak_mb()
        return result


def peak_mb() -> float:
    peak = resource.getrusage(resource.RUSAGE_SELF).ru_maxrss
    return peak / (1024 * 1024 if sys.platform == "darwin" else 1024)


def prepare(folder: str) -> None:
    import django
    from django.conf import settings

    settings.DATABASES["default"]["NAME"] = str(Path(folder) / "benchmark.sqlite3")
    django.setup()
    from django.core.management import call_command

    call_command("migrate", verbosity=0)


def measure(count: int) -> dict[str, Any]:
    from tests.data_builders.large_batch import make_large_batch

    batch = make_large_batch(count)
    watch = Watch()
    snapshot, plan = plan_and_store(batch, watch)
    look_at_pages(plan, watch)
    make_sheets(plan, watch)
    return {
        "bracelets": len(snapshot.bracelets),
        "pieces": snapshot.piece_count,
        "shades": len(snapshot.shades),
        "proven": sum(shade.status == "optimal" for shade in snapshot.shades),
        "cost": str(snapshot.cost),
        "seconds": watch.seconds,
        "peaks": watch.peaks,
    }


def plan_and_store(batch: Any, watch: Watch) -> tuple[Any, Any]:
    from django.db import transaction
    from django.utils import timezone

    from inventory.models import Workshop
    from planner.planning.compose import compose
    from planner.planning.demand import explode
    from planner.planning.netting import net
    from planner.plans.load import habits_of, load_orders, load_shelf, orders_stamp
    from planner.plans.store import store_snapshot

    workshop = Workshop.objects.get()
    lines = watch.time("load orders", lambda: list(batch.lines.for_grid()))
    orders = watch.time("read orders", lambda: load_orders(lines, workshop)).orders
    kinds, bracelets = watch.time("explode", lambda: explode(orders))
    shades = {shade for kind in kinds for _, shade in kind.kind.shades}
    shelf = watch.time("load shelf", lambda: load_shelf(shades, workshop))
    netted = watch.time(
        "net and cut",
        lambda: net(
            kinds,
            bracelets,
            shelf.threads,
            shelf.offers,
            keep_length_mm=workshop.keep_length_mm,
        ),
    )
    snapshot = watch.time(
        "compose",
        lambda: compose(
            batch_name=batch.name,
            market_date=None,
            plan_number=1,
            plan_date=timezone.localdate(),
            habits=habits_of(workshop),
            kinds=kinds,
            bracelets=bracelets,
            netted=netted,
            names=shelf.names,
            shelf=shelf.threads,
            offers=shelf.offers,
            problems=(),
            shelf_stamp=shelf.stamp,
            orders_stamp=orders_stamp(orders),
        ),
    )

    def store() -> Any:
        with transaction.atomic():
            return store_snapshot(snapshot, batch=batch, user=None)

    return snapshot, watch.time("store", store)


def look_at_pages(plan: Any, watch: Watch) -> None:
    from django.contrib.auth.models import User
    from django.test import Client
    from django.urls import reverse

    client = Client()
    client.force_login(
        User.objects.create(username="owner"), "django.contrib.auth.backends.ModelBackend"
    )
    shade = plan.shades.order_by("-piece_count")[0]
    pages = {
        "batch page": reverse("batch_detail", args=[plan.batch_id]),
        "plan page": reverse("plan_detail", args=[plan.pk]),
        "shade page": reverse("plan_shade", args=[plan.pk, shade.pk]),
        "bracelets page": reverse("plan_bracelets", args=[plan.pk]),
        "bracelet page": reverse("bracelet", args=[plan.bracelets.all()[0].pk]),
    }
    client.get(pages["batch page"])  # templates are read once
    for name, address in pages.items():
        answer = watch.time(name, lambda address=address: client.get(address))
        assert answer.status_code == 200, name


def make_sheets(plan: Any, watch: Watch) -> None:
    from planner.planning.sheet_files import SHEET_FILES
    from planner.plans.store import read_snapshot

    snapshot = watch.time("read back", lambda: read_snapshot(plan))
    for sheet, ending in SHEET_FILES:
        kind = SHEET_FILES[sheet, ending]
        watch.time(
            f"{sheet} {ending}",
            lambda kind=kind: sum(map(len, kind.parts(snapshot, "A4", "https://stall.example"))),
        )


def run_apart(count: int) -> dict[str, Any]:
    answer = subprocess.run(
        [sys.executable, __file__, "--one", str(count)], capture_output=True, text=True, check=False
    )
    if answer.returncode:
        raise SystemExit(answer.stderr)
    return dict(json.loads(answer.stdout))


def show(results: list[dict[str, Any]]) -> None:
    print(f"{'bracelets':16}" + "".join(f"{r['bracelets']:>12}" for r in results))
    for name in ("pieces", "shades", "proven", "cost"):
        print(f"{name:16}" + "".join(f"{r[name]:>12}" for r in results))
    for name in results[0]["seconds"]:
        print(f"{name:16}" + "".join(f"{r['seconds'][name]:10.3f} s" for r in results))
    solving = [sum(r["seconds"][name] for name in SOLVING) for r in results]
    print(f"{'explode, net':16}" + "".join(f"{spent:10.3f} s" for spent in solving))
    saving = [sum(r["seconds"][name] for name in SAVING) for r in results]
    print(f"{'compose, store':16}" + "".join(f"{spent:10.3f} s" for spent in saving))
    growth = [now / before for before, now in pairwise(solving)]
    print(f"{'growth of solving':28}" + "".join(f"{ratio:10.2f} x" for ratio in growth))
    for name, part in (("peak, stored", "store"), ("peak, in all", "tags pdf")):
        print(f"{name:16}" + "".join(f"{r['peaks'][part]:9.0f} MB" for r in results))
    rates = [r["bracelets"] / r["seconds"]["tags pdf"] for r in results]
    print(f"{'tags a second':16}" + "".join(f"{rate:12.0f}" for rate in rates))


def main() -> None:
    if sys.argv[1:2] == ["--one"]:
        with tempfile.TemporaryDirectory() as folder:
            prepare(folder)
            print(json.dumps(measure(int(sys.argv[2]))))
        return
    show([run_apart(count) for count in map(int, sys.argv[1:] or map(str, SIZES))])


if __name__ == "__main__":
    main()
