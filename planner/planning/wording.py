"""The sentences that say how good a plan is, the same on the page, the sheet and the shell."""

from planner.planning.snapshot import Snapshot, SnapshotShade


def skeins(count: int) -> str:
    return "1 skein" if count == 1 else f"{count} skeins"


def proof_of_shade(shade: SnapshotShade) -> str:
    """Say what is proven of the purchase of one shade; silent where nothing is bought."""
    if shade.unplaced:
        return "not enough thread, and nothing to buy it from"
    if shade.bought == 0:
        return "the shelf has enough"
    if shade.bought == shade.bought_lower_bound:
        return f"fewer than {shade.bought} is impossible"
    if shade.cost == shade.lower_bound:
        return "cheaper is impossible"
    return f"at least {shade.bought_lower_bound}; not proven to be the fewest"


def proof_of_plan(snapshot: Snapshot) -> str:
    """Say what is proven of the whole purchase."""
    if any(shade.unplaced for shade in snapshot.shades):
        return "Some bracelets have no thread yet: see below."
    if snapshot.cost == 0 and not any(shade.bought for shade in snapshot.shades):
        return "The shelf has enough for everything."
    if snapshot.cost == snapshot.lower_bound:
        return "Cheaper is impossible."
    return "Not proven to be the cheapest: the open shades say how far off it can be at most."
