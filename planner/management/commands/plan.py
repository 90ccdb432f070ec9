"""Plan an order list against the workshop, without saving anything."""

import json
from argparse import ArgumentParser
from pathlib import Path
from typing import Any

from django.utils import timezone

from inventory.measures import format_length
from inventory.models import Workshop
from inventory.shell import Error, OneLineCommand, read_file
from planner.models import OrderLine
from planner.order_list.limits import MAX_FILE_BYTES, OrderListError
from planner.order_list.lines import read_lines
from planner.order_list.results import GoodLine, Reading
from planner.order_list.table import read_table
from planner.orders.catalogue import how_to_read, load_catalogue
from planner.planning.sheet_files import SHEET_FILES
from planner.planning.snapshot import Snapshot, SnapshotShade
from planner.planning.watching import Watcher
from planner.planning.wording import is_worked_out, proof_of_plan, proof_of_shade
from planner.plans.shell_watch import ShellWatcher
from planner.plans.work_out import PlanError, work_out_plan


class Command(OneLineCommand):
    help = "Plan an order list (CSV or XLSX) against the workshop, without saving it."

    def add_arguments(self, parser: ArgumentParser) -> None:
        parser.add_argument("orders", metavar="ORDERS.csv")
        parser.add_argument("--sheets", metavar="DIR", help="write the sheets into this folder")
        parser.add_argument("--json", action="store_true", help="print JSON")

    def handle(self, *args: Any, **options: Any) -> None:
        path = Path(options["orders"])
        try:
            with ShellWatcher(self.stderr).listening() as watcher:
                snapshot = plan_file(path, watcher)
            written = write_sheets(snapshot, Path(options["sheets"])) if options["sheets"] else []
        except (OrderListError, PlanError) as reason:
            raise Error(str(reason)) from None
        except OSError as reason:
            raise Error(f"{reason.filename}: {reason.strerror}.") from None
        if options["json"]:
            self.stdout.write(json.dumps(as_json(snapshot)))
            return
        for sentence in as_sentences(snapshot):
            self.stdout.write(sentence)
        for name in written:
            self.stdout.write(f"wrote {name}")


def plan_file(path: Path, watcher: Watcher) -> Snapshot:
    workshop = Workshop.current()
    if workshop is None:
        raise PlanError("There is no workshop yet. Start one, or load the sample.")
    reading = read_lines(
        read_table(read_file(path, MAX_FILE_BYTES), path.name),
        load_catalogue(),
        **how_to_read(None),
    )
    good = _all_good(reading)
    return work_out_plan(
        lines=[_unsaved(line) for line in good],
        row_numbers=[line.number for line in good],
        workshop=workshop,
        batch_name=path.stem,
        market_date=None,
        plan_number=0,
        today=timezone.localdate(),
        strict=True,
        watcher=watcher,
    )


def _all_good(reading: Reading) -> tuple[GoodLine, ...]:
    if reading.bad:
        first = reading.bad[0].problems[0].message
        more = f" ({len(reading.bad)} rows are wrong in all.)" if len(reading.bad) > 1 else ""
        raise OrderListError(first + more)
    return reading.good


def _unsaved(line: GoodLine) -> OrderLine:
    return OrderLine(
        position=line.number,
        for_whom=line.for_whom,
        pattern_id=line.pattern_key,
        colourway_id=line.colourway_key,
        size_id=line.size_key,
        ending_id=line.ending_key,
        quantity=line.quantity,
        due_date=line.due_date,
        note=line.note,
        distinct_lengths=line.distinct_lengths,
        matched_set=line.matched_set,
    )


def write_sheets(snapshot: Snapshot, folder: Path) -> list[Path]:
    folder.mkdir(parents=True, exist_ok=True)
    written = []
    for (sheet, ending), kind in SHEET_FILES.items():
        target = folder / f"{sheet}.{ending}"
        with target.open("wb") as file:
            file.writelines(kind.parts(snapshot, snapshot.habits.paper, ""))
        written.append(target)
    return written


def as_json(snapshot: Snapshot) -> dict[str, Any]:
    return {
        "bracelets": len(snapshot.bracelets),
        "pieces": snapshot.piece_count,
        "shades": [_shade_json(shade) for shade in snapshot.shades],
        "cost": f"{snapshot.cost:.2f}",
    }


def _shade_json(shade: SnapshotShade) -> dict[str, Any]:
    return {
        "shade": shade.code,
        "need_mm": shade.need_mm,
        "shelf_mm": shade.shelf_mm,
        "usable_mm": shade.usable_mm,
        "buy": [
            {
                "length_mm": item.length_mm,
                "reckoned_mm": item.reckoned_mm,
                "count": item.count,
                "cost": f"{item.cost:.2f}",
            }
            for item in shade.purchases
        ],
        "cost": f"{shade.cost:.2f}",
        "lower_bound": f"{shade.lower_bound:.2f}",
        "bought_lower_bound": shade.bought_lower_bound,
        "status": shade.status,
        "message": shade.proof.message,
        "left_mm": shade.left_mm,
        "unplaced_tags": list(shade.unplaced),
    }


def as_sentences(snapshot: Snapshot) -> list[str]:
    unit, currency = snapshot.habits.length_unit, snapshot.habits.currency
    rows = [
        f"{shade.code} {shade.name}: need {format_length(shade.need_mm, unit)}, "
        f"shelf {format_length(shade.shelf_mm, unit)}, " + _answer(shade, unit, currency)
        for shade in snapshot.shades
    ]
    total = (
        f"{len(snapshot.bracelets)} bracelets, {snapshot.piece_count} pieces, "
        f"{snapshot.cost:.2f} {currency}. {proof_of_plan(snapshot, snapshot.shades)}"
    )
    return [*rows, total]


def _answer(shade: SnapshotShade, unit: str, currency: str) -> str:
    if not is_worked_out(shade):
        return f"{proof_of_shade(shade)}. {shade.proof.message}"
    return (
        f"buy {shade.bought} for {shade.cost:.2f} {currency} ({proof_of_shade(shade)}), "
        f"left {format_length(shade.left_mm, unit)}"
    )
