"""What the page of a pattern shows to read it by: chart, rows in words, links to the card."""

from collections.abc import Mapping
from typing import Any
from urllib.parse import urlencode

from django.utils.safestring import mark_safe

from inventory.page_helpers import habits
from patterns.actions import cut_rule
from patterns.chart_pictures import chart_picture, rows_on_a_page
from patterns.grid import GridPattern
from patterns.grid_lengths import Run, find_runs
from patterns.knots import Finish
from patterns.reading import again_words, chart_range, repeat_words, rows_in_turn, written_rows
from patterns.techniques import Pattern as PatternCore

CHOICES = ("size", "ending", "gauge", "colourway")


def how_to_read(definition: PatternCore, context: Mapping[str, Any]) -> dict[str, Any]:
    """Of the band that was worked out; where there is none, of one repeat alone."""
    answer, chosen = context.get("answer"), context.get("chosen", {})
    is_once = definition.finish is Finish.CENTRED
    alone = len(definition.rows) if is_once else rows_in_turn(definition)
    rows = answer.rows if answer else alone
    colours = {slot: shade.colour for slot, shade in context.get("shades", {}).items()}
    runs = _runs(definition, rows, chosen) if answer else ()
    charted, shown = chart_range(definition, rows), rows_on_a_page(definition, rows)
    return {
        # The drawing escapes the pattern's name; all else in it is numbers and colours.
        "chart": mark_safe(chart_picture(definition, rows, colours, runs)),
        "is_grid": isinstance(definition, GridPattern),
        "rows_not_charted": len(charted) - len(shown),
        "last_row_charted": shown[-1],
        "repeat_sentences": repeat_words(definition, rows) if answer else (),
        "again": again_words(definition, rows),
        "written_rows": written_rows(definition, rows),
        "card_query": _card_query(chosen) if answer else "",
    }


def _runs(definition: PatternCore, rows: int, chosen: Any) -> tuple[Run, ...]:
    if not isinstance(definition, GridPattern):
        return ()
    join_tail_mm = cut_rule(habits()).join_tail_mm
    return find_runs(definition, rows, chosen["gauge"].as_core(), join_tail_mm)


def _card_query(chosen: Mapping[str, Any]) -> str:
    keys = {name: chosen[name].pk if chosen[name] else "" for name in CHOICES}
    return urlencode(keys | {"lengths": chosen["lengths"] or ""})
