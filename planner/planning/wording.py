"""The sentences that say how good a plan is, the same on the page, the sheet and the shell."""

from collections.abc import Iterable
from dataclasses import dataclass
from decimal import Decimal
from typing import Protocol

WITHOUT_PLAN = {"stopped": "stopped before it was its turn", "failed": "an error came up"}


class ShadeResult(Protocol):
    """What a sentence needs to know of one shade, saved or not."""

    @property
    def status(self) -> str: ...

    @property
    def solving_seconds(self) -> float: ...

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


class LotsProof(Protocol):
    """What a sentence needs to know of the same shade with all thread as one lot."""

    @property
    def cost_without_lots(self) -> Decimal | None: ...

    @property
    def bought_without_lots(self) -> int | None: ...


@dataclass(frozen=True)
class LotsCost:
    """What is bought more because lots are kept apart, and what would do if they were not."""

    put_ups: int
    cost: Decimal
    cost_without: Decimal


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


def is_worked_out(shade: ShadeResult) -> bool:
    """Tell whether there is a plan for the shade at all, good or not."""
    return shade.status not in WITHOUT_PLAN


def proof_of_shade(shade: ShadeResult) -> str:
    """Say what is proven of the purchase of one shade."""
    if not is_worked_out(shade):
        return f"not worked out: {WITHOUT_PLAN[shade.status]}"
    if shade.unplaced:
        return "not enough thread, and nothing to buy that would do"
    if shade.bought == 0:
        return "the shelf has enough"
    fewest = shade.bought == shade.bought_lower_bound
    if shade.cost > shade.lower_bound:
        return (
            f"fewer is impossible, but cheaper might be found; {_not_settled(shade)}"
            if fewest
            else f"at least {shade.bought_lower_bound}; {_not_settled(shade)}"
        )
    if not fewest:
        return "cheaper is impossible"
    if shade.bought == 1:
        return "the shelf alone is not enough"
    return "fewer is impossible"


def cost_of_lots(shade: ShadeResult, proof: LotsProof) -> LotsCost | None:
    """Tell what keeping dye lots apart costs; None where it costs nothing, or nobody knows."""
    cheaper = proof.cost_without_lots
    if not is_worked_out(shade) or shade.unplaced or cheaper is None or cheaper >= shade.cost:
        return None
    extra = max(0, shade.bought - (proof.bought_without_lots or 0))
    return LotsCost(extra, shade.cost - cheaper, cheaper)


def _not_settled(shade: ShadeResult) -> str:
    """Plans of the first release do not know how long they took."""
    if not shade.solving_seconds:
        return "not settled"
    return f"not settled in {max(1, round(shade.solving_seconds))} s"


def proof_of_plan(plan: PlanResult, shades: Iterable[ShadeResult]) -> str:
    """Say what is proven of the whole purchase."""
    results = list(shades)
    missing = sum(not is_worked_out(shade) for shade in results)
    if missing:
        return f"This is not the whole purchase: {not_worked_out(missing, len(results))}"
    if any(shade.unplaced for shade in results):
        return "Some bracelets have no thread yet: see below."
    if not any(shade.bought for shade in results):
        return "The shelf has enough for everything."
    if plan.cost == plan.lower_bound:
        return "Cheaper is impossible."
    return "Not proven to be the cheapest."


def not_worked_out(missing: int, total: int) -> str:
    """Say how many shades have no plan."""
    if missing == total:
        return "no shade was worked out." if total > 1 else "its one shade was not worked out."
    return f"{missing} of {total} shades {'was' if missing == 1 else 'were'} not worked out."
