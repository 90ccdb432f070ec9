"""Plan order lines against the workshop as it stands, without saving anything."""

from collections.abc import Sequence
from datetime import date

from inventory.models import Workshop
from planner.models import OrderLine
from planner.planning.compose import compose
from planner.planning.demand import explode
from planner.planning.netting import net
from planner.planning.snapshot import Snapshot
from planner.plans.load import habits_of, load_orders, load_shelf, orders_stamp


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
) -> Snapshot:
    """Lines that cannot be planned are named in the snapshot; `strict` refuses them instead."""
    if not lines:
        raise PlanError("There are no orders to plan yet. Add some first.")
    loaded = load_orders(lines, workshop)
    if strict and loaded.problems:
        raise PlanError(" ".join(loaded.problems[:3]))
    if not loaded.orders:
        raise PlanError("None of the orders can be planned. " + " ".join(loaded.problems[:3]))
    kinds, bracelets = explode(loaded.orders)
    shade_ids = {shade for kind in kinds for _, shade in kind.kind.shades}
    shelf = load_shelf(shade_ids, workshop)
    netted = net(kinds, bracelets, shelf.threads, shelf.offers)
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
