"""Ways to make a batch, compared: each against the batch made that way by hand."""

import json
from decimal import Decimal
from urllib.parse import urlencode

import pytest
from django.test import Client
from django.urls import reverse

from inventory.models import PutUp, Shade, Workshop
from patterns.actions import set_colourway
from patterns.models import Colourway, Ending
from planner.actions import make_plan
from planner.models import Batch, Plan, PlanRun
from planner.planning.choices import Choice, ChoiceError, read_choice
from planner.plans.compare import Way, substitutes_of, work_out_way
from planner.plans.pages import what_changed
from planner.plans.posted_choice import choice_to_post, posted_choice
from tests.factories import make_order, make_put_up, make_shade, put_thread

pytestmark = pytest.mark.django_db


@pytest.fixture
def ordered(colourway: Colourway, batch: Batch) -> Batch:
    make_order(batch, colourway, quantity=7)
    make_put_up("cone", supplier="Harbour Row", length_mm=50_000, price="9.00")
    return batch


def worked_out(batch: Batch, choice: Choice):
    return work_out_way(batch, Workshop.objects.get(), Way(choice, "a way"))


def cost_by_hand(batch: Batch) -> Decimal:
    return make_plan(batch=batch, user=None).cost


def test_as_it_stands_costs_what_its_plan_costs(ordered: Batch) -> None:
    row = worked_out(ordered, Choice())
    plan = make_plan(batch=ordered, user=None)
    assert row.sums.cost == plan.cost
    assert row.cost_more == 0
    assert row.sums.cuts == plan.piece_count
    assert row.sums.bought == sum(shade.bought for shade in plan.shades.all())


def test_folded_start_costs_what_the_orders_cost_with_that_ending(ordered: Batch) -> None:
    row = worked_out(ordered, Choice(start="folded"))
    assert any("folded start: " in words for words in row.words)
    line = ordered.lines.get()
    name = next(words for words in row.words if "folded" in words).split(": ")[1].split(" for ")[0]
    line.ending = Ending.objects.get(name=name)
    assert line.ending.start == "folded"
    line.save()
    assert row.sums.cost == cost_by_hand(ordered)


def test_lengths_cost_what_the_orders_cost_with_them(ordered: Batch) -> None:
    row = worked_out(ordered, Choice(lengths="1"))
    ordered.lines.update(distinct_lengths=1)
    assert row.sums.cost == cost_by_hand(ordered)


def test_one_supplier_costs_what_is_sold_by_it_alone(ordered: Batch) -> None:
    row = worked_out(ordered, Choice(supplier="Harbour Row"))
    PutUp.objects.exclude(supplier__name="Harbour Row").delete()
    assert row.sums.cost == cost_by_hand(ordered)
    assert row.sums.cost >= worked_out(ordered, Choice()).sums.cost


def test_whole_skeins_only_is_never_cheaper(ordered: Batch) -> None:
    for shade in Shade.objects.all():
        put_thread(shade, 2_500, 1_900, kind="remnant")
    with_remnants = worked_out(ordered, Choice())
    without = worked_out(ordered, Choice(remnants=False))
    assert with_remnants.sums.proven
    assert without.sums.proven
    assert without.sums.cost >= with_remnants.sums.cost
    assert without.cost_more == without.sums.cost - with_remnants.sums.cost


def test_substitute_from_the_shelf_costs_what_the_other_colourway_costs(ordered: Batch) -> None:
    plenty = make_shade("Z90", "Plenty", colour="#6b7a87")
    put_thread(plenty, *[8_000] * 9)
    ways = substitutes_of(ordered, Workshop.objects.get())
    assert ways
    assert all(str(plenty) in way.title for way in ways)
    row = work_out_way(ordered, Workshop.objects.get(), ways[0])
    assert row.exchanges[0].new == plenty
    line = ordered.lines.get()
    shades = {c.slot: c.shade for c in line.colourway.shades.all()}
    old = row.exchanges[0].old
    changed = {slot: plenty if shade == old else shade for slot, shade in shades.items()}
    line.colourway = set_colourway(pattern=line.pattern, name="Other", shades=changed)
    line.save()
    assert row.sums.cost == cost_by_hand(ordered) < worked_out(ordered, Choice()).sums.cost + 99


