"""The sample workshop: what is in it, that all of it can be planned, and that it never overwrites."""

import csv
import json
from collections.abc import Callable
from datetime import date, timedelta

import pytest
from django.contrib.auth.models import User
from django.core.management import ManagementUtility, call_command
from django.core.management.base import CommandError
from django.db import IntegrityError
from django.test import Client
from django.urls import reverse

from inventory.models import Lot, PutUp, Shade, ShelfPiece, Supplier, Workshop
from patterns.actions import missing_slots
from patterns.alphabet import lettering
from patterns.geometry import Gauge, StrandTable
from patterns.grid import GridPattern
from patterns.knots import DiagonalPattern, Finish, Knot
from patterns.models import Colourway, KnottedLength, Pattern
from patterns.pattern_file import read_pattern, write_pattern
from patterns.techniques import strand_table
from planner.actions import WorkshopExists, make_plan
from planner.models import Batch, OrderLine
from planner.order_list.lines import read_lines
from planner.order_list.table import read_table
from planner.orders.catalogue import load_catalogue
from planner.sample.load import FOLDER, load_sample, market_day
from tests.factories import make_batch, make_pattern, make_put_up, make_shade, make_workshop

# A Friday: the market of the next day would leave no time to knot.
FRIDAY = date(2026, 11, 6)
MODELS = (Workshop, Supplier, PutUp, Shade, Lot, ShelfPiece, Pattern, Colourway, Batch, OrderLine)


@pytest.fixture
def sample(db: None) -> Workshop:
    return load_sample()


def rows_by_model() -> dict[str, int]:
    return {model.__name__: model._default_manager.count() for model in MODELS}


def bracelet_of_145_mm(pattern: Pattern) -> StrandTable:
    return strand_table(pattern.definition, 145, Gauge())


def test_sample_holds_what_was_asked_for(sample: Workshop) -> None:
    assert Pattern.objects.count() >= 12
    assert Shade.objects.count() == 24
    assert ShelfPiece.objects.on_shelf().count() == 60
    assert Batch.objects.count() == 3
    assert Batch.objects.get(name="Saturday's market").lines.count() == 40


def test_sample_patterns_span_4_to_24_strands_odd_and_even(sample: Workshop) -> None:
    counts = set(Pattern.objects.values_list("strand_count", flat=True))
    assert (min(counts), max(counts)) == (4, 24)
    assert {count % 2 for count in counts} == {0, 1}


def test_sample_patterns_use_every_kind_of_knot(sample: Workshop) -> None:
    used = {
        knot
        for pattern in Pattern.objects.all()
        if isinstance(pattern.definition, DiagonalPattern)
        for row in pattern.definition.rows
        for knot in row
    }
    assert used == set(Knot)


def test_sample_grid_patterns_show_whole_pictures_on_every_wrist(sample: Workshop) -> None:
    grids = [p for p in Pattern.objects.all() if isinstance(p.definition, GridPattern)]
    assert len(grids) == 4
    pictures = [p.definition for p in grids if p.definition.finish is Finish.CENTRED]
    assert len(pictures) == 2
    for picture in pictures:
        # A band of 130 to 170 mm; a row adds 2 diameters of 0.9 mm.
        assert len(picture.rows) * 1.8 < 130
    for pattern in grids:
        for length_mm in (130, 170):
            table = strand_table(pattern.definition, length_mm, Gauge())
            assert table.band_length_mm == pytest.approx(length_mm, abs=10 * 1.8)
            assert table.band_width_mm <= 25


def test_sample_name_is_written_in_the_built_in_alphabet(sample: Workshop) -> None:
    pattern = Pattern.objects.get(name="Name on the bow").definition
    assert isinstance(pattern, GridPattern)
    lit = tuple(tuple(slot != pattern.background for slot in row[1:-1]) for row in pattern.rows)
    assert lit == lettering("♥Marit♥", 7, "along")


def test_sample_patterns_use_thread_evenly_and_unevenly(sample: Workshop) -> None:
    tied = {
        pattern.name: [strand.tied for strand in bracelet_of_145_mm(pattern).strands]
        for pattern in Pattern.objects.all()
    }
    assert max(tied["Windlass"]) == min(tied["Windlass"])
    assert max(tied["Breakwater"]) - min(tied["Breakwater"]) <= 2
    planks = bracelet_of_145_mm(Pattern.objects.get(name="Deck planks"))
    assert set(tied["Deck planks"]) == {0, planks.rows}


