"""How much thread every strand of a pattern file takes."""

import json
from argparse import ArgumentParser
from dataclasses import replace
from fractions import Fraction
from pathlib import Path
from typing import Any

from inventory.measures import MeasureError, parse_decimal, parse_length
from inventory.shell import Error, OneLineCommand, read_file
from patterns.geometry import Gauge, GaugeError, LengthError, StrandLength, StrandTable
from patterns.grid_lengths import DEFAULT_JOIN_TAIL_MM
from patterns.knots import Finish, PatternError
from patterns.pattern_file import MAX_FILE_BYTES, read_pattern
from patterns.techniques import Pattern, strand_table


class Command(OneLineCommand):
    help = "Counts the knots of every strand of a pattern file and gives the thread it takes."

    def add_arguments(self, parser: ArgumentParser) -> None:
        parser.add_argument("file", metavar="FILE.toml")
        parser.add_argument(
            "--length", required=True, help="knotted length, such as 150mm, 15cm or 6in"
        )
        parser.add_argument("--thread", help="thread diameter in the knot (default 0.9mm)")
        parser.add_argument("--loop-ratio", help="loop size in thread diameters (default 1.5)")
        parser.add_argument(
            "--idle-run", help="thread of an idle row in thread diameters (default 1.414)"
        )
        parser.add_argument(
            "--join-tail", help="tail at each end of a run of a grid pattern (default 50mm)"
        )
        parser.add_argument(
            "--finish",
            choices=[finish.value for finish in Finish],
            help="end with whole repeats or not (default: as the file says)",
        )
        parser.add_argument("--json", action="store_true", help="print JSON")

    def handle(self, *args: Any, **options: Any) -> None:
        try:
            pattern = _with_finish(read_pattern(_read_text(Path(options["file"]))), options)
            length_mm = float(_millimetres("--length", options["length"]))
            table = strand_table(pattern, length_mm, _gauge(options), _join_tail_mm(options))
        except (PatternError, GaugeError, LengthError) as error:
            raise Error(str(error)) from error
        self.stdout.write(_as_json(table) if options["json"] else _as_table(table))


def _read_text(path: Path) -> str:
    shown = repr(str(path)[:200])
    content = read_file(path, MAX_FILE_BYTES)
    if len(content) > MAX_FILE_BYTES:
        raise Error(f"{shown} is larger than {MAX_FILE_BYTES // 1024} KB; no pattern is.")
    try:
        return content.decode("utf-8")
    except UnicodeDecodeError as error:
        raise Error(f"{shown} is not a text file in UTF-8.") from error


def _with_finish(pattern: Pattern, options: dict[str, Any]) -> Pattern:
    if options["finish"] is None:
        return pattern
    return replace(pattern, finish=Finish(options["finish"]))


def _gauge(options: dict[str, Any]) -> Gauge:
    given = {}
    if options["thread"] is not None:
        given["thread_diameter_mm"] = float(_millimetres("--thread", options["thread"]))
    for option in ("loop_ratio", "idle_run"):
        if options[option] is not None:
            given[option] = _number("--" + option.replace("_", "-"), options[option])
    return Gauge(**given)


def _join_tail_mm(options: dict[str, Any]) -> float:
    if options["join_tail"] is None:
        return DEFAULT_JOIN_TAIL_MM
    return float(_millimetres("--join-tail", options["join_tail"]))


def _millimetres(option: str, text: str) -> Fraction:
    try:
        return parse_length(text, "mm")
    except MeasureError as error:
        raise Error(f"{option}: {error}") from error


def _number(option: str, text: str) -> float:
    name = option.strip("-").replace("-", " ")
    try:
        return float(parse_decimal(text, name=name, minimum=0, maximum=10))
    except MeasureError as error:
        raise Error(f"{option}: {error}") from error


def _as_json(table: StrandTable) -> str:
    strands = [_values(strand) for strand in table.strands]
    return json.dumps({"rows": table.rows, "strands": strands})


def _values(strand: StrandLength) -> dict[str, object]:
    values: dict[str, object] = {
        "strand": strand.strand,
        "slot": strand.slot,
        "tied": strand.tied,
        "base": strand.base,
        "idle": strand.idle,
        "knotted_mm": round(strand.knotted_mm, 1),
    }
    if strand.role != "strand":
        values |= {"role": strand.role, "passed": strand.passed, "turned": strand.turned}
    if strand.role == "run":
        values |= {"first_row": strand.first_row, "last_row": strand.last_row}
    return values


def _as_table(table: StrandTable) -> str:
    is_grid = any(strand.role != "strand" for strand in table.strands)
    header = "strand  slot  tied  base  idle  knotted mm"
    lines = [f"{table.rows} rows", header + ("  passed  turned  what it is" if is_grid else "")]
    lines += [_line(strand) for strand in table.strands]
    return "\n".join(lines)


def _line(strand: StrandLength) -> str:
    line = (
        f"{strand.strand:6}  {strand.slot:>4}  {strand.tied:4}  {strand.base:4}"
        f"  {strand.idle:4}  {strand.knotted_mm:10.1f}"
    )
    if strand.role == "strand":
        return line
    return f"{line}  {strand.passed:6}  {strand.turned:6}  {strand.label}"
