from datetime import date

import pytest

from planner.order_list.catalogue import Catalogue, Choice, PatternChoice, SizeChoice
from planner.order_list.columns import DEFAULT_ORDER
from planner.order_list.lines import read_lines, read_rows
from planner.order_list.reader import RowReader
from planner.order_list.results import BadLine, GoodLine
from planner.order_list.table import Table, TableRow, read_pasted
from tests.data_builders.small_workshop import CATALOGUE, MARKET, TODAY, cells


def read_row(
    number: int,
    row: dict[str, str],
    catalogue: Catalogue,
    *,
    today: date,
    market_date: date | None,
    day_first: bool = True,
) -> GoodLine | BadLine | None:
    return RowReader(catalogue, today, market_date, day_first).read(number, row)


def good(catalogue: Catalogue = CATALOGUE, **changes: str) -> GoodLine:
    line = read_row(7, cells(**changes), catalogue, today=TODAY, market_date=MARKET)
    assert isinstance(line, GoodLine), line
    return line


def bad(catalogue: Catalogue = CATALOGUE, **changes: str) -> BadLine:
    line = read_row(7, cells(**changes), catalogue, today=TODAY, market_date=MARKET)
    assert isinstance(line, BadLine), line
    return line


def message(catalogue: Catalogue = CATALOGUE, **changes: str) -> str:
    (problem,) = bad(catalogue, **changes).problems
    return problem.message


def test_row_of_all_fields() -> None:
    row = {
        "for_whom": "  Harbour   choir ", "pattern": "Wave", "colourway": "Dusk", "size": "Large",
        "ending": "Loop and button", "quantity": "12", "due_date": "2026-11-20", "note": " two\nlines ",
        "distinct_lengths": "3", "matched_set": " The  Pair ",
    }  # fmt: skip
    line = read_row(4, row, CATALOGUE, today=TODAY, market_date=MARKET)
    assert line == GoodLine(
        number=4, for_whom="Harbour choir", pattern_key=1, colourway_key=12, size_key=3, ending_key=2,
        quantity=12, due_date=date(2026, 11, 20), note="two\nlines", distinct_lengths=3, matched_set="The Pair",
        cells=tuple(row.values()),
    )  # fmt: skip


def test_row_of_defaults() -> None:
    line = read_row(
        1, {"pattern": "Café chevron", "size": "Small"}, CATALOGUE, today=TODAY, market_date=MARKET
    )
    assert isinstance(line, GoodLine)
    assert (line.for_whom, line.colourway_key, line.ending_key, line.quantity) == ("", 21, 1, 1)
    assert (line.due_date, line.note) == (MARKET, "")
    assert len(line.cells) == len(DEFAULT_ORDER)


def test_row_without_market_date_has_no_due_date() -> None:
    line = read_row(1, cells(), CATALOGUE, today=TODAY, market_date=None)
    assert isinstance(line, GoodLine)
    assert line.due_date is None


@pytest.mark.parametrize(
    "blank", [{}, {"note": ""}, {"pattern": " \t\n", "size": "\u00a0"}, {"other": "x"}]
)
def test_row_in_which_nothing_is_written(blank: dict[str, str]) -> None:
    assert read_row(1, blank, CATALOGUE, today=TODAY, market_date=MARKET) is None


@pytest.mark.parametrize(
    "name", ["wave", "WAVE", "  Wave  ", "Ｗａｖｅ", "Wa\u200bve", "\u202eWave"]
)
def test_pattern_name_aside_from_case_spaces_and_form(name: str) -> None:
    assert good(pattern=name).pattern_key == 1


@pytest.mark.parametrize("name", ["cafe chevron", "CAFÉ\nCHEVRON", "Cafe\u0301  Chevron"])
def test_pattern_name_aside_from_accents(name: str) -> None:
    assert good(pattern=name, colourway="").pattern_key == 2


def test_name_written_right_to_left() -> None:
    assert good(pattern="موج", colourway="ليل", for_whom="ש 😀").colourway_key == 51
    assert good(for_whom="\u202bשלום\u202c 😀").for_whom == "\u202bשלום\u202c 😀"


def test_name_that_agrees_with_two_is_a_problem_unless_exact() -> None:
    choices = (Choice(1, "Ends"), Choice(2, "ENDS"))
    catalogue = Catalogue(CATALOGUE.patterns, CATALOGUE.sizes, choices, 1)
    assert good(catalogue, ending="ENDS").ending_key == 2
    assert message(catalogue, ending="ends") == (
        "Row 7: 'ends' may be Ends and ENDS. Write the name exactly."
    )