def test_sample_pattern_files_are_written_as_the_project_writes_them() -> None:
    paths = sorted((FOLDER / "patterns").glob("*.toml"))
    assert len(paths) >= 12
    for path in paths:
        text = path.read_text(encoding="utf-8")
        assert write_pattern(read_pattern(text)) == text, path.name


def test_sample_fish_are_never_cut_in_two(sample: Workshop) -> None:
    herring = Pattern.objects.get(name="Herring run")
    for length_mm in range(95, 201):
        rows = strand_table(herring.definition, length_mm, Gauge()).rows
        assert rows % herring.repeat_rows == 0, length_mm


def test_sample_colourways_are_complete_and_each_shade_is_used(sample: Workshop) -> None:
    colourways = Colourway.objects.prefetch_related("shades__shade").select_related("pattern")
    assert not any(missing_slots(colourway) for colourway in colourways)
    used = {row.shade_id for colourway in colourways for row in colourway.shades.all()}
    assert used == set(Shade.objects.values_list("pk", flat=True))
    for pattern in Pattern.objects.all():
        assert 1 <= pattern.colourways.count() <= 3


def test_sample_colourways_give_two_slots_two_shades(sample: Workshop) -> None:
    for colourway in Colourway.objects.all():
        shades = [shade.pk for shade in colourway.shades_by_slot().values()]
        assert len(shades) == len(set(shades)), str(colourway)


def test_sample_rows_pass_the_checks_of_their_forms(sample: Workshop) -> None:
    for model in MODELS:
        for row in model._default_manager.all():
            row.full_clean()


def test_sample_shades_differ_in_code_name_and_colour(sample: Workshop) -> None:
    for field in ("code", "name", "colour"):
        assert len(set(Shade.objects.values_list(field, flat=True))) == 24


def test_sample_shelf_has_several_lots_and_shades_that_ran_out(sample: Workshop) -> None:
    assert set(ShelfPiece.objects.values_list("kind", flat=True)) == set(ShelfPiece.Kind.values)
    lots = [shade.lots.count() for shade in Shade.objects.all()]
    assert max(lots) == 3
    assert lots.count(0) >= 3


def test_sample_sells_a_skein_of_8_m_in_every_shade(sample: Workshop) -> None:
    assert PutUp.objects.filter(length_mm=8_000, for_every_shade=True).exists()
    assert PutUp.objects.filter(length_mm__gt=8_000, for_every_shade=False).exists()
    assert Supplier.objects.count() == 2


def test_sample_orders_have_a_length_for_their_size_and_ending(sample: Workshop) -> None:
    known = set(KnottedLength.objects.values_list("size", "ending"))
    assert set(OrderLine.objects.values_list("size", "ending")) <= known


@pytest.mark.parametrize(
    ("name", "bracelets"),
    [
        ("Saturday's market", 85),
        ("Wedding at the old lifeboat house", 17),
        ("Harbour school's choir", 31),
    ],
)
def test_sample_batches_are_planned_whole(
    sample: Workshop, owner: User, name: str, bracelets: int
) -> None:
    plan = make_plan(batch=Batch.objects.get(name=name), user=owner)
    assert plan.problems == []
    assert plan.bracelet_count == bracelets
    assert all(shade.unplaced == [] for shade in plan.shades.all())


def test_sample_market_needs_thread_from_the_shelf_and_from_the_shop(
    sample: Workshop, owner: User
) -> None:
    plan = make_plan(batch=Batch.objects.get(name="Saturday's market"), user=owner)
    assert plan.shades.filter(usable_mm__gt=0).exists()
    assert plan.shades.filter(shelf_mm=0, bought__gt=0).exists()
    assert plan.shades.filter(bought=0).exists()


def test_market_day_leaves_time_to_knot() -> None:
    # Weekdays looked up with `cal 11 2026`.
    assert market_day(FRIDAY, "Saturday", 6) == date(2026, 11, 14)
    assert market_day(date(2026, 11, 8), "Saturday", 6) == date(2026, 11, 14)
    assert market_day(date(2026, 11, 9), "Saturday", 6) == date(2026, 11, 21)


@pytest.mark.parametrize("days", [0, 1, 2])
def test_sample_days_are_ahead_from_friday_saturday_and_sunday(
    db: None, monkeypatch: pytest.MonkeyPatch, days: int
) -> None:
    today = FRIDAY + timedelta(days=days)
    monkeypatch.setattr("planner.sample.load.timezone.localdate", lambda: today)
    load_sample()
    market = Batch.objects.get(name="Saturday's market")
    assert market.market_date is not None
    assert market.market_date.isoweekday() == 6
    for line in OrderLine.objects.select_related("batch"):
        assert line.due_date is not None
        assert line.batch.market_date is not None
        assert today < line.due_date <= line.batch.market_date
    earlier = market.lines.filter(due_date__lt=market.market_date)
    assert [line.for_whom for line in earlier][:3] == [
        "the ferry's deck crew",
        "the ferry's galley",
        "the ferry's engine room",
    ]
    assert earlier.count() == 5


