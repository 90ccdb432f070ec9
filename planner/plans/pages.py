"""What the pages of a plan show: the answer, and how each number was made."""

from collections import Counter
from typing import Any

from django.db.models import Count, Max
from django.utils import timezone

from inventory.models import PutUp, Workshop
from patterns.geometry import Gauge, StrandLength
from patterns.models import Pattern
from patterns.pattern_file import read_pattern
from patterns.pictures import band_picture
from patterns.working import knotted_working
from planner.models import Plan, PlanBracelet, PlanKind, PlanShade, PlanStock
from planner.planning.choices import read_choice
from planner.planning.wording import (
    bought_words,
    cost_of_lots,
    is_worked_out,
    proof_of_plan,
    proof_of_shade,
)
from planner.plans.cut_pages import cuts_of_shade
from planner.plans.load import load_orders, load_shelf, orders_stamp
from planner.plans.posted_choice import choice_to_post
from planner.plans.store import read_habits, read_kind, read_proof


def plan_page(plan: Plan) -> dict[str, Any]:
    shades = list(plan.shades.prefetch_related("purchases"))
    shelf_changed, orders_changed = what_changed(plan, shades)
    return {
        **plan_context(plan),
        "shades": [
            {
                "row": shade,
                "proof": proof_of_shade(shade),
                "lots_cost": cost_of_lots(shade, read_proof(shade.proof)),
                "buys": list(shade.purchases.all()),
                "is_worked_out": is_worked_out(shade),
            }
            for shade in shades
        ],
        "missing_shades": [shade for shade in shades if not is_worked_out(shade)],
        "bought_shades": [shade for shade in shades if shade.bought],
        "bought": sum(shade.bought for shade in shades),
        "bought_words": bought_words(
            sum(shade.bought for shade in shades),
            [item.put_up_name for shade in shades for item in shade.purchases.all()],
        ),
        "proof": proof_of_plan(plan, shades),
        "added_mm": sum(
            read_kind(row).added_mm * row.bracelet_count
            for row in plan.kinds.annotate(bracelet_count=Count("bracelets"))
        ),
        "choice_again": choice_to_post(read_choice(plan.choice.get("choice", {}))),
        "unplaced": [
            (shade, too_long_mm(shade))
            for shade in shades
            if shade.unplaced and is_worked_out(shade)
        ],
        "shelf_changed": shelf_changed,
        "orders_changed": orders_changed,
        "newer_plan": plan.newer(),
        "spoken_for": spoken_for(plan, shades),
        "other_paper": "letter" if plan.workshop["paper"] == "A4" else "a4",
        "changed_patterns": changed_patterns(plan),
        "other_plans": plan.batch.plans.exclude(pk=plan.pk)[:10],
    }


def too_long_mm(shade: PlanShade) -> int:
    """The longest piece without thread, where no skein that can be bought is as long; else 0 [mm]."""
    longest = shade.pieces.filter(stock=None).aggregate(longest=Max("cut_mm"))["longest"] or 0
    sold = PutUp.objects.aggregate(longest=Max("length_mm"))["longest"] or 0
    return longest if longest > sold else 0


def changed_patterns(plan: Plan) -> list[dict[str, Any]]:
    """Patterns of the plan that were changed since, and not changed back.

    Plans of the first release know none.
    """
    then = {
        kind.pattern_id_then: kind
        for kind in plan.kinds.order_by("-pk")
        if kind.pattern_id_then is not None
    }
    patterns = Pattern.objects.filter(pk__in=then)
    return [
        {
            "name": then[pattern.pk].pattern_name,
            "version": then[pattern.pk].pattern_version,
            "pattern": pattern,
        }
        for pattern in patterns
        if has_changed(then[pattern.pk], pattern)
    ]


def has_changed(kind: PlanKind, pattern: Pattern) -> bool:
    return pattern.version != kind.pattern_version and pattern.text != kind.pattern_text


def plan_context(plan: Plan) -> dict[str, Any]:
    """What every page of a plan needs; unit and currency are those of the snapshot."""
    habits = read_habits(plan)
    return {
        "plan": plan,
        "habits": habits,
        "length_unit": habits.length_unit,
        "currency": habits.currency,
        "section": "orders",
        "today": timezone.localdate(),
    }


def what_changed(plan: Plan, shades: list[PlanShade]) -> tuple[bool, bool]:
    """Tell whether the shelf (or what can be bought), and the orders, differ from the plan's."""
    workshop = Workshop.current()
    if workshop is None:
        return True, True
    shelf = load_shelf([shade.shade_id_then for shade in shades], workshop)
    orders = load_orders(list(plan.batch.lines.for_grid()), workshop).orders
    return shelf.stamp != plan.shelf_stamp, orders_stamp(orders) != plan.orders_stamp


