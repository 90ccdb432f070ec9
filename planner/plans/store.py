"""A snapshot as rows, and rows as a snapshot: the same thing there and back."""

from collections import defaultdict
from dataclasses import asdict
from decimal import Decimal
from itertools import islice
from typing import Any

from patterns.geometry import Gauge, band_length_mm
from planner.models import (
    Batch,
    Plan,
    PlanBracelet,
    PlanKind,
    PlanPiece,
    PlanPurchase,
    PlanShade,
    PlanStock,
)
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

ROWS_AT_ONCE = 2_000


def store_snapshot(snapshot: Snapshot, *, batch: Batch, user: Any) -> Plan:
    """Write every row of a plan; the caller holds the transaction."""
    plan = Plan.objects.create(
        batch=batch,
        number=snapshot.plan_number,
        created_by=user,
        plan_date=snapshot.plan_date,
        batch_name=snapshot.batch_name,
        market_date=snapshot.market_date,
        workshop=_habits_as_json(snapshot.habits),
        status=Plan.Status.OPTIMAL if snapshot.is_proven else Plan.Status.FEASIBLE,
        cost=snapshot.cost,
        lower_bound=snapshot.lower_bound,
        bracelet_count=len(snapshot.bracelets),
        piece_count=snapshot.piece_count,
        problems=list(snapshot.problems),
        shelf_stamp=snapshot.shelf_stamp,
        orders_stamp=snapshot.orders_stamp,
        choice=dict(snapshot.choice),
    )
    kinds = PlanKind.objects.bulk_create(_kind_row(plan, kind) for kind in snapshot.kinds)
    bracelets = PlanBracelet.objects.bulk_create(
        (
            PlanBracelet(
                plan=plan,
                kind=kinds[bracelet.kind_index],
                number=bracelet.number,
                for_whom=bracelet.for_whom,
                due_date=bracelet.due_date,
                note=bracelet.note,
                matched_set=bracelet.matched_set,
            )
            for bracelet in snapshot.bracelets
        ),
        batch_size=ROWS_AT_ONCE,
    )
    shades = PlanShade.objects.bulk_create(_shade_row(plan, shade) for shade in snapshot.shades)
    _store_cuts(snapshot, shades, {row.number: row.pk for row in bracelets})
    return plan


def _habits_as_json(habits: Habits) -> dict[str, Any]:
    return {
        name: str(value) if isinstance(value, Decimal) else value
        for name, value in asdict(habits).items()
    }


def _kind_row(plan: Plan, kind: SnapshotKind) -> PlanKind:
    return PlanKind(
        plan=plan,
        pattern_id_then=kind.pattern_key,
        pattern_version=kind.pattern_version,
        pattern_name=kind.pattern_name,
        pattern_text=kind.pattern_text,
        colourway_name=kind.colourway_name,
        size_name=kind.size_name,
        ending_name=kind.ending_name,
        knotted_length_mm=kind.knotted_length_mm,
        rows=kind.rows,
        band_width_mm=kind.band_width_mm,
        making={
            **kind.making,
            "colours": kind.colours,
            "pieces": [asdict(piece) for piece in kind.pieces],
        },
        cautions=list(kind.cautions),
    )


def _shade_row(plan: Plan, shade: SnapshotShade) -> PlanShade:
    return PlanShade(
        plan=plan,
        shade_id_then=shade.shade_key,
        code=shade.code,
        name=shade.name,
        colour=shade.colour,
        status=shade.status,
        piece_count=shade.piece_count,
        need_mm=shade.need_mm,
        shelf_mm=shade.shelf_mm,
        usable_mm=shade.usable_mm,
        left_mm=shade.left_mm,
        bought=shade.bought,
        bought_lower_bound=shade.bought_lower_bound,
        cost=shade.cost,
        lower_bound=shade.lower_bound,
        shelf=[asdict(thread) for thread in shade.shelf],
        unplaced=list(shade.unplaced),
        proof=_proof_as_json(shade.proof),
    )


def _proof_as_json(proof: ShadeProof) -> dict[str, Any]:
    return {
        name: str(value) if isinstance(value, Decimal) else value
        for name, value in asdict(proof).items()
    }


