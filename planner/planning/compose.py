"""Put exploded kinds and netted shades together into a snapshot."""

from collections.abc import Iterable, Mapping
from dataclasses import asdict
from datetime import date
from decimal import Decimal
from typing import Any

from patterns.cautions import cautions_for
from planner.cutting import Opened
from planner.cutting.cut_order import cut_order
from planner.planning.demand import Bracelet, ExplodedKind, ShadeName
from planner.planning.netting import NettedShade, ShelfThread, ThreadOffer, pieces_by_shade
from planner.planning.snapshot import (
    Habits,
    ShadeProof,
    Snapshot,
    SnapshotBracelet,
    SnapshotCut,
    SnapshotKind,
    SnapshotPiece,
    SnapshotPurchase,
    SnapshotShade,
    SnapshotStock,
    SnapshotThread,
)

KIND_WORDS = {"whole": "whole skein", "started": "started skein", "remnant": "remnant"}


def compose(
    *,
    batch_name: str,
    market_date: date | None,
    plan_number: int,
    plan_date: date,
    habits: Habits,
    kinds: tuple[ExplodedKind, ...],
    bracelets: tuple[Bracelet, ...],
    netted: tuple[NettedShade, ...],
    names: Mapping[int, ShadeName],
    shelf: Iterable[ShelfThread],
    offers: tuple[ThreadOffer, ...],
    problems: tuple[str, ...],
    shelf_stamp: str,
    orders_stamp: str,
) -> Snapshot:
    """Return the plan as plain data; shades stand in the order of their codes."""
    threads = {str(thread.number): thread for thread in shelf}
    by_key = {str(offer.key): offer for offer in offers}
    index_maps = [pieces_by_shade(kind) for kind in kinds]
    kind_of = {str(bracelet.number): bracelet.kind_index for bracelet in bracelets}
    shades = [
        _shade(shade, names[shade.shade], threads, by_key, index_maps, kind_of, habits)
        for shade in netted
    ]
    return Snapshot(
        batch_name=batch_name,
        market_date=market_date,
        plan_number=plan_number,
        plan_date=plan_date,
        habits=habits,
        kinds=tuple(_kind(kind, names) for kind in kinds),
        bracelets=tuple(
            SnapshotBracelet(
                b.number,
                b.kind_index,
                b.for_whom,
                b.due_date,
                b.note,
                matched_set=b.matched_set,
            )
            for b in bracelets
        ),
        shades=tuple(sorted(shades, key=lambda shade: shade.code.casefold())),
        problems=problems,
        shelf_stamp=shelf_stamp,
        orders_stamp=orders_stamp,
    )


def _kind(exploded: ExplodedKind, names: Mapping[int, ShadeName]) -> SnapshotKind:
    kind = exploded.kind
    shades = {slot: names[key] for slot, key in kind.shades}
    return SnapshotKind(
        pattern_name=kind.pattern.name,
        pattern_text=kind.pattern_text,
        colourway_name=kind.colourway_name,
        size_name=kind.size_name,
        ending_name=kind.ending.name,
        knotted_length_mm=kind.knotted_length_mm,
        rows=exploded.table.rows,
        band_width_mm=exploded.table.band_width_mm,
        colours={slot: shade.colour for slot, shade in shades.items()},
        pieces=tuple(
            SnapshotPiece(
                slot=piece.slot,
                shade_code=shades[piece.slot].code,
                strands=piece.strands,
                cut_mm=piece.cut_mm,
                fold_mm=piece.fold_mm,
                role=piece.role,
                label=piece.label,
                short_label=piece.short_label,
                fold_from=piece.labels[0] if piece.labels else "",
                added_mm=piece.added_mm,
            )
            for piece in exploded.pieces
        ),
        making=_making(exploded, shades),
        cautions=cautions_for(kind.is_child, kind.has_metal_or_button),
        pattern_key=kind.pattern_key,
        pattern_version=kind.pattern_version,
    )


