"""Rows of the database as the planning core's data, and stamps that tell when they change."""

import hashlib
import json
from collections.abc import Iterable, Sequence
from dataclasses import asdict, dataclass
from itertools import count

from django.db.models import prefetch_related_objects

from inventory.models import PutUp, Shade, ShelfPiece, Workshop
from inventory.on_shelf import reckoned_length
from patterns.actions import cut_rule
from patterns.geometry import Gauge as GaugeCore
from patterns.geometry import LengthError, rows_for
from patterns.grid import GridPattern
from patterns.models import Gauge, KnottedLength
from patterns.techniques import Pattern
from planner.models import OrderLine
from planner.planning.demand import Kind, Order, ShadeName
from planner.planning.netting import ShelfThread, ThreadOffer
from planner.planning.snapshot import Habits

ENDING_VALUES = (
    "name",
    "start",
    "start_tie_mm",
    "end_tie_mm",
    "take_up",
    "closing_knot_mm",
    "grip_mm",
    "fold_loop_mm",
    "single_start_mm",
    "sliding_piece_mm",
)


@dataclass(frozen=True)
class LoadedOrders:
    """Orders that can be planned, and one sentence for each line that cannot."""

    orders: tuple[Order, ...]
    problems: tuple[str, ...]


@dataclass(frozen=True)
class LoadedShelf:
    """Names of all shades wanted, their thread on the shelf and what can be bought."""

    names: dict[int, ShadeName]
    threads: tuple[ShelfThread, ...]
    offers: tuple[ThreadOffer, ...]
    keep_length_mm: int

    @property
    def stamp(self) -> str:
        threads = [(t.number, t.shade, t.lot, t.kind, t.reckoned_mm) for t in self.threads]
        offers = [_values_of_offer(offer) for offer in self.offers]
        return _stamp([sorted(threads), sorted(offers), self.keep_length_mm])


def _values_of_offer(offer: ThreadOffer) -> tuple[object, ...]:
    """Packs only where there are some, so that plans of earlier releases do not look stale."""
    packs = (offer.pack_size, offer.minimum_packs, offer.pack_step)
    return (
        offer.key,
        offer.supplier_name,
        offer.name,
        offer.reckoned_mm,
        str(offer.price),
        sorted(offer.shades or []),
        *(packs if packs != (1, 1, 1) else ()),
    )


def habits_of(workshop: Workshop) -> Habits:
    return Habits(
        workshop_name=workshop.name,
        length_unit=workshop.length_unit,
        currency=workshop.currency,
        paper=workshop.paper,
        safety_share=workshop.safety_share,
        rounding_step_mm=workshop.rounding_step_mm,
        keep_length_mm=workshop.keep_length_mm,
        short_measure_share=workshop.short_measure_share,
    )


def load_orders(
    lines: Sequence[OrderLine], workshop: Workshop, *, row_numbers: Sequence[int] = ()
) -> LoadedOrders:
    """Turn order lines into orders; `lines` may be unsaved. Few queries, however many lines.

    `row_numbers` are what messages call the lines; without them, they are counted from 1.
    """
    _attach_colourways(lines)
    gauge_row = Gauge.objects.filter(is_default=True).first()
    gauge = gauge_row.as_core() if gauge_row else GaugeCore()
    lengths = {
        (row.size_id, row.ending_id): row.knotted_length_mm for row in KnottedLength.objects.all()
    }
    definitions = {line.pattern_id: line.pattern.definition for line in lines}
    orders: list[Order] = []
    problems: list[str] = []
    for row, line in zip(row_numbers or count(1), lines, strict=False):
        try:
            orders.append(_order(row, line, definitions[line.pattern_id], workshop, gauge, lengths))
        except (LineProblem, LengthError) as problem:
            problems.append(f"Row {row}: {problem}")
    return LoadedOrders(tuple(orders), tuple(problems))


class LineProblem(ValueError):
    """An order line cannot be planned; the text says why and what to do."""


def _attach_colourways(lines: Sequence[OrderLine]) -> None:
    prefetch_related_objects(list(lines), "pattern", "colourway__shades", "size", "ending")