def read_proof(stored: dict[str, Any]) -> ShadeProof:
    """Plans of earlier releases know nothing of it."""
    values = dict(stored)
    for name in ("cost_without_lots", "lower_bound_without_lots"):
        if values.get(name) is not None:
            values[name] = Decimal(values[name])
    return ShadeProof(**values)


def _store_cuts(
    snapshot: Snapshot, shade_rows: list[PlanShade], bracelet_keys: dict[int, int]
) -> None:
    row_of = {row.code: row for row in shade_rows}
    key_of = {row.code: row.pk for row in shade_rows}
    purchases = []
    stocks: list[PlanStock] = []
    cut_at: dict[tuple[int, int], tuple[PlanStock, int]] = {}
    for shade in snapshot.shades:
        row = row_of[shade.code]
        purchases += [PlanPurchase(shade=row, **asdict(item)) for item in shade.purchases]
        for position, stock in enumerate(shade.stock):
            stock_row = _stock_row(row, position, stock)
            stocks.append(stock_row)
            for cut_position, cut in enumerate(stock.cuts):
                cut_at[cut.tag_number, cut.piece_index] = (stock_row, cut_position)
    PlanPurchase.objects.bulk_create(purchases)
    PlanStock.objects.bulk_create(stocks, batch_size=ROWS_AT_ONCE)
    pieces = (
        _piece_row(
            bracelet_keys[bracelet.number],
            key_of,
            index,
            piece,
            cut_at.get((bracelet.number, index)),
        )
        for bracelet in snapshot.bracelets
        for index, piece in enumerate(snapshot.kinds[bracelet.kind_index].pieces)
    )
    # A hundred thousand rows at once would lie in memory together.
    while some := list(islice(pieces, ROWS_AT_ONCE)):
        PlanPiece.objects.bulk_create(some)


def _stock_row(shade: PlanShade, position: int, stock: SnapshotStock) -> PlanStock:
    return PlanStock(
        shade=shade,
        position=position,
        shelf_piece_number=stock.shelf_piece_number,
        source=stock.source,
        lot_name=stock.lot_name,
        is_new=stock.is_new,
        length_mm=stock.length_mm,
        reckoned_mm=stock.reckoned_mm,
        left_mm=stock.left_mm,
        goes_back=stock.goes_back,
    )


def _piece_row(
    bracelet_key: int,
    shade_key_of: dict[str, int],
    index: int,
    piece: SnapshotPiece,
    cut: tuple[PlanStock, int] | None,
) -> PlanPiece:
    """By keys: a hundred thousand rows are made twice as fast as by the rows they belong to."""
    stock, cut_position = cut or (None, None)
    return PlanPiece(
        bracelet_id=bracelet_key,
        shade_id=shade_key_of[piece.shade_code],
        stock_id=stock.pk if stock else None,
        cut_position=cut_position,
        index=index,
        cut_mm=piece.cut_mm,
    )


def read_snapshot(plan: Plan) -> Snapshot:
    """Read a stored plan back; seven queries, however large it is."""
    kinds = list(plan.kinds.all())
    kind_index = {row.pk: index for index, row in enumerate(kinds)}
    bracelets = list(plan.bracelets.all())
    number_of = {row.pk: row.number for row in bracelets}
    return Snapshot(
        batch_name=plan.batch_name,
        market_date=plan.market_date,
        plan_number=plan.number,
        plan_date=plan.plan_date,
        habits=read_habits(plan),
        kinds=tuple(read_kind(row) for row in kinds),
        bracelets=tuple(
            SnapshotBracelet(
                number=row.number,
                kind_index=kind_index[row.kind_id],
                for_whom=row.for_whom,
                due_date=row.due_date,
                note=row.note,
                key=row.pk,
                matched_set=row.matched_set,
            )
            for row in bracelets
        ),
        shades=_read_shades(plan, number_of),
        problems=tuple(plan.problems),
        shelf_stamp=plan.shelf_stamp,
        orders_stamp=plan.orders_stamp,
        choice=plan.choice,
    )


