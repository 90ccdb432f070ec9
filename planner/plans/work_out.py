"""Plan order lines against the workshop as it stands, without saving anything."""

from collections.abc import Sequence
from dataclasses import dataclass, replace
from datetime import date

from inventory.models import Workshop
from planner.models import OrderLine
from planner.planning.choices import (
    Choice,
    ChoiceError,
    offers_for,
    threads_for,
    with_substitutes,
)
from planner.planning.compose import compose
from planner.planning.demand import Bracelet, ExplodedKind, Order, explode
from planner.planning.netting import NettedShade, ShelfThread, ThreadOffer, net
from planner.planning.snapshot import Snapshot
from planner.planning.watching import Watcher
from planner.planning.wording import WITHOUT_PLAN
from planner.plans.choose import choose
from planner.plans.load import LoadedShelf, habits_of, load_orders, load_shelf, orders_stamp

MOST_BRACELETS = 20_000
# A plan is stored in one transaction, and whoever saves meanwhile waits for it: 90,000 pieces take
# about 4 s on SQLite. Whoever waits gives up after 20 s.
MOST_PIECES = 200_000


class PlanError(ValueError):
    """Nothing can be planned; the text says why."""


@dataclass(frozen=True)
class Prepared:
    """Orders exploded, and the thread that a choice may use; nothing is cut yet."""

    kinds: tuple[ExplodedKind, ...]
    bracelets: tuple[Bracelet, ...]
    shelf: LoadedShelf
    threads: tuple[ShelfThread, ...]
    offers: tuple[ThreadOffer, ...]
    problems: tuple[str, ...]
    orders_stamp: str
    chosen_stamp: str
    words: tuple[str, ...]

    def net(
        self, workshop: Workshop, *, time_limit_s: float = 10.0, watcher: Watcher | None = None
    ) -> tuple[NettedShade, ...]:
        """Cut every shade; PlanError where none could be worked out."""
        netted = net(
            self.kinds,
            self.bracelets,
            self.threads,
            self.offers,
            time_limit_s=time_limit_s,
            keep_length_mm=workshop.keep_length_mm,
            watcher=watcher,
        )
        _check_worked_out(netted)
        return netted


def prepare(
    *,
    lines: Sequence[OrderLine],
    workshop: Workshop,
    choice: Choice | None = None,
    strict: bool = False,
    row_numbers: Sequence[int] = (),
) -> Prepared:
    """Lines that cannot be planned are named in `problems`; `strict` refuses them instead.

    `orders_stamp` and the shelf's stay those of orders and shelf as they are, whatever is chosen;
    `chosen_stamp` tells when the orders as they would be made change.
    """
    if not lines:
        raise PlanError("There are no orders to plan yet. Add some first.")
    choice = choice or Choice()
    try:
        chosen = choose(lines, choice)
    except ChoiceError as reason:
        raise PlanError(str(reason)) from None
    loaded = load_orders(chosen.lines, workshop, row_numbers=row_numbers)
    if strict and loaded.problems:
        raise PlanError(" ".join(loaded.problems[:3]))
    if not loaded.orders:
        raise PlanError("None of the orders can be planned. " + " ".join(loaded.problems[:3]))
    _check_bracelets(loaded.orders)
    as_ordered = loaded.orders if choice.is_plain else load_orders(lines, workshop).orders
    chosen_orders = with_substitutes(loaded.orders, choice)
    kinds, bracelets = explode(chosen_orders)
    _check_pieces(kinds, bracelets)
    shelf = load_shelf({shade for kind in kinds for _, shade in kind.kind.shades}, workshop)
    return Prepared(
        kinds=kinds,
        bracelets=bracelets,
        shelf=shelf,
        threads=threads_for(shelf.threads, choice),
        offers=offers_for(shelf.offers, choice),
        problems=loaded.problems,
        orders_stamp=orders_stamp(as_ordered),
        chosen_stamp=orders_stamp(chosen_orders),
        words=chosen.words,
    )


def work_out_plan(
    *,
    lines: Sequence[OrderLine],
    workshop: Workshop,
    batch_name: str,
    market_date: date | None,
    plan_number: int,
    today: date,
    choice: Choice | None = None,
    strict: bool = False,
    row_numbers: Sequence[int] = (),
    watcher: Watcher | None = None,
) -> Snapshot:
    """Work out a plan without saving it; PlanError says why there is none."""
    prepared = prepare(
        lines=lines, workshop=workshop, choice=choice, strict=strict, row_numbers=row_numbers
    )
    snapshot = compose(
        batch_name=batch_name,
        market_date=market_date,
        plan_number=plan_number,
        plan_date=today,
        habits=habits_of(workshop),
        kinds=prepared.kinds,
        bracelets=prepared.bracelets,
        netted=prepared.net(workshop, watcher=watcher),
        names=prepared.shelf.names,
        shelf=prepared.shelf.threads,
        offers=prepared.shelf.offers,
        problems=prepared.problems,
        shelf_stamp=prepared.shelf.stamp,
        orders_stamp=prepared.orders_stamp,
    )
    if choice is None or choice.is_plain:
        return snapshot
    return replace(snapshot, choice={"choice": choice.as_json(), "words": list(prepared.words)})


def _check_bracelets(orders: Sequence[Order]) -> None:
    """Before they are told apart: a list of five thousand rows may ask for fifty million."""
    bracelets = sum(order.quantity for order in orders)
    if bracelets > MOST_BRACELETS:
        raise PlanError(
            f"{bracelets} bracelets are more than a plan takes: {MOST_BRACELETS} at most. "
            "Split the batch, or look for a quantity that was mistyped."
        )


def _check_pieces(kinds: Sequence[ExplodedKind], bracelets: Sequence[Bracelet]) -> None:
    pieces = sum(len(kinds[bracelet.kind_index].pieces) for bracelet in bracelets)
    if pieces > MOST_PIECES:
        raise PlanError(
            f"{len(bracelets)} bracelets with {pieces} pieces are more than a plan takes: "
            f"{MOST_PIECES} at most. Split the batch."
        )


def _check_worked_out(netted: Sequence[NettedShade]) -> None:
    """A plan without a single shade is none."""
    if any(one.result.status not in WITHOUT_PLAN for one in netted):
        return
    if any(one.result.status == "failed" for one in netted):
        first = next(one.result.message for one in netted if one.result.status == "failed")
        raise PlanError(f"No shade of these orders could be worked out. {first}")
    raise PlanError("Stopped before the first shade was done: there is nothing to save yet.")
