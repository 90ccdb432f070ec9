"""What could be made from the shelf without buying, and the answer."""

from collections.abc import Mapping
from dataclasses import dataclass, field
from decimal import Decimal

from planner.cutting.lot_problem import Lot, Opened
from planner.cutting.problem import (
    MAXIMUM_LENGTH_MM,
    CuttingError,
    Status,
    check_price,
    check_whole,
)

MOST_KINDS = 200
MOST_OF_A_KIND = 1_000


@dataclass(frozen=True)
class Makeable:
    """A kind of bracelet that might be made.

    Parameters
    ----------
    key
        The caller's name for it.
    pieces_mm
        For each shade the pieces of one bracelet [mm]; those of a shade come from one lot.
    value
        What one is worth: 1 to count bracelets, or a price.
    most
        How many are wanted at the most.
    """

    key: str
    pieces_mm: Mapping[str, tuple[int, ...]]
    value: Decimal
    most: int

    def __post_init__(self) -> None:
        check_whole(self.most, "the most of a kind", 0, MOST_OF_A_KIND)
        check_price(self.value)
        if not any(self.pieces_mm.values()):
            raise CuttingError("A bracelet without pieces could be made without end.")
        for pieces in self.pieces_mm.values():
            for length_mm in pieces:
                check_whole(length_mm, "length_mm of a piece", 1, MAXIMUM_LENGTH_MM)


@dataclass(frozen=True)
class ScrapsProblem:
    """What might be made, and the thread that lies there.

    Parameters
    ----------
    kinds
        The kinds.
    shelf
        For each shade its lots.
    """

    kinds: tuple[Makeable, ...]
    shelf: Mapping[str, tuple[Lot, ...]]

    def __post_init__(self) -> None:
        if len(self.kinds) > MOST_KINDS:
            raise CuttingError(f"Too many kinds of bracelets: at most {MOST_KINDS}.")
        keys = [kind.key for kind in self.kinds]
        if len(set(keys)) < len(keys):
            raise CuttingError("A kind of bracelet stands twice.")


@dataclass(frozen=True)
class ScrapsResult:
    """What is made, how it is cut, and what was proven.

    Parameters
    ----------
    status
        ``"optimal"`` when `value` equals `upper_bound`.
    value
        What the bracelets are worth together.
    upper_bound
        Nobody can make more of this thread.
    made
        Keys of kinds with how many of each, those that are made.
    opened
        For each shade the stock pieces that are cut; groups are named ``key#number``, numbered from
        1 within a kind.
    seconds
        How long it took [s].
    """

    status: Status
    value: Decimal
    upper_bound: Decimal
    made: tuple[tuple[str, int], ...]
    opened: Mapping[str, tuple[Opened, ...]] = field(default_factory=dict)
    seconds: float = 0.0

    @property
    def count(self) -> int:
        """How many bracelets."""
        return sum(count for _, count in self.made)
