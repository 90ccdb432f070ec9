"""What lies at the bench: skeins laid together, and what they are called there."""

from collections.abc import Hashable, Sequence
from itertools import groupby
from typing import Protocol

from planner.sheets.cut_rows import number_ranges


class ToCut(Protocol):
    """What has to be known of a skein or remnant, saved or not."""

    @property
    def source(self) -> str: ...

    @property
    def is_new(self) -> bool: ...

    @property
    def lot_name(self) -> str: ...


def lots_at_the_bench(stock: Sequence[ToCut], put_up_names: Sequence[str]) -> list[Hashable]:
    """Tell which skeins may be laid together: those with equal entries.

    Parameters
    ----------
    stock
        The skeins, in the order of the cuts.
    put_up_names
        What each purchase of their shade is called.

    Returns
    -------
    list[Hashable]
        An entry a skein. New thread is of one lot where one supplier sells the put-up; which of
        several a skein comes from is not kept, so there each lies alone.
    """
    lots: list[Hashable] = []
    for position, skein in enumerate(stock):
        name = _put_up_of(skein)
        if not skein.is_new:
            lots.append(("shelf", skein.lot_name))
        else:
            lots.append(("new", name, position if put_up_names.count(name) > 1 else None))
    return lots


def names_of(stock: Sequence[ToCut]) -> str:
    """Name skeins that follow each other: "new thread 1 to 3", "pieces 49, 48".

    Parameters
    ----------
    stock
        The skeins, each with the source "new thread 1: ..." or "piece 49: ...".

    Returns
    -------
    str
        The words before the colon, numbers of the same words together.
    """
    words = []
    parts = [skein.source.partition(":")[0].rpartition(" ") for skein in stock]
    for name, same in groupby(parts, lambda part: part[0]):
        numbers = [part[2] for part in same]
        if all(number.isdigit() for number in numbers):
            named = f"{name}s" if name == "piece" and len(numbers) > 1 else name
            words.append(f"{named} {number_ranges([int(each) for each in numbers], ' to ')}")
        else:
            words += [f"{name} {each}".strip() for each in numbers]
    return " and ".join(words)


def source_of(stock: Sequence[ToCut]) -> str:
    """Name skeins of one lot with what they are: "new thread 1 to 3: 8 m skein, lot 8a"."""
    kinds = list(dict.fromkeys(_put_up_of(skein) for skein in stock))
    words = f"{names_of(stock)}: {', '.join(kinds)}" if any(kinds) else names_of(stock)
    lot_name = stock[0].lot_name
    return f"{words}, lot {lot_name}" if lot_name else words


def _put_up_of(skein: ToCut) -> str:
    return skein.source.partition(": ")[2]
