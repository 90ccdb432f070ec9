"""The sentences that say how good a plan is, the same on the page, the sheet and the shell."""

from collections.abc import Iterable
from decimal import Decimal
from typing import Protocol


class ShadeResult(Protocol):
    """What a sentence needs to know of one shade, saved or not."""

    @property
    def bought(self) -> int: ...

    @property
    def bought_lower_bound(self) -> int: ...

    @property
    def cost(self) -> Decimal: ...

    @property
    def lower_bound(self) -> Decimal: ...

    @property
    def unplaced(self) -> Iterable[int]: ...


class PlanResult(Protocol):
    """What a sentence needs to know of a plan."""

    @property
    def cost(self) -> Decimal: ...

    @property
    def lower_bound(self) -> Decimal: ...


def bought_words(count: int, put_up_names: Iterable[str]) -> str:
    """Speak of skeins where all that is bought is called so; hanks and reels are put-ups too."""
    word = "skein" if all("skein" in name.casefold() for name in put_up_names) else "put-up"
    return f"1 {word}" if count == 1 else f"{count} {word}s"


def proof_of_shade(shade: ShadeResult) -> str:
    """Say what is proven of the purchase of one shade."""
    if shade.unplaced:
        return "not enough thread, and nothing to buy that would do"
    if shade.bought == 0:
        return "the shelf has enough"
    fewest = shade.bought == shade.bought_lower_bound
    if shade.cost > shade.lower_bound:
        return (
            "fewer is impossible, but cheaper might be found"
            if fewest
            else f"at least {shade.bought_lower_bound}; not proven to be the fewest"
        )
    if not fewest:
        return "cheaper is impossible"
    if shade.bought == 1:
        return "the shelf alone is not enough"
    return f"fewer than {shade.bought} is impossible"


def proof_of_plan(plan: PlanResult, shades: Iterable[ShadeResult]) -> str:
    """Say what is proven of the whole purchase."""
    results = list(shades)
    if any(shade.unplaced for shade in results):
        return "Some bracelets have no thread yet: see below."
    if not any(shade.bought for shade in results):
        return "The shelf has enough for everything."
    if plan.cost == plan.lower_bound:
        return "Cheaper is impossible."
    return "Not proven to be the cheapest."
