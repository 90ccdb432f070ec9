import pytest

from planner.order_list.limits import OrderListError
from planner.order_list.lines import read_lines
from planner.order_list.results import Reading
from planner.order_list.table import read_pasted, read_table
from tests.data_builders.bad_order_lists import BadOrderList, bad_order_lists
from tests.data_builders.small_workshop import CATALOGUE, TODAY

LISTS = bad_order_lists()


def read(entry: BadOrderList) -> Reading | OrderListError:
    try:
        if entry.text is not None:
            table = read_pasted(entry.text)
        else:
            table = read_table(entry.data, entry.filename)
        return read_lines(table, CATALOGUE, today=TODAY, market_date=None)
    except OrderListError as error:
        return error


@pytest.mark.parametrize("entry", LISTS, ids=lambda entry: entry.name)
def test_bad_list_gives_bad_lines_or_one_clear_error(entry: BadOrderList) -> None:
    outcome = read(entry)
    if isinstance(outcome, OrderListError):
        assert entry.outcome != "bad rows"
        assert str(outcome)[0].isupper()
        assert str(outcome).endswith(".")
        assert len(str(outcome)) < 500
        return
    assert entry.outcome != "refused"
    if entry.outcome == "bad rows":
        assert {line.number for line in outcome.bad} == entry.bad_rows
        assert {line.number for line in outcome.good} == entry.good_rows
    for line in outcome.bad:
        assert all(p.message.startswith(f"Row {line.number}: ") for p in line.problems)
        assert all(len(p.message) < 500 for p in line.problems)
        "".join([*line.cells, *(p.message for p in line.problems)]).encode()


def test_bad_lists_are_many_and_the_same_every_time() -> None:
    assert len(LISTS) >= 300
    assert bad_order_lists() == LISTS