def test_sample_order_list_is_read_back_without_a_remark(sample: Workshop) -> None:
    data = (FOLDER / "saturday_market.csv").read_bytes()
    reading = read_lines(
        read_table(data, "saturday_market.csv"),
        load_catalogue(),
        today=FRIDAY,
        market_date=None,
    )
    assert (len(reading.good), reading.bad, reading.notices) == (40, (), ())
    assert reading.ignored_columns == ()
    assert not any(line.notices for line in reading.good)


def test_sample_order_list_pastes_like_cells_of_a_spreadsheet(sample: Workshop) -> None:
    text = (FOLDER / "saturday_market.csv").read_text(encoding="utf-8")
    pasted = "\n".join("\t".join(row) for row in csv.reader(text.splitlines()))
    reading = read_lines(
        read_table(pasted.encode()), load_catalogue(), today=FRIDAY, market_date=None
    )
    assert (len(reading.good), reading.bad) == (40, ())


def test_load_sample_twice_is_refused_and_changes_nothing(sample: Workshop) -> None:
    before = rows_by_model()
    with pytest.raises(WorkshopExists, match="There is a workshop here already"):
        load_sample()
    assert rows_by_model() == before


@pytest.mark.parametrize(
    ("make", "named"),
    [
        (make_workshop, "a workshop"),
        (make_shade, "a shade"),
        (make_put_up, "a supplier"),
        (make_pattern, "a pattern"),
        (make_batch, "a batch"),
    ],
)
def test_load_sample_beside_anything_is_refused_and_changes_nothing(
    db: None, make: Callable[[], object], named: str
) -> None:
    make()
    before = rows_by_model()
    with pytest.raises(WorkshopExists, match=named):
        load_sample()
    assert rows_by_model() == before


def test_load_sample_that_loses_a_race_says_so(db: None, monkeypatch: pytest.MonkeyPatch) -> None:
    def taken(**_: object) -> Workshop:
        raise IntegrityError("UNIQUE constraint failed: inventory_workshop.id")

    monkeypatch.setattr("planner.sample.load.start_workshop", taken)
    with pytest.raises(WorkshopExists, match="already"):
        load_sample()
    assert not Shade.objects.exists()


def test_load_sample_that_breaks_half_way_leaves_nothing(
    db: None, monkeypatch: pytest.MonkeyPatch
) -> None:
    def broken(**_: object) -> None:
        raise RuntimeError("the lamp went out")

    monkeypatch.setattr("planner.sample.load.append_lines", broken)
    with pytest.raises(RuntimeError):
        load_sample()
    assert set(rows_by_model().values()) == {0}


def test_sample_command_says_what_it_loaded_in_one_line(
    db: None, capsys: pytest.CaptureFixture[str]
) -> None:
    call_command("sample")
    out = capsys.readouterr().out
    assert out.count("\n") == 1
    assert "24 shades, 60 pieces of thread, 3 batches" in out


def test_sample_command_prints_counts_as_json(db: None, capsys: pytest.CaptureFixture[str]) -> None:
    call_command("sample", "--json")
    counts = json.loads(capsys.readouterr().out)
    assert counts.pop("workshop") == Workshop.objects.get().name
    assert counts["lines"] == OrderLine.objects.count()
    assert (counts["shades"], counts["pieces"], counts["batches"]) == (24, 60, 3)


def test_sample_command_refuses_a_second_time(db: None, capsys: pytest.CaptureFixture[str]) -> None:
    call_command("sample")
    before = rows_by_model()
    capsys.readouterr()
    with pytest.raises(SystemExit) as stop:
        ManagementUtility(["manage.py", "sample"]).execute()
    out, err = capsys.readouterr()
    assert (stop.value.code, out, err.count("\n")) == (2, "", 1)
    assert "There is a workshop here already." in err
    assert rows_by_model() == before


def test_sample_command_with_a_stray_argument_is_refused(db: None) -> None:
    with pytest.raises(CommandError):
        call_command("sample", "elsewhere")
    assert not Workshop.objects.exists()


def test_sample_is_opened_from_the_welcome_page(owner_client: Client) -> None:
    response = owner_client.post(reverse("open_sample"), follow=True)
    assert response.status_code == 200
    assert "Saturday&#x27;s market" in response.content.decode()
    assert OrderLine.objects.count() > 40
