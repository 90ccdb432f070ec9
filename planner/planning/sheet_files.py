"""Every file that a plan can be had as."""

from collections.abc import Callable, Iterable
from dataclasses import dataclass

from planner.planning.sheet_contents import cutting_sheet, purchase_sheet, tag_sheet
from planner.planning.snapshot import Snapshot


@dataclass(frozen=True)
class SheetFile:
    """A file that a plan can be had as; what may be wrong is raised before its first part."""

    content_type: str
    parts: Callable[[Snapshot, str, str], Iterable[bytes]]


def _purchase_pdf(snapshot: Snapshot, paper: str, address: str) -> Iterable[bytes]:
    from planner.sheets.purchase import build_purchase_sheet

    return [build_purchase_sheet(purchase_sheet(snapshot), paper)]


def _cutting_pdf(snapshot: Snapshot, paper: str, address: str) -> Iterable[bytes]:
    from planner.sheets.cutting import cutting_sheet_parts

    return cutting_sheet_parts(cutting_sheet(snapshot), paper)


def _tags_pdf(snapshot: Snapshot, paper: str, address: str) -> Iterable[bytes]:
    from planner.sheets.tags import tag_sheet_parts

    return tag_sheet_parts(tag_sheet(snapshot, address=address), paper)


def _purchase_csv(snapshot: Snapshot, paper: str, address: str) -> Iterable[bytes]:
    from planner.sheets.lists import purchase_csv

    return [purchase_csv(purchase_sheet(snapshot))]


def _purchase_xlsx(snapshot: Snapshot, paper: str, address: str) -> Iterable[bytes]:
    from planner.sheets.lists import purchase_xlsx

    return [purchase_xlsx(purchase_sheet(snapshot))]


XLSX = "application/vnd.openxmlformats-officedocument.spreadsheetml.sheet"
SHEET_FILES: dict[tuple[str, str], SheetFile] = {
    ("purchase", "pdf"): SheetFile("application/pdf", _purchase_pdf),
    ("cutting", "pdf"): SheetFile("application/pdf", _cutting_pdf),
    ("tags", "pdf"): SheetFile("application/pdf", _tags_pdf),
    ("purchase", "csv"): SheetFile("text/csv; charset=utf-8", _purchase_csv),
    ("purchase", "xlsx"): SheetFile(XLSX, _purchase_xlsx),
}
