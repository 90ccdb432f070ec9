"""What skeins are called at the bench, and which may be laid together."""

from dataclasses import dataclass

import pytest

from planner.planning.bench import lots_at_the_bench, names_of, source_of


@dataclass(frozen=True)
class Row:
    source: str
    lot_name: str = ""

    @property
    def is_new(self) -> bool:
        return self.source.startswith("new")


def new(*numbers: int, name: str = "8 m skein") -> list[Row]:
    return [Row(f"new thread {number}: {name}") for number in numbers]


def pieces(*numbers: int, lot: str = "8a", kind: str = "remnant") -> list[Row]:
    return [Row(f"piece {number}: {kind}", lot) for number in numbers]


@pytest.mark.parametrize(
    ("rows", "names"),
    [
        (new(1), "new thread 1"),
        (new(1, 2, 3), "new thread 1 to 3"),
        (new(1, 2), "new thread 1, 2"),
        (pieces(12), "piece 12"),
        (pieces(49, 48), "pieces 49, 48"),
        ([*pieces(53), *new(1, 2, 3)], "piece 53 and new thread 1 to 3"),
        ([Row("a hank"), Row("a hank")], "a hank and a hank"),
    ],
)
def test_names_of_skeins_that_follow_each_other(rows: list[Row], names: str) -> None:
    assert names_of(rows) == names


def test_source_tells_what_they_are_and_their_lot() -> None:
    assert source_of(new(4, 5, 6)) == "new thread 4 to 6: 8 m skein"
    mixed = [*pieces(7), *pieces(9, kind="started skein")]
    assert source_of(mixed) == "pieces 7, 9: remnant, started skein, lot 8a"


def test_put_up_names_may_hold_a_colon() -> None:
    assert source_of(new(1, name="hank: long")) == "new thread 1: hank: long"


def test_only_thread_of_one_lot_may_be_laid_together() -> None:
    rows = [*pieces(1, 2), *pieces(3, lot="8b"), *new(1, 2), *new(3, name="hank")]
    lots = lots_at_the_bench(rows, ["8 m skein", "hank"])
    assert [lots.index(lot) for lot in lots] == [0, 0, 2, 3, 3, 5]


def test_new_thread_of_two_suppliers_under_one_name_is_kept_apart() -> None:
    lots = lots_at_the_bench(new(1, 2), ["8 m skein", "8 m skein"])
    assert lots[0] != lots[1]