def read_habits(plan: Plan) -> Habits:
    stored = dict(plan.workshop)
    for name in ("safety_share", "rounding_step_mm", "short_measure_share"):
        stored[name] = Decimal(stored[name])
    return Habits(**stored)


def read_kind(row: PlanKind) -> SnapshotKind:
    making = dict(row.making)
    pieces = making.pop("pieces")
    colours = making.pop("colours")
    if "band_length_mm" not in making:  # plans of the first release
        making["band_length_mm"] = band_length_mm(row.rows, Gauge(**making["gauge"]))
    return SnapshotKind(
        pattern_name=row.pattern_name,
        pattern_text=row.pattern_text,
        colourway_name=row.colourway_name,
        size_name=row.size_name,
        ending_name=row.ending_name,
        knotted_length_mm=row.knotted_length_mm,
        rows=row.rows,
        band_width_mm=row.band_width_mm,
        colours=colours,
        pieces=tuple(_read_piece(piece) for piece in pieces),
        making=making,
        cautions=tuple(row.cautions),
        pattern_key=row.pattern_id_then,
        pattern_version=row.pattern_version,
    )


def _read_piece(piece: dict[str, Any]) -> SnapshotPiece:
    """Plans of the first release named a piece by its strands alone."""
    strands = tuple(piece["strands"])
    if "label" not in piece:
        is_sliding = piece.pop("is_sliding")
        numbers = " and ".join(str(strand) for strand in strands)
        piece |= {
            "role": "sliding" if is_sliding else "strand",
            "label": "sliding piece"
            if is_sliding
            else f"strand{'s'[: len(strands) - 1]} {numbers}",
            "short_label": "slide" if is_sliding else " + ".join(map(str, strands)),
            "fold_from": f"strand {strands[0]}" if strands else "",
        }
    return SnapshotPiece(**{**piece, "strands": strands})


def _read_shades(plan: Plan, number_of: dict[int, int]) -> tuple[SnapshotShade, ...]:
    cuts: dict[int, list[SnapshotCut]] = defaultdict(list)
    pieces = PlanPiece.objects.filter(shade__plan=plan, stock__isnull=False)
    rows = pieces.order_by("stock_id", "cut_position")
    for stock_id, bracelet_id, index, cut_mm in rows.values_list(
        "stock_id", "bracelet_id", "index", "cut_mm"
    ):
        cuts[stock_id].append(SnapshotCut(number_of[bracelet_id], index, cut_mm))
    shades = plan.shades.prefetch_related("purchases", "stock")
    return tuple(
        sorted((_read_shade(row, cuts) for row in shades), key=lambda shade: shade.code.casefold())
    )


def _read_shade(row: PlanShade, cuts: dict[int, list[SnapshotCut]]) -> SnapshotShade:
    return SnapshotShade(
        shade_key=row.shade_id_then,
        code=row.code,
        name=row.name,
        colour=row.colour,
        status=row.status,
        piece_count=row.piece_count,
        need_mm=row.need_mm,
        shelf_mm=row.shelf_mm,
        usable_mm=row.usable_mm,
        left_mm=row.left_mm,
        bought=row.bought,
        bought_lower_bound=row.bought_lower_bound,
        cost=row.cost,
        lower_bound=row.lower_bound,
        purchases=tuple(
            SnapshotPurchase(
                supplier_name=item.supplier_name,
                put_up_name=item.put_up_name,
                length_mm=item.length_mm,
                reckoned_mm=item.reckoned_mm,
                unit_price=item.unit_price,
                count=item.count,
                cost=item.cost,
                pack_size=item.pack_size,
            )
            for item in row.purchases.all()
        ),
        shelf=tuple(SnapshotThread(**thread) for thread in row.shelf),
        stock=tuple(
            SnapshotStock(
                source=item.source,
                shelf_piece_number=item.shelf_piece_number,
                lot_name=item.lot_name,
                is_new=item.is_new,
                length_mm=item.length_mm,
                reckoned_mm=item.reckoned_mm,
                left_mm=item.left_mm,
                goes_back=item.goes_back,
                cuts=tuple(cuts[item.pk]),
            )
            for item in row.stock.all()
        ),
        unplaced=tuple(row.unplaced),
        proof=read_proof(row.proof),
    )
