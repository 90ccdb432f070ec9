"""The thread of one shade on the shelf, and whether pieces can be cut from it."""

from collections.abc import Iterable, Sequence
from dataclasses import dataclass
from decimal import ROUND_DOWN, Decimal

from inventory.measures import format_length


def reckoned_length(length_mm: int, short_measure_share: Decimal) -> int:
    """Return what an unmeasured skein is trusted to hold.

    Parameters
    ----------
    length_mm : nominal length [mm].
    short_measure_share : share by which skeins may run short, 0 to 0.5.

    Returns
    -------
    Length [mm], rounded down.
    """
    exact = Decimal(length_mm) * (1 - short_measure_share)
    return int(exact.quantize(Decimal(1), rounding=ROUND_DOWN))


@dataclass(frozen=True)
class OnShelf:
    """The thread of one shade.

    Parameters
    ----------
    length_mm
        All of it, as it is marked [mm].
    whole_skeins
        How many whole skeins it has.
    lots
        For every lot, the lengths that its skeins and remnants are trusted to hold [mm].
    lot_names
        The names of the lots, in the same order.
    """

    length_mm: int = 0
    whole_skeins: int = 0
    lots: tuple[tuple[int, ...], ...] = ()
    lot_names: tuple[str, ...] = ()

    def holds(self, pieces_mm: Sequence[int]) -> bool:
        """Return whether all pieces [mm] can be cut from one lot.

        Notes
        -----
        Longest piece first, each from the shortest length that still holds it. What is found can
        be cut; in rare cases a cleverer plan finds room where this finds none.
        """
        return any(_can_cut(pieces_mm, lengths_mm) for lengths_mm in self.lots)

    def words(self, unit: str) -> str:
        """Say how much there is: "23 m on the shelf, 2 whole skeins", "none on the shelf".

        Parameters
        ----------
        unit
            The workshop's unit, "cm" or "in"; totals are in metres or yards.
        """
        if not self.length_mm:
            return "none on the shelf"
        if unit == "in":
            total = format_length(self.length_mm, "yd")
        else:
            total = format_length(_tenths_of_metres(self.length_mm), "cm")
        plural = "" if self.whole_skeins == 1 else "s"
        skeins = f", {self.whole_skeins} whole skein{plural}" if self.whole_skeins else ""
        return f"{total} on the shelf{skeins}"

    def lot_words(self) -> str:
        """Name the dye lots: "lot L1", "lots L1, L2"; nothing where there are none."""
        named = ", ".join(self.lot_names)
        return named and f"lot{'' if len(self.lot_names) == 1 else 's'} {named}"


def _tenths_of_metres(length_mm: int) -> int:
    """A total of metres is read at a glance; short ones stay exact."""
    return length_mm if length_mm <= 2_000 else length_mm - length_mm % 100


def _can_cut(pieces_mm: Iterable[int], lengths_mm: Sequence[int]) -> bool:
    left_mm = sorted(lengths_mm)
    for piece_mm in sorted(pieces_mm, reverse=True):
        place = next((at for at, length in enumerate(left_mm) if length >= piece_mm), None)
        if place is None:
            return False
        left_mm[place] -= piece_mm
        left_mm.sort()
    return True
