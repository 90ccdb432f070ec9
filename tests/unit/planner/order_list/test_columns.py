import pytest

from planner.order_list.columns import (
    _SYNONYMS,
    DEFAULT_ORDER,
    UNNAMED_ORDER,
    count_named,
    field_named,
    plain_name,
    read_columns,
)
from planner.order_list.limits import OrderListError


@pytest.mark.parametrize(
    ("name", "field"),
    [
        ("For whom", "for_whom"), ("for_whom", "for_whom"), ("CUSTOMER", "for_whom"), ("Name:", "for_whom"),
        ("Pattern", "pattern"), ("Design", "pattern"), ("Muster", "pattern"), ("modele", "pattern"),
        ("Colourway", "colourway"), ("colors", "colourway"), ("Farben", "colourway"),
        ("Wrist (cm)", "size"), ("wrist  size", "size"), ("Größe", "size"), ("GROESSE", "size"), ("Maat", "size"),
        ("Closure", "ending"), ("end", "ending"), ("Qty.", "quantity"), ("How many?", "quantity"),
        ("Stück", "quantity"), ("due-date", "due_date"), ("By", "due_date"), ("échéance", "due_date"),
        ("Remark", "note"), ("Price", None), ("", None), ("nombre", None), ("x" * 5000, None),
    ],
)  # fmt: skip
def test_column_name_in_many_words(name: str, field: str | None) -> None:
    assert field_named(name) == field


def test_no_column_name_stands_for_two_fields() -> None:
    names = [{plain_name(n) for n in words.split(",")} for words in _SYNONYMS.values()]
    assert sum(map(len, names)) == len(set().union(*names))
    assert "" not in set().union(*names)


def test_field_names_are_column_names() -> None:
    assert [field_named(field) for field in DEFAULT_ORDER] == list(DEFAULT_ORDER)


def test_columns_without_header_stand_in_the_order_of_the_grid() -> None:
    # Up to the note: a comma in it must not become another field.
    assert read_columns(None).fields == DEFAULT_ORDER[:-2] == UNNAMED_ORDER


def test_columns_in_another_order_with_unknown_ones() -> None:
    columns = read_columns(("Size", "Price", "", "Design"))
    assert columns.fields == ("size", None, None, "pattern")
    assert columns.ignored == ("Price", "column 3")


def test_columns_named_twice_are_an_error_that_names_both() -> None:
    with pytest.raises(
        OrderListError, match="The list has 2 columns for the size: 'Size' and 'Wrist'"
    ):
        read_columns(("Pattern", "Size", "Wrist"))


@pytest.mark.parametrize(
    ("header", "missing"),
    [
        (("for", "size"), "pattern"),
        (("for", "design"), "size"),
        (("for", "note"), "pattern and the size"),
    ],
)
def test_columns_missing_are_an_error_that_names_them(
    header: tuple[str, ...], missing: str
) -> None:
    with pytest.raises(OrderListError, match=f"no column for the {missing}; its columns are 'for'"):
        read_columns(header)


def test_count_named_counts_cells() -> None:
    assert count_named(("Anna", "Size", "by", "")) == 2
