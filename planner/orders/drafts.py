"""Lists that were pasted or uploaded and wait for the maker's word."""

from collections.abc import Mapping
from dataclasses import replace
from typing import Any

from planner.models import OrderDraft
from planner.order_list.catalogue import Catalogue
from planner.order_list.columns import DEFAULT_ORDER
from planner.order_list.lines import read_rows
from planner.order_list.results import BadLine, GoodLine, Problem, Reading
from planner.orders.catalogue import HowToRead
from planner.orders.grid import CELL_NAME, GridRow, grid_row

DraftRow = dict[str, Any]


def rows_of_reading(reading: Reading) -> list[DraftRow]:
    """Keep the text of every row, in the order of the list, so that it can be read again."""
    lines: list[GoodLine | BadLine] = sorted(
        [*reading.good, *reading.bad], key=lambda line: line.number
    )
    return [draft_row(line) for line in lines]


def draft_row(line: GoodLine | BadLine) -> DraftRow:
    return {
        "number": line.number,
        "cells": dict(zip(DEFAULT_ORDER, line.cells, strict=True)),
        "problems": _problems_of(line),
    }


def _problems_of(line: GoodLine | BadLine) -> list[tuple[str | None, str]]:
    """Kept because the cells alone may not show them again: too many cells, a lost formula."""
    if isinstance(line, GoodLine):
        return []
    return [(problem.field, problem.message) for problem in line.problems]


def read_draft(draft: OrderDraft, catalogue: Catalogue, how: HowToRead) -> Reading:
    """Read the draft's rows against what can be ordered now."""
    rows = [(row["number"], row["cells"]) for row in draft.rows]
    reading = read_rows(rows, catalogue, **how)
    noted = {row["number"]: row["problems"] for row in draft.rows if row.get("problems")}
    if not noted:
        return reading
    held_back = [
        _held_back(line, noted[line.number]) for line in reading.good if line.number in noted
    ]
    bad = sorted([*reading.bad, *held_back], key=lambda line: line.number)
    good = [line for line in reading.good if line.number not in noted]
    return replace(reading, good=tuple(good), bad=tuple(bad))


def _held_back(line: GoodLine, noted: list[tuple[Any, str]]) -> BadLine:
    problems = tuple(Problem(field, message) for field, message in noted)
    return BadLine(line.number, line.cells, problems)


def bad_grid_rows(reading: Reading) -> list[GridRow]:
    return [
        grid_row(bad.number, None, dict(zip(DEFAULT_ORDER, bad.cells, strict=True)), bad)
        for bad in reading.bad
    ]


def corrected(draft: OrderDraft, posted: Mapping[str, str]) -> list[DraftRow]:
    """Return the draft's rows with the cells that the maker typed or took from a suggestion."""
    use = posted.get("use", "").split("|", 2)
    rows: list[DraftRow] = []
    typed: dict[int, dict[str, str]] = {}
    for name, text in posted.items():
        match = CELL_NAME.match(name)
        if match and match[2] in DEFAULT_ORDER:
            typed.setdefault(int(match[1]), {})[match[2]] = text
    for row in draft.rows:
        changes = dict(typed.get(row["number"], {}))
        if len(use) == 3 and use[0] == str(row["number"]) and use[1] in DEFAULT_ORDER:
            changes[use[1]] = use[2]
        rows.append(_with_changes(row, changes))
    removed = {
        int(match[1])
        for name, text in posted.items()
        if (match := CELL_NAME.match(name)) and match[2] == "gone" and text == "yes"
    }
    return [row for row in rows if row["number"] not in removed]


def _with_changes(row: DraftRow, texts: Mapping[str, str]) -> DraftRow:
    """A noted problem stays until its own cell changes; one of the whole row, until any does."""
    changed = {name for name, text in texts.items() if text != row["cells"].get(name)}
    return {
        "number": row["number"],
        "cells": {**row["cells"], **texts},
        "problems": [
            [field, message]
            for field, message in row.get("problems", [])
            if (field not in changed if field else not changed)
        ],
    }


def resolved_rows(reading: Reading, catalogue: Catalogue) -> list[tuple[int, tuple[str, ...]]]:
    """Show what each good row was understood as, not only what was typed."""
    patterns = {pattern.key: pattern.name for pattern in catalogue.patterns}
    colourways = {c.key: c.name for pattern in catalogue.patterns for c in pattern.colourways}
    sizes = {size.key: size.name for size in catalogue.sizes}
    endings = {ending.key: ending.name for ending in catalogue.endings}
    return [
        (
            line.number,
            (
                line.for_whom,
                patterns[line.pattern_key],
                colourways[line.colourway_key],
                sizes[line.size_key],
                endings[line.ending_key],
                str(line.quantity),
                line.due_date.isoformat() if line.due_date else "",
                line.note,
                str(line.distinct_lengths or ""),
                line.matched_set,
            ),
        )
        for line in reading.good
    ]
