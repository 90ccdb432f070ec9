"""What can be made from the shelf: choices and rows of the database in, an answer for a page out."""

from collections import defaultdict
from collections.abc import Iterable, Sequence
from dataclasses import dataclass
from decimal import Decimal

from inventory.models import Shade, Workshop
from patterns.models import Colourway, Ending, Size
from planner.cutting import (
    Lot,
    LotStock,
    Makeable,
    Opened,
    ScrapsProblem,
    ScrapsResult,
    make_from_scraps,
)
from planner.models import OrderLine
from planner.planning.demand import explode_kind
from planner.planning.netting import ShelfThread, pieces_by_shade
from planner.plans.load import load_orders, load_shelf


@dataclass(frozen=True)
class Wish:
    """A kind that might be made, so many at the most."""

    colourway: Colourway
    size: Size
    ending: Ending
    most: int
    value: Decimal


@dataclass(frozen=True)
class MadeRow:
    """So many of one kind that come out of the shelf."""

    wish: Wish
    count: int

    @property
    def value(self) -> Decimal:
        return self.wish.value * self.count

    @property
    def as_ordered(self) -> str:
        """As the page sends it back to have it ordered."""
        wish = self.wish
        return f"{wish.colourway.pk}.{wish.size.pk}.{wish.ending.pk}.{self.count}"


@dataclass(frozen=True)
class ScrapRow:
    """A piece of the shelf, and what is cut from it."""

    thread: ShelfThread
    cuts: tuple[tuple[int, int], ...]
    left_mm: int


@dataclass(frozen=True)
class ShadeUse:
    """What is taken of one shade."""

    shade: Shade
    used_mm: int
    rows: tuple[ScrapRow, ...]


@dataclass(frozen=True)
class FromScraps:
    """The answer: what is made, of which thread, and which kinds cannot be worked out."""

    result: ScrapsResult
    made: tuple[MadeRow, ...]
    shades: tuple[ShadeUse, ...]
    problems: tuple[str, ...]


def work_out_from_scraps(
    *,
    wishes: Sequence[Wish],
    workshop: Workshop,
    leave_whole: bool,
    time_limit_s: float = 10.0,
) -> FromScraps:
    """Nothing is saved. Kinds that cannot be worked out are named in `problems`."""
    lines = [
        OrderLine(
            pattern=wish.colourway.pattern,
            colourway=wish.colourway,
            size=wish.size,
            ending=wish.ending,
            quantity=1,
        )
        for wish in wishes
    ]
    loaded = load_orders(lines, workshop, row_numbers=range(len(lines)))
    shades = {shade for order in loaded.orders for _, shade in order.kind.shades}
    shelf = load_shelf(shades, workshop)
    threads = [one for one in shelf.threads if not (leave_whole and one.kind == "whole")]
    kinds = []
    for order in loaded.orders:
        wish = wishes[order.line_number]
        exploded = explode_kind(order.kind)
        pieces = {
            str(shade): tuple(exploded.pieces[index].cut_mm for index in indexes)
            for shade, indexes in pieces_by_shade(exploded).items()
        }
        kinds.append(Makeable(str(order.line_number), pieces, wish.value, wish.most))
    result = make_from_scraps(
        ScrapsProblem(tuple(kinds), _lots(threads)),
        time_limit_s=time_limit_s,
        keep_length_mm=workshop.keep_length_mm,
    )
    return FromScraps(
        result=result,
        made=tuple(MadeRow(wishes[int(key)], count) for key, count in result.made),
        shades=_shade_uses(result, {str(one.number): one for one in threads}),
        problems=tuple(_named(problem, wishes) for problem in loaded.problems),
    )


def _named(problem: str, wishes: Sequence[Wish]) -> str:
    """Problems of orders begin with their row, which this page does not show."""
    row, _, rest = problem.removeprefix("Row ").partition(": ")
    wish = wishes[int(row)]
    return f"{wish.colourway.pattern} in {wish.colourway}, {wish.size}: {rest}"


def _lots(threads: Iterable[ShelfThread]) -> dict[str, tuple[Lot, ...]]:
    stock: dict[str, dict[int, list[LotStock]]] = defaultdict(lambda: defaultdict(list))
    for one in threads:
        stock[str(one.shade)][one.lot].append(LotStock(str(one.number), one.reckoned_mm))
    return {
        shade: tuple(Lot(str(lot), tuple(pieces)) for lot, pieces in lots.items())
        for shade, lots in stock.items()
    }


def _shade_uses(result: ScrapsResult, threads: dict[str, ShelfThread]) -> tuple[ShadeUse, ...]:
    rows = Shade.objects.in_bulk([int(shade) for shade in result.opened])
    uses = []
    for key, opened in result.opened.items():
        used_mm = sum(piece.length_mm for one in opened for piece in one.pieces)
        scraps = tuple(_scrap_row(one, threads) for one in opened)
        uses.append(ShadeUse(rows[int(key)], used_mm, scraps))
    return tuple(sorted(uses, key=lambda use: use.shade.code.casefold()))


def _scrap_row(one: Opened, threads: dict[str, ShelfThread]) -> ScrapRow:
    counts: dict[int, int] = {}
    for piece in one.pieces:
        counts[piece.length_mm] = counts.get(piece.length_mm, 0) + 1
    cuts = tuple(sorted(counts.items(), reverse=True))
    return ScrapRow(threads[str(one.stock_key)], cuts, one.left_mm)