def _making(exploded: ExplodedKind, shades: Mapping[str, ShadeName]) -> dict[str, Any]:
    kind = exploded.kind
    return {
        "shades": {slot: asdict(shade) for slot, shade in shades.items()},
        "band_length_mm": exploded.table.band_length_mm,
        "join_tail_mm": kind.rule.join_tail_mm,
        "distinct_lengths": kind.distinct_lengths,
        "strands": [asdict(strand) for strand in exploded.table.strands],
        "gauge": asdict(kind.gauge),
        "ending": asdict(kind.ending),
        "safety_share": kind.rule.safety_share,
        "rounding_step_mm": float(kind.rule.rounding_step_mm),
        "ends_mm": [piece.ends_mm for piece in exploded.pieces],
    }


def _shade(
    netted: NettedShade,
    name: ShadeName,
    threads: Mapping[str, ShelfThread],
    offers: Mapping[str, ThreadOffer],
    index_maps: list[Mapping[int, tuple[int, ...]]],
    kind_of: Mapping[str, int],
    habits: Habits,
) -> SnapshotShade:
    result = netted.result

    def piece_index(group_key: str, index: int) -> int:
        return index_maps[kind_of[group_key]][netted.shade][index]

    new_count = 0
    stock = []
    suppliers = {key: offer.supplier_name for key, offer in offers.items()}
    for opened in cut_order(result.opened, suppliers=suppliers):
        if opened.offer_key is not None:
            new_count += 1
        stock.append(_stock(opened, new_count, threads, offers, piece_index, habits))
    return SnapshotShade(
        shade_key=netted.shade,
        code=name.code,
        name=name.name,
        colour=name.colour,
        status=result.status,
        piece_count=netted.piece_count,
        need_mm=netted.need_mm,
        shelf_mm=netted.shelf_mm,
        usable_mm=netted.usable_mm,
        left_mm=netted.left_mm,
        bought=sum(count for _, count in result.bought),
        bought_lower_bound=result.bought_lower_bound,
        cost=result.cost,
        lower_bound=result.lower_bound,
        purchases=tuple(_purchase(offers[key], count) for key, count in result.bought),
        shelf=tuple(
            SnapshotThread(t.number, t.kind, t.lot_name, t.length_mm, t.reckoned_mm)
            for t in threads.values()
            if t.shade == netted.shade
        ),
        stock=tuple(stock),
        unplaced=tuple(sorted(int(key) for key in result.unplaced)),
        proof=ShadeProof(
            seconds=round(result.seconds, 3),
            cost_without_lots=result.cost_without_lots,
            bought_without_lots=result.bought_without_lots,
            lower_bound_without_lots=result.lower_bound_without_lots,
            waste_mm=result.waste_mm,
            message=result.message,
        ),
    )


def _purchase(offer: ThreadOffer, count: int) -> SnapshotPurchase:
    return SnapshotPurchase(
        supplier_name=offer.supplier_name,
        put_up_name=offer.name,
        length_mm=offer.length_mm,
        reckoned_mm=offer.reckoned_mm,
        unit_price=offer.price,
        count=count,
        cost=Decimal(count // offer.pack_size) * offer.price,
        pack_size=offer.pack_size,
    )


def _stock(
    opened: Opened,
    new_count: int,
    threads: Mapping[str, ShelfThread],
    offers: Mapping[str, ThreadOffer],
    piece_index: Any,
    habits: Habits,
) -> SnapshotStock:
    cuts = tuple(
        SnapshotCut(int(cut.group_key), piece_index(cut.group_key, cut.index), cut.length_mm)
        for cut in opened.pieces
    )
    goes_back = opened.left_mm >= habits.keep_length_mm
    if opened.offer_key is not None:
        offer = offers[opened.offer_key]
        return SnapshotStock(
            source=f"new thread {new_count}: {offer.name}",
            shelf_piece_number=None,
            lot_name="",
            is_new=True,
            length_mm=offer.length_mm,
            reckoned_mm=offer.reckoned_mm,
            left_mm=opened.left_mm,
            goes_back=goes_back,
            cuts=cuts,
        )
    assert opened.stock_key is not None
    thread = threads[opened.stock_key]
    return SnapshotStock(
        source=f"piece {thread.number}: {KIND_WORDS[thread.kind]}",
        shelf_piece_number=thread.number,
        lot_name=thread.lot_name,
        is_new=False,
        length_mm=thread.length_mm,
        reckoned_mm=thread.reckoned_mm,
        left_mm=opened.left_mm,
        goes_back=goes_back,
        cuts=cuts,
    )