def spoken_for(plan: Plan, shades: list[PlanShade]) -> list[dict[str, Any]]:
    """Name the plans of markets ahead that cut from thread this plan cuts from too."""
    numbers = PlanStock.objects.filter(shade__in=shades, shelf_piece_number__isnull=False)
    others = (
        PlanStock.objects.filter(
            shelf_piece_number__in=numbers.values("shelf_piece_number"),
            shade__plan__in=Plan.objects.latest_ahead(timezone.localdate()),
        )
        .exclude(shade__plan__batch=plan.batch_id)
        .order_by("shade__plan", "shelf_piece_number")
        .values_list("shade__plan", "shade__plan__number", "shade__plan__batch_name")
        .annotate(count=Count("shelf_piece_number", distinct=True))
        .order_by("shade__plan")
    )
    return [
        {"pk": pk, "number": number, "batch": batch, "count": count}
        for pk, number, batch, count in others
    ]


def shade_page(
    shade: PlanShade, by: str | None = None, page_wanted: str | None = None
) -> dict[str, Any]:
    """Sums over all of a shade; cuts and bars of one page of its skeins or lengths."""
    stock = list(shade.stock.all())
    opened = {row.shelf_piece_number for row in stock}
    return {
        **plan_context(shade.plan),
        "shade": shade,
        "proof": proof_of_shade(shade),
        "lots_cost": cost_of_lots(shade, read_proof(shade.proof)),
        "is_worked_out": is_worked_out(shade),
        "lengths": _need_by_length(shade),
        "shelf": [{**thread, "opened": thread["number"] in opened} for thread in shade.shelf],
        "purchases": shade.purchases.all(),
        "lacking_mm": max(0, shade.need_mm - shade.usable_mm),
        **cuts_of_shade(shade, stock, by, page_wanted),
        "back_mm": sum(row.left_mm for row in stock if row.goes_back),
        "waste_mm": sum(row.left_mm for row in stock if not row.goes_back),
        "new_mm": sum(item.reckoned_mm * item.count for item in shade.purchases.all()),
        **_spare(shade, stock),
        "untouched_mm": sum(
            thread["reckoned_mm"] for thread in shade.shelf if thread["number"] not in opened
        ),
    }


def _spare(shade: PlanShade, stock: list[PlanStock]) -> dict[str, int]:
    """What is bought and not opened: a pack holds more than the plan cuts from."""
    opened_mm = sum(row.reckoned_mm for row in stock if row.is_new)
    bought_mm = sum(item.reckoned_mm * item.count for item in shade.purchases.all())
    return {
        "spare": shade.bought - sum(row.is_new for row in stock),
        "spare_mm": bought_mm - opened_mm,
    }


def _need_by_length(shade: PlanShade) -> list[dict[str, int]]:
    counts = Counter(shade.pieces.values_list("cut_mm", flat=True))
    return [
        {"cut_mm": cut_mm, "count": count, "sum_mm": cut_mm * count}
        for cut_mm, count in sorted(counts.items(), reverse=True)
    ]


def bracelet_page(bracelet: PlanBracelet) -> dict[str, Any]:
    kind = read_kind(bracelet.kind)
    making = kind.making
    gauge = Gauge(**making["gauge"])
    strands = [StrandLength(**strand) for strand in making["strands"]]
    workings = {strand.strand: (strand.label, knotted_working(strand, gauge)) for strand in strands}
    pieces = [
        {
            "piece": kind.pieces[row.index],
            "shade": row.shade,
            "stock": row.stock,
            "is_worked_out": is_worked_out(row.shade),
            "workings": [workings[number] for number in kind.pieces[row.index].strands],
            "ends_mm": making["ends_mm"][row.index],
            "needed_mm": kind.pieces[row.index].cut_mm - kind.pieces[row.index].added_mm,
        }
        for row in bracelet.pieces.all()
    ]
    pattern_now = Pattern.objects.filter(pk=bracelet.kind.pattern_id_then or 0).first()
    return {
        **plan_context(bracelet.plan),
        "newer_plan": bracelet.plan.newer(),
        "pattern_now": pattern_now,
        "has_changed": pattern_now is not None and has_changed(bracelet.kind, pattern_now),
        "bracelet": bracelet,
        "kind": kind,
        "pieces": pieces,
        "safety_share": making["safety_share"],
        "rounding_step_mm": making["rounding_step_mm"],
        "drawing": band_picture(
            read_pattern(kind.pattern_text),
            kind.rows,
            kind.colours,
            title=f"{kind.pattern_name} as it looks when tied",
        ),
    }
