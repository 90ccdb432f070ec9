"""What put-ups cost in an integer programme, where they come in packs."""

from planner.cutting.highs import INFINITY, Programme
from planner.cutting.packs import SoldAs


def add_put_up(programme: Programme, item: SoldAs, opened: int, money: int, unit: int) -> int:
    """Add the columns that buy a put-up.

    Parameters
    ----------
    programme
        What they are added to.
    item
        The put-up.
    opened
        A row that holds how many are opened less how many are bought, at most 0.
    money
        The row of all that is spent [units].
    unit
        Smallest units of money in a unit of that row.

    Returns
    -------
    int
        The column of the steps of packs that are bought.
    """
    price = item.bundle_price // unit
    entries: dict[int, float] = {opened: -item.bundle, money: price}
    if item.fewest_bundles > 1:
        fewest, none = programme.row(0, INFINITY), programme.row(0, INFINITY)
        entries |= {fewest: 1, none: -1}
        most = max(item.fewest_bundles, programme.row_uppers[money] // max(1, price))
        programme.column({fewest: -item.fewest_bundles, none: most}, upper=1)
    return programme.column(entries, cost=price)