@pytest.mark.parametrize(
    ("field", "text", "expected", "suggestion"),
    [
        ("size", "Larg", "Row 7: no size called 'Larg'. Did you mean Large?", "Large"),
        ("size", "M", "Row 7: no size called 'M'. Did you mean Medium?", "Medium"),
        ("pattern", "Wvae", "Row 7: no pattern called 'Wvae'. Did you mean Wave?", "Wave"),
        ("pattern", "kafe chevron", "Row 7: no pattern called 'kafe chevron'. Did you mean Café chevron?", "Café chevron"),
        ("colourway", "Dsk", "Row 7: Wave has no colourway called 'Dsk'. Did you mean Dusk?", "Dusk"),
        ("ending", "plaited", "Row 7: no ending called 'plaited'. Did you mean Plaited ties?", "Plaited ties"),
    ],
)  # fmt: skip
def test_name_nearly_right_gets_the_nearest(
    field: str, text: str, expected: str, suggestion: str
) -> None:
    (problem,) = bad(**{field: text}).problems
    assert (problem.field, problem.message, problem.suggestion) == (field, expected, suggestion)
    again = read_row(7, cells(**{field: suggestion}), CATALOGUE, today=TODAY, market_date=None)
    assert field not in [problem.field for problem in getattr(again, "problems", ())]


def test_name_far_from_all_gets_the_list() -> None:
    assert message(size="Gigantic") == (
        "Row 7: no size called 'Gigantic'. Write Small, Medium and Large, or a wrist such as 16 cm."
    )
    assert "It has Dawn and Dusk." in message(colourway="Mauve")
    assert "You have Plaited ties and Loop and button." in message(ending="Glue")


def test_colourway_of_another_pattern_is_not_taken() -> None:
    assert "Wave has no colourway called 'Tar'" in message(colourway="Tar")


def test_colourway_left_blank() -> None:
    assert good(pattern="Café chevron", colourway="").colourway_key == 21
    assert good(pattern="Rope walk", colourway="").colourway_key == 32
    assert (
        message(colourway="")
        == "Row 7: no colourway is given; Wave has Dawn and Dusk. Write which."
    )
    assert (
        message(pattern="Bare", colourway="") == "Row 7: Bare has no colourway yet. Add one first."
    )


def test_colourways_are_listed_up_to_five() -> None:
    many = tuple(Choice(n, f"Shade {n}") for n in range(1, 9))
    catalogue = Catalogue((PatternChoice(1, "Wave", many),), CATALOGUE.sizes, CATALOGUE.endings, 1)
    assert "Shade 4, Shade 5 and 3 more. Write which." in message(catalogue, colourway="")


@pytest.mark.parametrize(
    ("wrist", "key"),
    [
        ("16 cm", 2), ("160mm", 2), ("6 1/2 in", 2), ('6½"', 2), ("15,5 cm", 2), ("16", 2), ("15.5", 2),
        # the lower bound belongs to the size, the upper one to the next; the last one keeps its own
        ("13 cm", 1), ("150 mm", 2), ("17 cm", 3), ("191 mm", 3), ("149.9 mm", 1),
    ],
)  # fmt: skip
def test_size_as_a_wrist(wrist: str, key: int) -> None:
    line = good(size=wrist)
    assert line.size_key == key
    (notice,) = line.notices
    assert notice.startswith("Row 7: a wrist of ")


def test_size_as_a_bare_number_says_how_it_was_read() -> None:
    assert good(size="16").notices == ("Row 7: a wrist of 16 cm was read as size Medium.",)


@pytest.mark.parametrize("text", ["9", "9.9", "22.1", "165", "6.5", "0"])
def test_size_as_a_bare_number_that_is_no_wrist_in_cm(text: str) -> None:
    assert "a wrist needs its unit" in message(size=text)


def test_size_named_by_a_number_comes_before_the_wrist() -> None:
    sizes = (SizeChoice(8, "16", 100, 120), SizeChoice(9, "Medium", 150, 170))
    line = good(Catalogue(CATALOGUE.patterns, sizes, CATALOGUE.endings, 1), size="16")
    assert (line.size_key, line.notices) == (8, ())