def test_plan_of_a_choice_says_so_and_does_not_look_stale(page: Client, ordered: Batch) -> None:
    choice = Choice(remnants=False, lengths="2", supplier="Harbour Row")
    page.post(reverse("plan_new", args=[ordered.pk]), choice_to_post(choice))
    plan = Plan.objects.get()
    assert read_choice(plan.choice["choice"]) == choice
    assert {item.supplier_name for row in plan.shades.all() for item in row.purchases.all()} == {
        "Harbour Row"
    }
    assert what_changed(plan, list(plan.shades.all())) == (False, False)
    text = page.get(reverse("plan_detail", args=[plan.pk])).content.decode()
    assert "whole skeins only, remnants left alone; at most 2 lengths a bracelet" in text
    assert "all new thread from Harbour Row" in text


def test_page_and_every_row_answer(page: Client, ordered: Batch) -> None:
    text = page.get(reverse("choices", args=[ordered.pk])).content.decode()
    assert "All from Harbour Row" in text
    rows = [part.split('"')[0] for part in text.split('hx-get="')[1:]]
    assert len(rows) >= 10
    for address in rows:
        answer = page.get(address.replace("&amp;", "&"))
        assert answer.status_code == 200
    alone = page.get(reverse("choices", args=[ordered.pk]) + "?show=yes&start=folded")
    assert "Plan it so" in alone.content.decode()


HOSTILE = [
    {"remnants": "maybe"},
    {"start": "sideways"},
    {"lengths": "0"},
    {"lengths": "99"},
    {"lengths": "٣"},
    {"supplier": "Nobody"},
    {"supplier": "x" * 5_000},
    {"supplier": "\x00"},
    {"substitutes": "1"},
    {"substitutes": "1-999999999999999999"},
    {"substitutes": "a-b"},
    {"substitutes": " ".join(["1-2"] * 101)},
    {"substitutes": "9" * 40 + "-1"},
    {"title": "<script>" * 50, "start": "folded"},
]


@pytest.mark.parametrize("asked", HOSTILE, ids=lambda asked: str(asked)[:40])
def test_choice_that_is_none_is_refused_in_words(
    page: Client, ordered: Batch, asked: dict[str, str]
) -> None:
    query = urlencode(asked)
    for name in ("choices", "choice_row"):
        answer = page.get(reverse(name, args=[ordered.pk]) + f"?{query}")
        assert answer.status_code in (200, 422)
        assert "<script>&lt;" not in answer.content.decode()
        assert "<script><script>" not in answer.content.decode()
    if "title" not in asked:
        assert 'class="problem"' in answer.content.decode()
        page.post(reverse("plan_new", args=[ordered.pk]), asked)
        assert not Plan.objects.exists()


def test_another_choice_does_not_silently_lead_to_the_run_under_way(
    page: Client, ordered: Batch
) -> None:
    run = PlanRun.objects.create(batch=ordered, choice={})
    answer = page.post(reverse("plan_new", args=[ordered.pk]), {"start": "folded"}, follow=True)
    assert answer.redirect_chain[-1][0] == reverse("run_detail", args=[run.pk])
    assert "Another plan of this batch is being worked out" in answer.content.decode()


@pytest.mark.parametrize(
    "values",
    [
        None,
        [],
        {"remnants": "yes"},
        {"start": ["folded"]},
        {"lengths": 2},
        {"supplier": None},
        {"substitutes": "1-2"},
        {"substitutes": [[1, 2, 3]]},
        {"substitutes": [[1, True]]},
        {"substitutes": [[1, 10**30]]},
        {"stalls": 3},
    ],
    ids=str,
)
def test_stored_choice_that_is_none_is_refused(values: object) -> None:
    with pytest.raises(ChoiceError):
        read_choice(values)


def test_choice_is_the_same_there_and_back() -> None:
    choice = Choice(False, "folded", "3", "Quay Threads", ((1, 2), (3, 4)))
    assert read_choice(json.loads(json.dumps(choice.as_json()))) == choice
    assert posted_choice(choice_to_post(choice)) == choice
    assert posted_choice({}) == Choice()
    assert Choice().as_json() == choice_to_post(Choice()) == {}


def test_row_is_worked_out_anew_when_the_ending_it_takes_changes(ordered: Batch) -> None:
    before = worked_out(ordered, Choice(start="folded")).sums
    for ending in Ending.objects.filter(start="folded"):
        ending.end_tie_mm += 2_000
        ending.save()
    after = worked_out(ordered, Choice(start="folded")).sums
    assert after.cost > before.cost


def test_plan_made_anew_keeps_its_choice(page: Client, ordered: Batch) -> None:
    page.post(reverse("plan_new", args=[ordered.pk]), {"supplier": "Harbour Row"})
    ordered.lines.update(quantity=8)
    text = page.get(reverse("plan_detail", args=[Plan.objects.get().pk])).content.decode()
    assert "Make a new plan" in text
    assert '<input type="hidden" name="supplier" value="Harbour Row">' in text
