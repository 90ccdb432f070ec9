"""The cuts of a shade as its page shows them: skein by skein, or length by length."""

from collections import defaultdict
from typing import Any

from django.core.paginator import Paginator

from inventory.measures import format_number
from planner.cutting.stacks import (
    Setting,
    Skein,
    Stack,
    Turns,
    board_settings,
    stacks,
    stop_settings,
)
from planner.models import PlanShade, PlanStock
from planner.planning.bench import lots_at_the_bench, names_of, source_of
from planner.planning.sheet_contents import piece_on_sheet
from planner.plans.bars import stock_bar
from planner.plans.store import read_kind
from planner.sheets.contents import SheetCut, StackCut, StockCut
from planner.sheets.cut_rows import number_ranges, rows_of_stack

# A hank of 40 m would press the skeins beside it flat: what is longer has a scale of its own.
LONGEST_SCALE_MM = 10_000
STACKS_A_PAGE = 50
SETTINGS_A_PAGE = 20
# A longer list of tags is told as ranges, without a link each.
MOST_LINKS = 6


def cuts_of_shade(
    shade: PlanShade, stock: list[PlanStock], by: str | None, page_wanted: str | None
) -> dict[str, Any]:
    """The page's part about the cuts; only what one page of it shows is looked up piece by piece."""
    skeins = _skeins(shade, stock)
    stacked, settings = stacks(skeins), board_settings(skeins)
    bench = _Bench(shade, stock)
    shown: dict[str, Any]
    if by == "length":
        some_settings = Paginator(settings, SETTINGS_A_PAGE).get_page(page_wanted)
        shown = {"page": some_settings, "settings": bench.settings(list(some_settings))}
    else:
        some_stacks = Paginator(stacked, STACKS_A_PAGE).get_page(page_wanted)
        shown = {"page": some_stacks, "stacked": bench.stacks(list(some_stacks))}
    return {
        **shown,
        "by": "length" if by == "length" else "skein",
        "scale_mm": bench.scale_mm,
        "stop_settings": stop_settings(stacked),
        "board_settings": len(settings),
        "together": sum(stack.count > 1 for stack in stacked),
    }


def _skeins(shade: PlanShade, stock: list[PlanStock]) -> list[Skein]:
    lengths: dict[int | None, list[int]] = defaultdict(list)
    pieces = shade.pieces.filter(stock__isnull=False).order_by("stock_id", "cut_position")
    for stock_id, cut_mm in pieces.values_list("stock_id", "cut_mm"):
        lengths[stock_id].append(cut_mm)
    lots = lots_at_the_bench(stock, [item.put_up_name for item in shade.purchases.all()])
    return [Skein(lot, tuple(lengths[row.pk])) for lot, row in zip(lots, stock, strict=True)]