def _order(
    row: int,
    line: OrderLine,
    pattern: Pattern,
    workshop: Workshop,
    gauge: GaugeCore,
    lengths: dict[tuple[int, int], int],
) -> Order:
    knotted_length_mm = lengths.get((line.size_id, line.ending_id))
    if knotted_length_mm is None:
        raise LineProblem(
            f"{line.size} has no knotted length for {line.ending}. Give it one under Sizes."
        )
    shades = {choice.slot: choice.shade_id for choice in line.colourway.shades.all()}
    missing = sorted(set(pattern.used_slots) - set(shades))
    if missing:
        raise LineProblem(
            f"the colourway {line.colourway} of {line.pattern} has no shade for "
            f"{', '.join(missing)}. Choose one on the pattern's page."
        )
    rows_for(pattern, knotted_length_mm, gauge)
    kind = Kind(
        pattern=pattern,
        pattern_text=line.pattern.text,
        colourway_name=line.colourway.name,
        size_name=line.size.name,
        is_child=line.size.is_child,
        has_metal_or_button=line.ending.has_metal_or_button,
        shades=tuple((slot, shades[slot]) for slot in pattern.used_slots),
        knotted_length_mm=knotted_length_mm,
        gauge=gauge,
        ending=line.ending.as_core(),
        rule=cut_rule(workshop),
        distinct_lengths=line.distinct_lengths,
        pattern_key=line.pattern_id,
        pattern_version=line.pattern.version,
    )
    return Order(
        row, kind, line.quantity, line.for_whom, line.due_date, line.note, line.matched_set
    )


def orders_stamp(orders: Sequence[Order]) -> str:
    """Tell whether the orders, or the patterns and sizes behind them, have changed."""
    kinds = {order.kind: None for order in orders}
    number_of = {kind: number for number, kind in enumerate(kinds)}
    lines = [
        [number_of[o.kind], o.quantity, o.for_whom, str(o.due_date), o.note]
        + ([o.matched_set] if o.matched_set else [])
        for o in orders
    ]
    return _stamp([[_values_of_kind(kind) for kind in kinds], lines])


def _values_of_kind(kind: Kind) -> list[object]:
    """Named one by one, so that a field the code gains does not make every old plan look stale."""
    ending = asdict(kind.ending)
    values: list[object] = [
        kind.pattern_text,
        kind.colourway_name,
        kind.size_name,
        kind.is_child,
        kind.has_metal_or_button,
        kind.shades,
        kind.knotted_length_mm,
        [kind.gauge.thread_diameter_mm, kind.gauge.loop_ratio, kind.gauge.idle_run],
        [[name, ending[name]] for name in ENDING_VALUES],
        [kind.rule.safety_share, str(kind.rule.rounding_step_mm)],
    ]
    if isinstance(kind.pattern, GridPattern):
        values.append(kind.rule.join_tail_mm)
    if kind.distinct_lengths is not None:
        values.append(["distinct lengths", kind.distinct_lengths])
    return values


def load_shelf(shade_ids: Iterable[int], workshop: Workshop) -> LoadedShelf:
    wanted = set(shade_ids)
    share = workshop.short_measure_share
    shades = Shade.objects.in_bulk(wanted)
    pieces = (
        ShelfPiece.objects.on_shelf()
        .filter(lot__shade__in=wanted)
        .select_related("lot")
        .order_by("pk")
    )
    return LoadedShelf(
        names={
            key: ShadeName(key, shade.code, shade.name, shade.colour)
            for key, shade in shades.items()
        },
        threads=tuple(
            ShelfThread(
                number=piece.pk,
                shade=piece.lot.shade_id,
                lot=piece.lot_id,
                lot_name=piece.lot.name,
                kind=piece.kind,
                length_mm=piece.length_mm,
                reckoned_mm=piece.length_mm
                if piece.is_measured
                else reckoned_length(piece.length_mm, share),
            )
            for piece in pieces
        ),
        offers=_offers(wanted, workshop),
        keep_length_mm=workshop.keep_length_mm,
    )


def _offers(wanted: set[int], workshop: Workshop) -> tuple[ThreadOffer, ...]:
    put_ups = PutUp.objects.select_related("supplier").prefetch_related("shades").order_by("pk")
    offers = []
    for put_up in put_ups:
        shades = None
        if not put_up.for_every_shade:
            shades = frozenset(shade.pk for shade in put_up.shades.all()) & wanted
        offers.append(
            ThreadOffer(
                key=put_up.pk,
                supplier_name=put_up.supplier.name,
                name=put_up.name,
                length_mm=put_up.length_mm,
                reckoned_mm=reckoned_length(put_up.length_mm, workshop.short_measure_share),
                price=put_up.price,
                shades=shades,
                pack_size=put_up.pack_size,
                minimum_packs=put_up.minimum_packs,
                pack_step=put_up.pack_step,
            )
        )
    return tuple(offers)


def _stamp(content: object) -> str:
    return hashlib.sha256(json.dumps(content, default=str).encode()).hexdigest()
