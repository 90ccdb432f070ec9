"""`manage.py plan`: plans a list without saving, and says in one line what is wrong."""

import json
import os
import signal
import subprocess
import sys
from io import StringIO
from pathlib import Path
from typing import Any

import pytest
from django.core.management import CommandError, call_command

from inventory.models import PutUp
from patterns.models import Colourway, KnottedLength
from planner.cutting import LotResult
from planner.management.commands.plan import Command
from planner.models import Batch, OrderLine, Plan
from planner.planning import netting
from planner.plans.shell_watch import CLEAR_LINE
from tests.factories import put_thread

LIST = "pattern;size;quantity\nWave;Medium;2\nWave;16 cm;1\n"


def run(*arguments: str) -> str:
    out = StringIO()
    call_command("plan", *arguments, stdout=out)
    return out.getvalue()


def refused(*arguments: str) -> str:
    with pytest.raises(CommandError) as caught:
        run(*arguments)
    assert caught.value.returncode == 2
    message = str(caught.value)
    assert "\n" not in message
    return message


@pytest.fixture
def orders(tmp_path: Path) -> Path:
    path = tmp_path / "orders.csv"
    path.write_text(LIST)
    return path


def test_plan_prints_sums_that_close_and_saves_nothing(colourway: Colourway, orders: Path) -> None:
    put_thread(colourway.shades_by_slot()["A"], 5_000)
    found: dict[str, Any] = json.loads(run(str(orders), "--json"))
    assert found["bracelets"] == 3
    assert found["pieces"] == 18
    assert len(found["shades"]) == 3
    for shade in found["shades"]:
        new_mm = sum(item["count"] * item["reckoned_mm"] for item in shade["buy"])
        assert shade["left_mm"] == shade["shelf_mm"] + new_mm - shade["need_mm"]
        assert float(shade["lower_bound"]) <= sum(float(item["cost"]) for item in shade["buy"])
    assert float(found["cost"]) == pytest.approx(
        sum(float(item["cost"]) for shade in found["shades"] for item in shade["buy"])
    )
    assert not OrderLine.objects.exists()
    assert not Batch.objects.exists()
    assert not Plan.objects.exists()


def test_plan_writes_the_sheets(colourway: Colourway, orders: Path, tmp_path: Path) -> None:
    folder = tmp_path / "new" / "sheets"
    run(str(orders), "--sheets", str(folder))
    assert {path.name for path in folder.iterdir()} == {
        "purchase.pdf",
        "cutting.pdf",
        "tags.pdf",
        "purchase.csv",
        "purchase.xlsx",
    }
    assert (folder / "tags.pdf").read_bytes().startswith(b"%PDF-")


def test_plan_in_words(colourway: Colourway, orders: Path) -> None:
    assert "3 bracelets, 18 pieces" in run(str(orders))


@pytest.mark.parametrize(
    ("content", "message"),
    [
        (b"", "list is empty"),
        (b"pattern;size\nWafe;Medium\n", "Did you mean Wave?"),
        (b"pattern;size;quantity\nWave;Medium;-3\nWave;Medium;0\n", "2 rows are wrong"),
        (b"PK\x03\x04 no workbook", ""),
        (b"\x00\xff\xfe" * 50, ""),
    ],
)
def test_plan_refuses_bad_lists_in_one_line(
    colourway: Colourway, tmp_path: Path, content: bytes, message: str
) -> None:
    path = tmp_path / "orders.csv"
    path.write_bytes(content)
    assert message in refused(str(path))


def test_plan_refuses_what_is_no_file(colourway: Colourway, tmp_path: Path) -> None:
    assert "no file" in refused(str(tmp_path / "none.csv"))
    assert "not a file" in refused(str(tmp_path))


def test_plan_refuses_a_folder_that_cannot_be_made(colourway: Colourway, orders: Path) -> None:
    assert "orders.csv" in refused(str(orders), "--sheets", str(orders / "below"))


def test_plan_without_a_workshop_says_so(db: None, orders: Path) -> None:
    assert "no workshop yet" in refused(str(orders))


def test_plan_names_the_row_of_the_file(colourway: Colourway, tmp_path: Path) -> None:
    KnottedLength.objects.filter(size__name="Large").delete()
    path = tmp_path / "orders.csv"
    path.write_text("pattern,size\nWave,Medium\n\nWave,Large\n")
    assert refused(str(path)).startswith("Row 4: Large has no knotted length")


def test_plan_without_arguments_says_so_in_one_line(capsys: pytest.CaptureFixture[str]) -> None:
    with pytest.raises(SystemExit) as caught:
        Command().run_from_argv(["manage.py", "plan"])
    assert caught.value.code == 2
    assert capsys.readouterr().err.count("\n") == 1


def test_plan_without_a_database_says_so_in_one_line(tmp_path: Path, orders: Path) -> None:
    found = subprocess.run(
        [sys.executable, "manage.py", "plan", str(orders), "--data", str(tmp_path / "nowhere")],
        capture_output=True,
        text=True,
        cwd=Path(__file__).parents[3],
        env={**os.environ, "DJANGO_SETTINGS_MODULE": "planner.settings.local"},
    )
    assert found.returncode == 2
    assert found.stderr.count("\n") == 1
    assert "Traceback" not in found.stderr


def test_plan_without_put_ups_names_the_tags(colourway: Colourway, orders: Path) -> None:
    PutUp.objects.all().delete()
    found = json.loads(run(str(orders), "--json"))
    assert all(shade["unplaced_tags"] == [1, 2, 3] for shade in found["shades"])


class Terminal(StringIO):
    def isatty(self) -> bool:
        return True


def run_watched(stream: StringIO, *arguments: str) -> str:
    out = StringIO()
    call_command("plan", *arguments, stdout=out, stderr=stream)
    return out.getvalue()


def test_plan_tells_a_terminal_how_far_it_is(colourway: Colourway, orders: Path) -> None:
    terminal, file = Terminal(), StringIO()
    assert run_watched(terminal, str(orders)) == run_watched(file, str(orders))
    shade = colourway.shades_by_slot()["A"]
    assert f"Shade 1 of 3: {shade}" in terminal.getvalue()
    assert terminal.getvalue().endswith(CLEAR_LINE)
    assert file.getvalue() == ""


def test_plan_stops_on_an_interrupt_with_the_shades_that_are_done(
    colourway: Colourway, orders: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    solve, calls = netting.solve_with_lots, []

    def interrupted(*args: Any, **kwargs: Any) -> LotResult:
        calls.append(1)
        if len(calls) == 2:
            signal.raise_signal(signal.SIGINT)
        return solve(*args, **kwargs)

    monkeypatch.setattr(netting, "solve_with_lots", interrupted)
    before = signal.getsignal(signal.SIGINT)
    said = run_watched(terminal := Terminal(), str(orders))
    assert "Stopping with the shades that are done" in terminal.getvalue()
    assert "not worked out: stopped before it was its turn" in said
    assert "1 of 3 shades was not worked out." in said
    assert signal.getsignal(signal.SIGINT) is before


def test_plan_gives_up_on_the_second_interrupt(
    colourway: Colourway, orders: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    def interrupted(*args: Any, **kwargs: Any) -> LotResult:
        signal.raise_signal(signal.SIGINT)
        signal.raise_signal(signal.SIGINT)
        raise AssertionError("went on")

    monkeypatch.setattr(netting, "solve_with_lots", interrupted)
    before = signal.getsignal(signal.SIGINT)
    with pytest.raises(KeyboardInterrupt):
        run(str(orders))
    assert signal.getsignal(signal.SIGINT) is before