class _Bench:
    """The skeins of a shade in the order of the cuts."""

    def __init__(self, shade: PlanShade, stock: list[PlanStock]) -> None:
        self.shade = shade
        self.stock = stock
        self.bracelet_key: dict[int, int] = {}
        longest_mm = max((row.reckoned_mm for row in stock), default=1)
        self.scale_mm = min(LONGEST_SCALE_MM, longest_mm)

    def stacks(self, stacked: list[Stack]) -> list[dict[str, Any]]:
        rows = [self.stock[stack.first : stack.first + stack.count] for stack in stacked]
        cuts = self._cuts([row.pk for own in rows for row in own])
        return [self._stack(stack, own, cuts) for stack, own in zip(stacked, rows, strict=True)]

    def _stack(
        self, stack: Stack, own: list[PlanStock], cuts: dict[int, list[SheetCut]]
    ) -> dict[str, Any]:
        one = max(own, key=lambda row: row.reckoned_mm)
        rests: dict[tuple[int, bool], list[PlanStock]] = defaultdict(list)
        for row in own:
            rests[row.left_mm, row.goes_back].append(row)
        return {
            "source": source_of(own),
            "count": stack.count,
            "lengths": stack.lengths,
            "reckoned": sorted({row.reckoned_mm for row in own}),
            "pieces": sum(len(cuts[row.pk]) for row in own),
            "rests": [
                {"left_mm": left_mm, "goes_back": goes_back, "names": names_of(rows)}
                for (left_mm, goes_back), rows in rests.items()
            ],
            "bar": self._bar(one, cuts[one.pk], stack.count),
            "rows": self._rows([cuts[row.pk] for row in own]),
        }

    def _bar(self, row: PlanStock, cuts: list[SheetCut], count: int) -> str:
        """Of one skein with its tags; of several the lengths, for their tags differ."""
        unit = self.shade.plan.workshop["length_unit"]
        return stock_bar(
            title=f"{row.source}: {len(cuts)} cuts",
            colour=self.shade.colour,
            length_mm=row.reckoned_mm,
            scale_mm=self.scale_mm,
            segments=[
                (format_number(cut.cut_mm, unit) if count > 1 else str(cut.tag_number), cut.cut_mm)
                for cut in cuts
            ],
        )

    def settings(self, settings: list[Setting]) -> list[dict[str, Any]]:
        lengths = [setting.length_mm for setting in settings]
        cuts = self._cuts([row.pk for row in self.stock], lengths)
        return [
            {
                "length_mm": setting.length_mm,
                "pieces": setting.pieces,
                "turns": [self._turns(setting, turns, cuts) for turns in setting.turns],
            }
            for setting in settings
        ]

    def _turns(
        self, setting: Setting, turns: Turns, cuts: dict[int, list[SheetCut]]
    ) -> dict[str, Any]:
        own = self.stock[turns.first : turns.last + 1]
        of_length = [
            [cut for cut in cuts[row.pk] if cut.cut_mm == setting.length_mm] for row in own
        ]
        return {
            "count": turns.count,
            "skeins": len(own),
            "names": names_of(own),
            "lot_name": own[0].lot_name,
            "rows": self._rows(of_length),
        }

    def _cuts(
        self, stock_ids: list[int], lengths_mm: list[int] | None = None
    ) -> dict[int, list[SheetCut]]:
        pieces_of = {row.pk: read_kind(row).pieces for row in self.shade.plan.kinds.all()}
        pieces = self.shade.pieces.filter(stock__in=stock_ids)
        if lengths_mm is not None:
            pieces = pieces.filter(cut_mm__in=lengths_mm)
        cuts: dict[int, list[SheetCut]] = defaultdict(list)
        for stock_id, index, bracelet_key, tag_number, kind in pieces.order_by(
            "stock_id", "cut_position"
        ).values_list("stock_id", "index", "bracelet_id", "bracelet__number", "bracelet__kind_id"):
            cuts[stock_id].append(piece_on_sheet(tag_number, pieces_of[kind][index]))
            self.bracelet_key[tag_number] = bracelet_key
        return cuts

    def _rows(self, cut: list[list[SheetCut]]) -> list[dict[str, Any]]:
        skeins = tuple(StockCut("", False, 0, tuple(cuts), 0, False) for cuts in cut)
        return [
            {
                "cut_mm": row.cut_mm,
                "pieces": row.pieces,
                "tags": number_ranges(row.tags),
                "links": [(tag, self.bracelet_key[tag]) for tag in row.tags][: MOST_LINKS + 1],
                "has_links": len(row.tags) <= MOST_LINKS,
                "strands": _strands_in_words(row.strands),
                "fold_mm": row.fold_mm,
            }
            for row in rows_of_stack(StackCut("", skeins))
        ]


def _strands_in_words(strands: str) -> str:
    """Numbers alone are strands; "sliding piece" or "run 2 of B" says so itself."""
    if not strands[:1].isdigit():
        return strands
    return f"strands {strands}" if "," in strands or "+" in strands else f"strand {strands}"
