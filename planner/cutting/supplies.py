"""What is bought, as stock to open."""

from collections.abc import Sequence

from planner.cutting.filling import Supply
from planner.cutting.packs import SoldAs


def bought_supplies(sold: Sequence[SoldAs], counts: Sequence[int]) -> list[Supply]:
    """Give what is bought as stock to open.

    Parameters
    ----------
    sold
        The put-ups.
    counts
        How many single ones of each.

    Returns
    -------
    list of Supply
        In their order, those bought.
    """
    return [
        Supply(item.length_mm, item.size, count, index)
        for index, (item, count) in enumerate(zip(sold, counts, strict=True))
        if count
    ]
