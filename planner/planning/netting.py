"""Net what is needed against the shelf, shade by shade and as pieces, and cut the rest new."""

import logging
import time
from collections import defaultdict
from collections.abc import Callable, Iterable, Mapping
from dataclasses import dataclass
from decimal import Decimal
from functools import partial
from typing import Literal

from planner.cutting import CuttingError, Group, Lot, LotResult, LotStock, Offer, solve_with_lots
from planner.cutting.bounds import usable_lengths
from planner.planning.demand import Bracelet, ExplodedKind
from planner.planning.sets import Together, sets_of
from planner.planning.watching import Unwatched, Watcher

logger = logging.getLogger(__name__)

STOPPED = "It was stopped before this shade was worked out."
FAILED = "An error in the program kept this shade from being worked out; the log says which."


@dataclass(frozen=True)
class ShelfThread:
    """One piece of thread on the shelf; `reckoned_mm` is what it is trusted to hold."""

    number: int
    shade: int
    lot: int
    lot_name: str
    kind: str
    length_mm: int
    reckoned_mm: int


@dataclass(frozen=True)
class ThreadOffer:
    """A put-up that can be bought, `price` a pack; `shades` is None where it comes in every shade."""

    key: int
    supplier_name: str
    name: str
    length_mm: int
    reckoned_mm: int
    price: Decimal
    shades: frozenset[int] | None = None
    pack_size: int = 1
    minimum_packs: int = 1
    pack_step: int = 1

    def serves(self, shade: int) -> bool:
        return self.shades is None or shade in self.shades


@dataclass(frozen=True)
class NettedShade:
    """One shade's need, its thread on the shelf and the cut plan that meets it."""

    shade: int
    piece_count: int
    need_mm: int
    shelf_mm: int
    usable_mm: int
    left_mm: int
    result: LotResult


def group_key(bracelet_number: int) -> str:
    return str(bracelet_number)


def net(
    kinds: tuple[ExplodedKind, ...],
    bracelets: tuple[Bracelet, ...],
    shelf: Iterable[ShelfThread],
    offers: tuple[ThreadOffer, ...],
    *,
    time_limit_s: float = 10.0,
    seed: int = 0,
    keep_length_mm: int = 300,
    watcher: Watcher | None = None,
) -> tuple[NettedShade, ...]:
    """Meet the need of every shade from the shelf first, then from new thread.

    Parameters
    ----------
    kinds, bracelets : as `explode` returns them.
    shelf : thread on the shelf, of any shade.
    offers : put-ups that can be bought.
    time_limit_s : for all shades together [s]; what a shade does not need, later ones may use.
    seed : for the solver.
    keep_length_mm : what is left of an opened piece is waste when shorter than this [mm].
    watcher : hears which shade is begun, and may ask to stop.

    Returns
    -------
    One entry a shade needed, by first use. All pieces of one shade in one bracelet, or
    in one matched set, come from one dye lot. A shade on which the solver raises is "failed" and one that a stop came
    before is "stopped": both without a plan, and the other shades as if they were alone. The
    shade that a stop comes upon has the best plan found until then.
    """
    watcher = watcher or Unwatched()
    solve = partial(
        solve_with_lots,
        seed=seed,
        keep_length_mm=keep_length_mm,
        stop=watcher.stop_wanted,
    )
    groups = groups_by_shade(kinds, bracelets)
    shelf_by_shade: dict[int, list[ShelfThread]] = defaultdict(list)
    for thread in shelf:
        shelf_by_shade[thread.shade].append(thread)
    deadline = time.monotonic() + time_limit_s
    netted = []
    sets = sets_of(bracelets)
    for position, (shade, wanted) in enumerate(groups.items(), start=1):
        own = shelf_by_shade[shade]
        if watcher.stop_wanted():
            netted.append(
                _netted(shade, wanted, own, _without_plan("stopped", wanted, STOPPED), offers)
            )
            continue
        watcher.shade_begins(position, len(groups), shade)
        left_s = max(0.0, deadline - time.monotonic())
        share_s = left_s / (len(groups) - position + 1)
        together = Together.of(wanted, sets)
        result = together.apart(
            _solved(shade, together.groups, own, offers, partial(solve, time_limit_s=share_s))
        )
        netted.append(_netted(shade, wanted, own, result, offers))
    return tuple(netted)


