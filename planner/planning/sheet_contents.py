"""Fill the sheets' plain data from a snapshot, saved or not."""

from collections import defaultdict
from collections.abc import Callable
from datetime import date
from decimal import Decimal

from patterns.drawing import draw_band
from patterns.pattern_file import read_pattern
from patterns.shapes import Drawing
from planner.cutting.stacks import Skein, stacks
from planner.planning.bench import lots_at_the_bench, source_of
from planner.planning.snapshot import (
    Snapshot,
    SnapshotBracelet,
    SnapshotKind,
    SnapshotPiece,
    SnapshotShade,
    SnapshotStock,
)
from planner.planning.wording import is_worked_out, proof_of_shade
from planner.sheets.contents import (
    CuttingSheet,
    MissingShade,
    PurchaseRow,
    PurchaseSheet,
    ShadeCuts,
    SheetCut,
    SheetHead,
    StackCut,
    StockCut,
    SupplierOrder,
    Tag,
    TagPiece,
    TagSheet,
)

ROWS_DRAWN_ON_A_TAG = 40
MOST_TAGS_NAMED = 20
MOST_SHADES_NAMED = 12
MOST_TAG_LINES = 64  # a diagonal pattern has at most 60 strands, and a sliding piece


def sheet_head(snapshot: Snapshot) -> SheetHead:
    return SheetHead(
        workshop=snapshot.habits.workshop_name,
        batch=snapshot.batch_name,
        market_date=snapshot.market_date,
        plan_label=f"Plan {snapshot.plan_number}",
        plan_date=snapshot.plan_date,
    )


def purchase_sheet(snapshot: Snapshot) -> PurchaseSheet:
    rows: dict[str, list[PurchaseRow]] = defaultdict(list)
    for shade in snapshot.shades:
        for item in shade.purchases:
            rows[item.supplier_name].append(
                PurchaseRow(
                    shade_code=shade.code,
                    shade_name=shade.name,
                    shade_colour=shade.colour,
                    put_up=item.put_up_name,
                    length_mm=item.length_mm,
                    count=item.count,
                    unit_price=item.unit_price,
                    cost=item.cost,
                    proof=proof_of_shade(shade),
                    pack_size=item.pack_size,
                    spare=shade.spare(item),
                )
            )
    return PurchaseSheet(
        head=sheet_head(snapshot),
        currency=snapshot.habits.currency,
        suppliers=tuple(
            SupplierOrder(
                supplier=supplier,
                rows=tuple(found),
                cost=sum((row.cost for row in found), Decimal(0)),
            )
            for supplier, found in sorted(rows.items())
        ),
        cost=snapshot.cost,
        notices=left_out(snapshot),
        missing=tuple(
            MissingShade(shade.code, shade.name, proof_of_shade(shade))
            for shade in snapshot.shades
            if not is_worked_out(shade)
        ),
    )


def left_out(snapshot: Snapshot) -> tuple[str, ...]:
    """Say what the sheet lacks: lines and shades without a plan, tags without thread."""
    missing = [shade for shade in snapshot.shades if not is_worked_out(shade)]
    without_plan = (
        f"{shade.code} {shade.name} was {proof_of_shade(shade)}. It has no cuts, and what to buy "
        "of it is not known: make the plan again."
        for shade in missing[:MOST_SHADES_NAMED]
    )
    more = len(missing) - MOST_SHADES_NAMED
    and_more = [f"And {more} more shades were not worked out."] if more > 0 else []
    without_thread = (
        f"No thread of {shade.code} {shade.name} for "
        + ("tag " if len(shade.unplaced) == 1 else "tags ")
        + ", ".join(str(number) for number in shade.unplaced[:MOST_TAGS_NAMED])
        + (" and more." if len(shade.unplaced) > MOST_TAGS_NAMED else ".")
        for shade in snapshot.shades
        if shade.unplaced and is_worked_out(shade)
    )
    return (
        *without_plan,
        *and_more,
        *(f"Not in this plan: {problem}" for problem in snapshot.problems),
        *without_thread,
    )


def cutting_sheet(snapshot: Snapshot) -> CuttingSheet:
    kind_of = {bracelet.number: bracelet.kind_index for bracelet in snapshot.bracelets}

    def cut_on_sheet(tag_number: int, piece_index: int) -> SheetCut:
        return piece_on_sheet(tag_number, snapshot.kinds[kind_of[tag_number]].pieces[piece_index])

    return CuttingSheet(
        head=sheet_head(snapshot),
        unit=snapshot.habits.length_unit,
        shades=tuple(
            ShadeCuts(
                shade_code=shade.code,
                shade_name=shade.name,
                shade_colour=shade.colour,
                stacks=_stacks(shade, cut_on_sheet),
            )
            for shade in snapshot.shades
            if shade.stock
        ),
        notices=left_out(snapshot),
    )


def piece_on_sheet(tag_number: int, piece: SnapshotPiece) -> SheetCut:
    """Say of a piece what the maker at the bench has to know."""
    return SheetCut(
        tag_number=tag_number,
        label=piece.short_label if piece.role in ("strand", "base") else piece.label,
        slot=piece.slot,
        cut_mm=piece.cut_mm,
        fold_mm=piece.fold_mm,
    )


