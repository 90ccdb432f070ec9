"""How long a plan of 500 bracelets takes, part by part; prints seconds and shares, asserts nothing.

Run with the project's own Python: tests/benchmarks/benchmark_plan.py [BRACELETS]
"""

import os
import sys
import tempfile
import time
from collections.abc import Callable
from pathlib import Path
from typing import Any

sys.path.insert(0, str(Path(__file__).parents[2]))
os.environ.setdefault("DJANGO_SETTINGS_MODULE", "planner.settings.test")


def prepare(folder: str) -> None:
    import django
    from django.conf import settings

    settings.DATABASES["default"]["NAME"] = str(Path(folder) / "benchmark.sqlite3")
    django.setup()
    from django.core.management import call_command

    call_command("migrate", verbosity=0)


def order_bracelets(count: int) -> Any:
    """The sample's market, its quantities scaled to `count` bracelets in all."""
    from planner.models import Batch
    from planner.sample.load import load_sample

    load_sample()
    batch = Batch.objects.get(name="Saturday's market")
    lines = list(batch.lines.all())
    each, more = divmod(count, len(lines))
    for number, line in enumerate(lines):
        line.quantity = max(1, each + (number < more))
        line.save()
    return batch


def timed(name: str, work: Callable[[], Any], seconds: dict[str, float]) -> Any:
    start = time.perf_counter()
    result = work()
    seconds[name] = time.perf_counter() - start
    return result


def measure(count: int) -> dict[str, float]:
    from django.db import transaction
    from django.utils import timezone

    from inventory.models import Workshop
    from planner.planning.demand import explode
    from planner.planning.netting import net
    from planner.plans.load import load_orders, load_shelf
    from planner.plans.store import read_snapshot, store_snapshot
    from planner.plans.work_out import work_out_plan

    batch = order_bracelets(count)
    workshop = Workshop.objects.get()
    seconds: dict[str, float] = {}
    lines = list(batch.lines.for_grid())
    orders = timed("load orders", lambda: load_orders(lines, workshop), seconds).orders
    kinds, bracelets = timed("explode", lambda: explode(orders), seconds)
    shades = {shade for kind in kinds for _, shade in kind.kind.shades}
    shelf = timed("load shelf", lambda: load_shelf(shades, workshop), seconds)
    timed("net and cut", lambda: net(kinds, bracelets, shelf.threads, shelf.offers), seconds)
    snapshot = timed(
        "the whole plan, unsaved",
        lambda: work_out_plan(
            lines=list(batch.lines.for_grid()),
            workshop=workshop,
            batch_name=batch.name,
            market_date=None,
            plan_number=1,
            today=timezone.localdate(),
        ),
        seconds,
    )

    def store() -> Any:
        with transaction.atomic():
            return store_snapshot(snapshot, batch=batch, user=None)

    plan = timed("store", store, seconds)
    timed("read back", lambda: read_snapshot(plan), seconds)
    print(f"{len(bracelets)} bracelets, {snapshot.piece_count} pieces, {len(shades)} shades")
    proven = sum(shade.status == "optimal" for shade in snapshot.shades)
    print(f"proven: {proven} of {len(snapshot.shades)} shades; {snapshot.cost} for thread")
    return seconds


def main() -> None:
    count = int(sys.argv[1]) if len(sys.argv) > 1 else 500
    with tempfile.TemporaryDirectory() as folder:
        prepare(folder)
        seconds = measure(count)
    answer = seconds["the whole plan, unsaved"] + seconds["store"]
    for name, spent in seconds.items():
        print(f"{name:26} {spent:7.3f} s  {spent / answer:6.1%} of plan and store")
    print(f"{'plan and store':26} {answer:7.3f} s")


if __name__ == "__main__":
    main()
