"""Thread on the shelf is written in `inventory/actions.py` and nowhere else.

The check reads the source of everything that is not a test. It knows the ways in which Django writes
rows; the table of cases below shows that each is caught.
"""

import ast
from collections.abc import Iterator
from pathlib import Path

import pytest

ROOT = Path(__file__).resolve().parents[3]
THE_ONE_WRITER = ROOT / "inventory" / "actions.py"
WRITES = {
    "create", "acreate", "bulk_create", "abulk_create", "get_or_create", "aget_or_create",
    "update", "aupdate", "bulk_update", "abulk_update", "update_or_create", "aupdate_or_create",
    "delete", "adelete", "raw",
}  # fmt: skip
PAGE_QUERIES = {"on_shelf", "for_shade_page"}


def forbidden_writes(source: str, *, in_inventory: bool = False) -> list[str]:
    """What in this source writes the shelf; `pieces` is the shelf's own word in inventory only."""
    return [
        f"line {node.lineno}: {reason}"
        for node in ast.walk(ast.parse(source))
        for reason in _reasons(node, in_inventory)
    ]


def _reasons(node: ast.AST, in_inventory: bool) -> Iterator[str]:
    if isinstance(node, ast.Call):
        yield from _reasons_in_call(node, in_inventory)
    if isinstance(node, ast.Assign | ast.AugAssign | ast.AnnAssign):
        targets = node.targets if isinstance(node, ast.Assign) else [node.target]
        for target in targets:
            for part in ast.walk(target):
                is_set = isinstance(part, ast.Attribute) and isinstance(part.ctx, ast.Store)
                if is_set and part.attr == "length_mm":
                    yield "sets length_mm"
                elif isinstance(part, ast.Name) and part.id == "model" and _names_piece(node.value):
                    yield "builds a form that saves ShelfPiece"
    if isinstance(node, ast.Constant) and isinstance(node.value, str):
        words = node.value.lower()
        if "inventory_shelfpiece" in words:
            yield "writes SQL"


def _reasons_in_call(call: ast.Call, in_inventory: bool) -> Iterator[str]:
    function = call.func
    name = function.attr if isinstance(function, ast.Attribute) else getattr(function, "id", "")
    if name == "ShelfPiece":
        yield "makes a ShelfPiece"
    if name in {"setattr", "__setattr__"} and any(
        isinstance(argument, ast.Constant) and argument.value == "length_mm"
        for argument in call.args
    ):
        yield "sets length_mm"
    if name in WRITES and isinstance(function, ast.Attribute):
        words = set(_words(function.value))
        shelf_words = {"ShelfPiece", *PAGE_QUERIES} | ({"pieces"} if in_inventory else set())
        if words & shelf_words:
            yield f"calls {name} on the shelf"
        if any(keyword.arg == "length_mm" for keyword in call.keywords) and "update" in name:
            yield "updates length_mm"
    if name in {"modelform_factory", "modelformset_factory", "inlineformset_factory"} and any(
        _names_piece(argument) for argument in call.args
    ):
        yield "builds a form that saves ShelfPiece"


def _names_piece(node: ast.AST | None) -> bool:
    return node is not None and "ShelfPiece" in set(_words(node))


def _words(node: ast.AST) -> Iterator[str]:
    for part in ast.walk(node):
        if isinstance(part, ast.Name):
            yield part.id
        elif isinstance(part, ast.Attribute):
            yield part.attr


def source_files() -> list[Path]:
    folders = [ROOT / name for name in ("inventory", "patterns", "planner")]
    found = [path for folder in folders for path in sorted(folder.rglob("*.py"))]
    return [ROOT / "manage.py", *(path for path in found if path != THE_ONE_WRITER)]


@pytest.mark.parametrize("path", source_files(), ids=lambda path: str(path.relative_to(ROOT)))
def test_shelf_is_written_by_its_actions_alone(path: Path) -> None:
    in_inventory = path.is_relative_to(ROOT / "inventory")
    assert forbidden_writes(path.read_text("utf-8"), in_inventory=in_inventory) == []


def test_the_one_writer_is_seen_writing() -> None:
    """Were the walk blind, this would find nothing."""
    found = forbidden_writes(THE_ONE_WRITER.read_text("utf-8"), in_inventory=True)
    reasons = {line.split(": ")[1] for line in found}
    assert {"makes a ShelfPiece", "sets length_mm", "calls bulk_create on the shelf"} <= reasons


@pytest.mark.parametrize(
    "source",
    [
        "ShelfPiece(lot=lot, length_mm=5).save()",
        "models.ShelfPiece(lot=lot)",
        "piece.length_mm = 5",
        "piece.length_mm -= 5",
        "piece.length_mm: int = 5",
        "piece.kind, piece.length_mm = 'whole', 5",
        "setattr(piece, 'length_mm', 5)",
        "ShelfPiece.objects.create(lot=lot)",
        "ShelfPiece.objects.bulk_create(rows)",
        "ShelfPiece.objects.filter(pk=1).update(kind='whole')",
        "ShelfPiece.objects.on_shelf().filter(pk=1).delete()",
        "queryset.on_shelf().update(removed_at=now)",
        "anything.update(length_mm=5)",
        "class F(ModelForm):\n    class Meta:\n        model = ShelfPiece",
        "modelform_factory(ShelfPiece)",
        "cursor.execute('UPDATE inventory_shelfpiece SET length_mm = 1')",
    ],
)
def test_write_outside_the_actions_is_caught(source: str) -> None:
    assert forbidden_writes(source)


@pytest.mark.parametrize("source", ["lot.pieces.create(kind='whole')", "self.length_mm = 5"])
def test_write_inside_inventory_is_caught(source: str) -> None:
    assert forbidden_writes(source, in_inventory=True)


@pytest.mark.parametrize(
    "source",
    [
        "ShelfPiece.objects.on_shelf().count()",
        "bracelet.pieces.create(cut_mm=5)",
        "counts[piece.length_mm] += 1",
        "PutUp(length_mm=8000)",
        "total = piece.length_mm",
        "values.update({'note': ''})",
        "change_shelf(changes=[RemoveThread(1)])",
    ],
)
def test_reading_is_allowed(source: str) -> None:
    assert forbidden_writes(source) == []
