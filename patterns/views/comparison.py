"""Two patterns, or two versions of one, side by side."""

from collections import Counter
from dataclasses import dataclass
from typing import Any

from django.http import HttpRequest, HttpResponse
from django.shortcuts import render
from django.utils.safestring import SafeString, mark_safe
from django.views.decorators.http import require_safe

from inventory.page_helpers import habits
from patterns.actions import cut_rule
from patterns.analysis import analyse
from patterns.compare_form import CompareForm
from patterns.cut_lengths import EndingError, pieces_for
from patterns.difference_facts import Side, compare_facts
from patterns.differences import RowDifference, compare_rows, compare_slots, why_rows_differ
from patterns.forms import StrandChoiceForm
from patterns.geometry import LengthError
from patterns.knots import PatternError
from patterns.models import Pattern
from patterns.pattern_file import read_pattern
from patterns.pictures import band_picture
from patterns.techniques import Pattern as PatternCore
from patterns.techniques import strand_table
from patterns.views.analysis import NoBracelet, chosen_bracelet, colours_of

FEWEST_PICTURE_ROWS = 60
MOST_REPEAT_ROWS_DRAWN = 160


@dataclass(frozen=True)
class Compared:
    """One of the two as the page shows it."""

    pattern: Pattern
    version: int | None
    definition: PatternCore
    picture: SafeString

    @property
    def label(self) -> str:
        """Its name, and its version where an older one is meant."""
        return f"{self.pattern}, version {self.version}" if self.version else str(self.pattern)


@require_safe
def pattern_compare(request: HttpRequest) -> HttpResponse:
    form = CompareForm(request.GET)
    choice = StrandChoiceForm(request.GET, pattern=None)
    context: dict[str, object] = {"section": "patterns", "form": form, "choice": choice}
    if form.is_valid():
        try:
            context |= _compared(form.cleaned_data, choice)
        except PatternError as error:
            context["why_not"] = f"One of these versions cannot be read any more. {error}"
    return render(request, "patterns/pattern_compare.html", context)


def _compared(asked: dict[str, Any], choice: StrandChoiceForm) -> dict[str, object]:
    first = _side(asked["a"], asked.get("a_version"))
    second = _side(asked["b"], asked.get("b_version"))
    why_no_rows = why_rows_differ(first.definition, second.definition)
    rows = () if why_no_rows else compare_rows(first.definition, second.definition)
    slots = compare_slots(first.definition, second.definition)
    return {
        "first": first,
        "second": second,
        "why_no_rows": why_no_rows,
        "rows": rows,
        "place_word": "knot" if first.definition.technique == "diagonal" else "column",
        "counted": _count(rows),
        "slots": slots,
        "is_same": not why_no_rows and not slots and all(row.kind == "same" for row in rows),
        **_facts(first, second, choice),
    }


def _side(pattern: Pattern, version: int | None) -> Compared:
    number = version if version and version != pattern.version else None
    definition = pattern.definition
    if number is not None:
        definition = read_pattern(pattern.versions.get(number=number).text)
    colours = colours_of(pattern, pattern.colourways.first())
    rows = max(FEWEST_PICTURE_ROWS, min(len(definition.rows), MOST_REPEAT_ROWS_DRAWN))
    title = f"{definition.name}, the first {rows} rows, the start at the left"
    # The drawing escapes its title; everything else in it is numbers and colours.
    picture = mark_safe(band_picture(definition, rows, colours, title=title))
    return Compared(pattern, number, definition, picture)


def _count(rows: tuple[RowDifference, ...]) -> dict[str, int]:
    counts: Counter[str] = Counter()
    for row in rows:
        counts[row.kind.replace(" ", "_")] += row.count
    return counts


def _facts(first: Compared, second: Compared, choice: StrandChoiceForm) -> dict[str, object]:
    """Numbers of one bracelet; without one, rows and slots can still be compared."""
    try:
        chosen, length_mm = chosen_bracelet(choice)
        sides = [_core_side(side.definition, chosen, length_mm) for side in (first, second)]
    except (NoBracelet, LengthError, EndingError) as error:
        return {"why_no_facts": str(error)}
    return {"chosen": chosen, "facts": compare_facts(*sides)}


def _core_side(definition: PatternCore, chosen: dict[str, Any], length_mm: int) -> Side:
    rule, gauge = cut_rule(habits()), chosen["gauge"].as_core()
    table = strand_table(definition, length_mm, gauge, rule.join_tail_mm)
    pieces = pieces_for(table, chosen["ending"].as_core(), rule)
    return Side(definition, table, pieces, analyse(definition, table, pieces, gauge), gauge)


def others_to_compare(pattern: Pattern) -> list[tuple[int, str]]:
    """The patterns on the shelf of the library that another one can be compared with."""
    others = Pattern.objects.filter(archived_at=None).exclude(pk=pattern.pk)
    return list(others.values_list("pk", "name"))
