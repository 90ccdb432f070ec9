"""A shade that fails, or a stop in the middle, leaves the other shades' plan whole."""

import logging
from collections.abc import Callable
from typing import Any

import pytest

from planner.cutting import CuttingError, LotResult
from planner.planning import netting
from planner.planning.demand import Order, explode
from planner.planning.netting import NettedShade, net
from planner.planning.watching import Unwatched
from tests.plain import make_kind, make_offer, make_thread

SHADES = 3


class StopsAt(Unwatched):
    """Wants to stop as soon as the shade at this position begins."""

    def __init__(self, position: int | None) -> None:
        self.position = position
        self.heard: list[tuple[int, int, int]] = []

    def shade_begins(self, position: int, total: int, shade: int) -> None:
        self.heard.append((position, total, shade))

    def stop_wanted(self) -> bool:
        return self.position is not None and len(self.heard) >= self.position


def net_three(watcher: Any = None) -> tuple[NettedShade, ...]:
    kinds, bracelets = explode((Order(1, make_kind("A A B B C C"), 5),))
    shelf = [make_thread(number, 7_000, shade=number, lot=number) for number in (1, 2, 3)]
    return net(kinds, bracelets, shelf, (make_offer(),), watcher=watcher or Unwatched())


@pytest.fixture
def fail_on(monkeypatch: pytest.MonkeyPatch) -> Callable[[int, BaseException], None]:
    """Let the solver raise on its n-th call, counted from 1."""

    def install(nth: int, error: BaseException) -> None:
        solve, calls = netting.solve_with_lots, []

        def failing(*args: Any, **kwargs: Any) -> LotResult:
            calls.append(1)
            if len(calls) == nth:
                raise error
            return solve(*args, **kwargs)

        monkeypatch.setattr(netting, "solve_with_lots", failing)

    return install


def plans(netted: tuple[NettedShade, ...]) -> list[Any]:
    """What was planned, without the seconds it took."""
    return [
        (one.shade, one.result.status, one.result.cost, one.result.opened, one.left_mm)
        for one in netted
    ]


@pytest.mark.parametrize(
    "error", [RuntimeError("no such column"), CuttingError("too many pieces"), MemoryError()]
)
@pytest.mark.parametrize("nth", [1, 2, 3])
def test_net_keeps_the_other_shades_where_one_fails(
    fail_on: Callable[[int, BaseException], None], error: Exception, nth: int
) -> None:
    whole = plans(net_three())
    fail_on(nth, error)
    netted = net_three()
    failed = netted[nth - 1]
    assert failed.result.status == "failed"
    assert failed.result.unplaced == ("1", "2", "3", "4", "5")
    assert failed.result.opened == ()
    assert failed.result.bought == ()
    assert not failed.result.cost
    assert failed.left_mm == failed.shelf_mm == 7_000
    assert failed.piece_count == 10
    assert failed.need_mm > 0
    assert [p for n, p in enumerate(plans(netted), 1) if n != nth] == [
        p for n, p in enumerate(whole, 1) if n != nth
    ]


def test_net_says_plainly_why_and_logs_the_rest(
    fail_on: Callable[[int, BaseException], None], caplog: pytest.LogCaptureFixture
) -> None:
    fail_on(2, RuntimeError("no such column"))
    with caplog.at_level(logging.ERROR):
        message = net_three()[1].result.message
    assert "no such column" not in message
    assert "error" in message
    assert "no such column" in caplog.text
    assert "Traceback" in caplog.text


def test_net_passes_on_what_the_solver_refuses_in_words(
    fail_on: Callable[[int, BaseException], None], caplog: pytest.LogCaptureFixture
) -> None:
    fail_on(2, CuttingError("Too many pieces to cut: at most 9 in all."))
    with caplog.at_level(logging.WARNING):
        message = net_three()[1].result.message
    assert "Too many pieces to cut: at most 9 in all." in message
    assert not caplog.records


def test_net_does_not_swallow_an_interrupt(
    fail_on: Callable[[int, BaseException], None],
) -> None:
    fail_on(2, KeyboardInterrupt())
    with pytest.raises(KeyboardInterrupt):
        net_three()


@pytest.mark.parametrize("position", [1, 2, 3])
def test_net_keeps_the_shades_that_are_done_when_it_is_stopped(position: int) -> None:
    whole = plans(net_three())
    netted = net_three(StopsAt(position))
    assert plans(netted)[: position - 1] == whole[: position - 1]
    for one in netted[position:]:
        assert one.result.status == "stopped"
        assert one.result.unplaced == ("1", "2", "3", "4", "5")
        assert one.left_mm == one.shelf_mm
        assert one.result.message
    assert [one.shade for one in netted] == [1, 2, 3]


def test_net_tells_how_far_it_is() -> None:
    watcher = StopsAt(None)
    net_three(watcher)
    assert watcher.heard == [(1, 3, 1), (2, 3, 2), (3, 3, 3)]


def test_net_begins_nothing_after_a_stop() -> None:
    watcher = StopsAt(2)
    net_three(watcher)
    assert watcher.heard == [(1, 3, 1), (2, 3, 2)]


def test_net_lets_the_solver_ask_whether_to_stop(monkeypatch: pytest.MonkeyPatch) -> None:
    solve, asked = netting.solve_with_lots, []

    def asking(*args: Any, stop: Callable[[], bool], **kwargs: Any) -> LotResult:
        asked.append(stop())
        assert kwargs["keep_length_mm"] == 450
        return solve(*args, stop=stop, **kwargs)

    monkeypatch.setattr(netting, "solve_with_lots", asking)
    kinds, bracelets = explode((Order(1, make_kind("A A B B C C"), 5),))
    watcher = StopsAt(2)
    netted = net(kinds, bracelets, (), (make_offer(),), keep_length_mm=450, watcher=watcher)
    assert asked == [False, True]
    assert [one.result.unplaced == () for one in netted] == [True, True, False]


def test_net_out_of_time_has_a_plan_for_every_shade() -> None:
    """A time limit of nothing leaves the quick rules, which always find one."""
    kinds, bracelets = explode((Order(1, make_kind("A A B B C C"), 40),))
    shelf = [make_thread(number, 1_100 + 37 * number) for number in range(1, 30)]
    for one in net(kinds, bracelets, shelf, (make_offer(),), time_limit_s=0.0):
        assert one.result.status in ("optimal", "feasible")
        assert one.result.unplaced == ()
        assert sum(len(opened.pieces) for opened in one.result.opened) == one.piece_count == 80
        assert one.result.lower_bound <= one.result.cost