def _stacks(
    shade: SnapshotShade, cut_on_sheet: Callable[[int, int], SheetCut]
) -> tuple[StackCut, ...]:
    lots = lots_at_the_bench(shade.stock, [item.put_up_name for item in shade.purchases])
    skeins = [
        Skein(lot, tuple(cut.cut_mm for cut in stock.cuts))
        for lot, stock in zip(lots, shade.stock, strict=True)
    ]
    found = []
    for stack in stacks(skeins):
        own = shade.stock[stack.first : stack.first + stack.count]
        found.append(
            StackCut(source_of(own), tuple(_stock_cut(stock, cut_on_sheet) for stock in own))
        )
    return tuple(found)


def _stock_cut(stock: SnapshotStock, cut_on_sheet: Callable[[int, int], SheetCut]) -> StockCut:
    source = f"{stock.source}, lot {stock.lot_name}" if stock.lot_name else stock.source
    return StockCut(
        source=source,
        is_new=stock.is_new,
        reckoned_mm=stock.reckoned_mm,
        cuts=tuple(cut_on_sheet(cut.tag_number, cut.piece_index) for cut in stock.cuts),
        left_mm=stock.left_mm,
        goes_back=stock.goes_back,
    )


def _for_whom_and_set(bracelet: SnapshotBracelet) -> str:
    """Who it is for; at the bench a set is told by its name, since its thread is of one lot."""
    named = [bracelet.for_whom] if bracelet.for_whom else []
    if bracelet.matched_set:
        named.append(f"set {bracelet.matched_set}")
    return ", ".join(named)


def tag_sheet(snapshot: Snapshot, *, address: str) -> TagSheet:
    """Return all tags; `address` is where the workshop answers, for the codes."""
    shades = {shade.code: shade for shade in snapshot.shades}
    drawings = [kind_drawing(kind) for kind in snapshot.kinds]
    piece_lists = [_tag_pieces(kind, shades) for kind in snapshot.kinds]
    return TagSheet(
        head=sheet_head(snapshot),
        unit=snapshot.habits.length_unit,
        tags=tuple(
            _tag(
                snapshot.kinds[bracelet.kind_index],
                drawings[bracelet.kind_index],
                piece_lists[bracelet.kind_index],
                number=bracelet.number,
                code_text=_code_text(bracelet.key, bracelet.number, address),
                for_whom=_for_whom_and_set(bracelet),
                due=bracelet.due_date,
            )
            for bracelet in snapshot.bracelets
        ),
    )


def kind_drawing(kind: SnapshotKind) -> Drawing:
    pattern = read_pattern(kind.pattern_text)
    rows = min(kind.rows, ROWS_DRAWN_ON_A_TAG)
    return draw_band(pattern, rows, kind.colours, layout="horizontal")


def _code_text(key: int | None, number: int, address: str) -> str:
    if key is None:
        return f"tag {number} of a plan that was not saved"
    return f"{address.rstrip('/')}/b/{key}/"


def _tag_pieces(kind: SnapshotKind, shades: dict[str, SnapshotShade]) -> tuple[TagPiece, ...]:
    return tuple(
        TagPiece(
            label=label,
            slot=piece.slot,
            shade_code=piece.shade_code,
            shade_name=shades[piece.shade_code].name,
            shade_colour=shades[piece.shade_code].colour,
            cut_mm=piece.cut_mm,
            fold_mm=piece.fold_mm,
        )
        for label, piece in _tag_lines(kind.pieces)
    )


def _tag_lines(pieces: tuple[SnapshotPiece, ...]) -> list[tuple[str, SnapshotPiece]]:
    """A line a piece; the runs of a colour share one where a tag would have too many lines.

    The line then says how many they are, and the longest: a scrap of that length serves any of
    them. The cutting sheet and the knotting card have each run by itself.
    """
    if len(pieces) <= MOST_TAG_LINES:
        return [(piece.short_label, piece) for piece in pieces]
    lines = [(piece.short_label, piece) for piece in pieces if piece.role != "run"]
    runs: dict[str, list[SnapshotPiece]] = defaultdict(list)
    for piece in pieces:
        if piece.role == "run":
            runs[piece.slot].append(piece)
    return lines + [
        (f"{len(own)} runs", max(own, key=lambda piece: piece.cut_mm)) for own in runs.values()
    ]


def _tag(
    kind: SnapshotKind,
    drawing: Drawing,
    pieces: tuple[TagPiece, ...],
    *,
    number: int,
    code_text: str,
    for_whom: str,
    due: date | None,
) -> Tag:
    return Tag(
        number=number,
        code_text=code_text,
        pattern=kind.pattern_name,
        colourway=kind.colourway_name,
        size=kind.size_name,
        ending=kind.ending_name,
        for_whom=for_whom,
        due=due,
        pieces=pieces,
        rows=kind.rows,
        knotted_length_mm=kind.band_length_mm,
        drawing=drawing,
        cautions=kind.cautions,
        distinct_lengths=kind.distinct_lengths,
    )