def test_size_for_no_wrist_names_the_nearest_and_its_range() -> None:
    (problem,) = bad(size="40 cm").problems
    assert problem.message == (
        "Row 7: no size fits a wrist of '40 cm'. The nearest is Large, 17 cm to 19.1 cm."
    )
    assert problem.suggestion == "Large"
    assert "The nearest is Small" in message(size="1 mm")


def test_size_for_a_wrist_that_fits_two() -> None:
    sizes = (SizeChoice(1, "Child", 130, 160), SizeChoice(2, "Woman", 140, 165))
    catalogue = Catalogue(CATALOGUE.patterns, sizes, CATALOGUE.endings, 1)
    assert message(catalogue, size="15 cm") == (
        "Row 7: a wrist of '15 cm' fits Child and Woman. Write which."
    )


@pytest.mark.parametrize(
    ("text", "quantity"),
    [("", 1), ("3", 3), ("3.0", 3), ("3,00", 3), ("3x", 3), ("x3", 3), ("3 x", 3), ("× 3", 3), ("007", 7), ("9999", 9999)],
)  # fmt: skip
def test_quantity(text: str, quantity: int) -> None:
    assert good(quantity=text).quantity == quantity


@pytest.mark.parametrize(
    "text", ["0", "-2", "1.5", "10000", "1e3", "three", "1.000", "1,000", "x", "0x", "٣"]
)
def test_quantity_that_cannot_be(text: str) -> None:
    assert message(quantity=text) == (
        f"Row 7: the quantity '{text}' is not a whole number from 1 to 9999. Write one, like 3."
    )


def test_due_date_past_is_a_notice() -> None:
    line = good(due_date="2026-10-31")
    assert line.due_date == date(2026, 10, 31)
    assert line.notices == ("Row 7: the due date, 31 October 2026, has passed.",)
    assert good(due_date="2026-11-01").notices == ()


def test_due_date_that_does_not_exist() -> None:
    assert message(due_date="30.2.2027") == (
        "Row 7: 30 February 2027 does not exist: 2027-02-28 is the last day of that month."
    )


def test_due_date_month_first_when_asked() -> None:
    line = read_row(
        1, cells(due_date="5/12/2027"), CATALOGUE, today=TODAY, market_date=None, day_first=False
    )
    assert isinstance(line, GoodLine)
    assert line.due_date == date(2027, 5, 12)


@pytest.mark.parametrize(("field", "most"), [("for_whom", 120), ("note", 500)])
def test_text_up_to_its_limit(field: str, most: int) -> None:
    assert getattr(good(**{field: "ü" * most}), field) == "ü" * most
    assert f"has {most + 1} characters; {most} is the limit" in message(**{field: "ü" * (most + 1)})


@pytest.mark.parametrize("field", DEFAULT_ORDER)
@pytest.mark.parametrize("character", ["\x00", "\x1b", "\x7f", "\x9f", "\ud800", "\uffff"])
def test_character_that_is_no_text_is_named_and_made_safe(field: str, character: str) -> None:
    line = bad(**{field: f"ab{character}"})
    (problem,) = (problem for problem in line.problems if problem.field == field)
    assert problem.message.startswith("Row 7: character 3 of the ")
    assert line.cells[DEFAULT_ORDER.index(field)] == "ab\ufffd"
    "".join([*line.cells, problem.message]).encode()  # a lone surrogate would raise


def test_all_problems_of_a_row_come_at_once_in_the_order_of_the_columns() -> None:
    row = dict.fromkeys(DEFAULT_ORDER, "?!?!" * 200)
    line = read_row(7, row, CATALOGUE, today=TODAY, market_date=None)
    assert isinstance(line, BadLine)
    fields = [problem.field for problem in line.problems]
    assert fields == [field for field in DEFAULT_ORDER if field != "colourway"]
    assert all(problem.message.startswith("Row 7: ") for problem in line.problems)
    assert line.cells == tuple(row.values())


@pytest.mark.parametrize(("text", "lengths"), [("", None), ("1", 1), (" 2 ", 2), ("60", 60)])
def test_lengths_of_a_line(text: str, lengths: int | None) -> None:
    assert good(distinct_lengths=text).distinct_lengths == lengths


@pytest.mark.parametrize("text", ["0", "61", "-1", "2.5", "two", "1e3", "9" * 400])
def test_lengths_that_are_no_number_are_told(text: str) -> None:
    (problem,) = bad(distinct_lengths=text).problems
    assert problem.field == "distinct_lengths"
    assert "are not a whole number from 1 to 60" in problem.message


