"""Plan order lines against the workshop as it stands, without saving anything."""

from collections.abc import Sequence
from datetime import date

from inventory.models import Workshop
from planner.models import OrderLine
from planner.planning.compose import compose
from planner.planning.demand import Bracelet, ExplodedKind, Order, explode
from planner.planning.netting import NettedShade, net
from planner.planning.snapshot import Snapshot
from planner.planning.watching import Watcher
from planner.planning.wording import WITHOUT_PLAN
from planner.plans.load import habits_of, load_orders, load_shelf, orders_stamp

MOST_BRACELETS = 20_000
# A plan is stored in one transaction, and whoever saves meanwhile waits for it: 90,000 pieces take
# about 4 s on SQLite. Whoever waits gives up after 20 s.
MOST_PIECES = 200_000


class PlanError(ValueError):
    """Nothing can be planned; the text says why."""


def work_out_plan(
    *,
    lines: Sequence[OrderLine],
    workshop: Workshop,
    batch_name: str,
    market_date: date | None,
    plan_number: int,
    today: date,
    strict: bool = False,
    row_numbers: Sequence[int] = (),
    watcher: Watcher | None = None,
) -> Snapshot:
    """Lines that cannot be planned are named in the snapshot; `strict` refuses them instead."""
    if not lines:
        raise PlanError("There are no orders to plan yet. Add some first.")
    loaded = load_orders(lines, workshop, row_numbers=row_numbers)
    if strict and loaded.problems:
        raise PlanError(" ".join(loaded.problems[:3]))
    if not loaded.orders:
        raise PlanError("None of the orders can be planned. " + " ".join(loaded.problems[:3]))
    _check_bracelets(loaded.orders)
    kinds, bracelets = explode(loaded.orders)
    _check_pieces(kinds, bracelets)
    shade_ids = {shade for kind in kinds for _, shade in kind.kind.shades}
    shelf = load_shelf(shade_ids, workshop)
    netted = net(
        kinds,
        bracelets,
        shelf.threads,
        shelf.offers,
        keep_length_mm=workshop.keep_length_mm,
        watcher=watcher,
    )
    _check_worked_out(netted)
    return compose(
        batch_name=batch_name,
        market_date=market_date,
        plan_number=plan_number,
        plan_date=today,
        habits=habits_of(workshop),
        kinds=kinds,
        bracelets=bracelets,
        netted=netted,
        names=shelf.names,
        shelf=shelf.threads,
        offers=shelf.offers,
        problems=loaded.problems,
        shelf_stamp=shelf.stamp,
        orders_stamp=orders_stamp(loaded.orders),
    )


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