def pieces_by_shade(kind: ExplodedKind) -> Mapping[int, tuple[int, ...]]:
    """Return for every shade the indexes of the kind's pieces cut from it."""
    indexes: dict[int, list[int]] = defaultdict(list)
    shade_by_slot = kind.shade_by_slot
    for index, piece in enumerate(kind.pieces):
        indexes[shade_by_slot[piece.slot]].append(index)
    return {shade: tuple(found) for shade, found in indexes.items()}


def groups_by_shade(
    kinds: tuple[ExplodedKind, ...], bracelets: tuple[Bracelet, ...]
) -> dict[int, list[Group]]:
    """Return per shade one group of piece lengths for every bracelet that uses it."""
    lengths_of_kind = [
        {
            shade: tuple(kind.pieces[index].cut_mm for index in indexes)
            for shade, indexes in pieces_by_shade(kind).items()
        }
        for kind in kinds
    ]
    groups: dict[int, list[Group]] = defaultdict(list)
    for bracelet in bracelets:
        for shade, lengths in lengths_of_kind[bracelet.kind_index].items():
            groups[shade].append(Group(group_key(bracelet.number), lengths))
    return groups


def _solved(
    shade: int,
    groups: list[Group],
    shelf: list[ShelfThread],
    offers: tuple[ThreadOffer, ...],
    solve: Callable[..., LotResult],
) -> LotResult:
    """Work out one shade; whatever goes wrong in it is told in its result."""
    started = time.monotonic()
    try:
        return solve(
            tuple(groups),
            _lots(shelf),
            tuple(
                Offer(
                    str(offer.key),
                    offer.supplier_name,
                    offer.reckoned_mm,
                    offer.price,
                    offer.pack_size,
                    offer.minimum_packs,
                    offer.pack_step,
                )
                for offer in offers
                if offer.serves(shade)
            ),
        )
    except CuttingError as reason:
        message = str(reason)
    except Exception:
        logger.exception("Shade %s could not be worked out.", shade)
        message = FAILED
    return _without_plan("failed", groups, message, time.monotonic() - started)


def _without_plan(
    status: Literal["stopped", "failed"],
    groups: list[Group],
    message: str,
    seconds: float = 0.0,
) -> LotResult:
    return LotResult(
        status=status,
        cost=Decimal(0),
        bought=(),
        lower_bound=Decimal(0),
        bought_lower_bound=0,
        opened=(),
        unplaced=tuple(group.key for group in groups),
        seconds=seconds,
        message=message,
    )


def _netted(
    shade: int,
    groups: list[Group],
    shelf: list[ShelfThread],
    result: LotResult,
    offers: tuple[ThreadOffer, ...],
) -> NettedShade:
    need_mm = sum(sum(group.pieces_mm) for group in groups)
    shelf_mm = sum(thread.reckoned_mm for thread in shelf)
    cut_mm = sum(piece.length_mm for opened in result.opened for piece in opened.pieces)
    length_of = {str(offer.key): offer.reckoned_mm for offer in offers}
    new_mm = sum(length_of[key] * count for key, count in result.bought)
    return NettedShade(
        shade=shade,
        piece_count=sum(len(group.pieces_mm) for group in groups),
        need_mm=need_mm,
        shelf_mm=shelf_mm,
        usable_mm=min(need_mm, usable_on_shelf(groups, shelf)),
        left_mm=shelf_mm + new_mm - cut_mm,
        result=result,
    )


def usable_on_shelf(groups: list[Group], shelf: list[ShelfThread]) -> int:
    """Return how much of the shelf the needed pieces could fill at the very most [mm].

    Each piece of thread is looked at alone, so the sum is an upper bound: a remnant shorter
    than every needed piece counts nothing, however many metres there are of its like.
    """
    wanted: dict[int, int] = defaultdict(int)
    for group in groups:
        for length_mm in group.pieces_mm:
            wanted[length_mm] += 1
    usable = usable_lengths(wanted, [thread.reckoned_mm for thread in shelf])
    return sum(usable[thread.reckoned_mm] for thread in shelf)


def _lots(shelf: list[ShelfThread]) -> tuple[Lot, ...]:
    stock: dict[int, list[LotStock]] = defaultdict(list)
    for thread in shelf:
        stock[thread.lot].append(LotStock(str(thread.number), thread.reckoned_mm))
    return tuple(Lot(str(lot), tuple(pieces)) for lot, pieces in stock.items())