def test_nothing_in_the_workshop_yet() -> None:
    line = bad(Catalogue((), (), ()))
    assert [problem.message for problem in line.problems] == [
        "Row 7: there are no patterns yet. Add one first.",
        "Row 7: there are no sizes yet. Add one first.",
        "Row 7: there are no endings yet. Add one first.",
    ]


def test_rows_of_the_grid_keep_their_numbers() -> None:
    rows = [(1, cells()), (2, {}), (3, cells(size="Larg")), (4, cells(quantity="2"))]
    reading = read_rows(rows, CATALOGUE, today=TODAY, market_date=MARKET)
    assert [line.number for line in reading.good] == [1, 4]
    assert [line.number for line in reading.bad] == [3]


def test_lines_of_a_list_with_columns_in_another_order() -> None:
    table = read_pasted(
        "Size\tPrice\tPattern\tQty\nLarge\t12\tRope walk\t2\n\t99\t\t\nLarg\t\tWave\t\n"
    )
    reading = read_lines(table, CATALOGUE, today=TODAY, market_date=MARKET)
    (line,) = reading.good
    assert (line.number, line.size_key, line.pattern_key, line.quantity) == (2, 3, 3, 2)
    assert line.cells == ("", "Rope walk", "", "Large", "", "2", "", "", "", "")
    assert [wrong.number for wrong in reading.bad] == [4]
    assert reading.ignored_columns == ("Price",)
    assert reading.notices == ("Left out, with nothing in the columns that are read: row 3.",)


def test_lines_of_a_list_without_column_names_say_so() -> None:
    table = read_pasted("Anna\tWave\tDawn\tLarge\t\t2\n")
    reading = read_lines(table, CATALOGUE, today=TODAY, market_date=MARKET)
    assert (reading.good[0].number, reading.good[0].quantity) == (1, 2)
    assert (
        "for whom, pattern, colourway, size, ending, quantity, due date, note" in reading.notices[0]
    )


def test_line_with_more_cells_than_columns_is_bad() -> None:
    table = read_pasted("Anna,Wave,Dawn,Large,,2,,red, blue\n")
    (line,) = read_lines(table, CATALOGUE, today=TODAY, market_date=MARKET).bad
    assert line.problems[0].field is None
    assert line.problems[0].message.startswith("Row 1: 9 cells, but the list has 8 columns.")


def test_line_with_a_formula_without_result_is_bad_only_where_it_is_read() -> None:
    rows = (
        TableRow(2, ("Wave", "Noon", "=A1"), frozenset({3})),
        TableRow(3, ("Café chevron", "Large", "=A1"), frozenset({2})),
    )
    table = Table(("pattern", "size", "price"), rows)
    reading = read_lines(table, CATALOGUE, today=TODAY, market_date=None)
    formulas = [
        (line.number, p.field)
        for line in reading.bad
        for p in line.problems
        if "formula" in p.message
    ]
    assert formulas == [(3, "size")]


def test_text_that_begins_with_an_equals_sign_stays_text() -> None:
    table = read_pasted("for,pattern,colourway,size,note\n'=1+1,Wave,Dawn,Large,=2+2\n")
    (line,) = read_lines(table, CATALOGUE, today=TODAY, market_date=None).good
    assert (line.for_whom, line.note) == ("=1+1", "=2+2")


def test_catalogue_refuses_what_does_not_fit_together() -> None:
    with pytest.raises(ValueError, match="same key"):
        Catalogue((), (), (Choice(1, "A"), Choice(1, "B")))
    with pytest.raises(ValueError, match="default ending"):
        Catalogue((), (), (Choice(1, "A"),), 2)
    with pytest.raises(ValueError, match="default colourway"):
        PatternChoice(1, "Wave", (Choice(1, "A"),), 2)
    with pytest.raises(ValueError, match="backwards"):
        SizeChoice(1, "Small", 150, 130)


def test_name_of_a_set_that_is_too_long_is_refused_by_its_own_cell() -> None:
    line = read_row(1, cells(matched_set="x" * 41), CATALOGUE, today=TODAY, market_date=MARKET)
    assert isinstance(line, BadLine)
    (problem,) = line.problems
    assert problem.field == "matched_set"
    assert "41 characters; 40 is the limit" in problem.message
