"""Knotting cards: of a bracelet chosen now, and of one as a plan has it."""

import io

import pytest
from django.test import Client
from django.urls import reverse
from pypdf import PdfReader

from patterns.actions import change_pattern
from patterns.models import Colourway, Ending, Gauge, KnottedLength, Size
from planner.actions import make_plan
from planner.models import Batch, Plan
from tests.factories import (
    make_colourway,
    make_grid_pattern,
    make_order,
    make_shade,
    make_workshop,
    pattern_text,
)

# ISO 216 and ANSI, in points.
A5 = (pytest.approx(419.53, abs=0.01), pytest.approx(595.28, abs=0.01))
HALF_LETTER = (396, 612)


def card_of(page: Client, way: Colourway, /, **query: object) -> PdfReader:
    response = page.get(reverse("knotting_card", args=[way.pattern_id]), query)
    assert response.status_code == 200, response.content.decode()
    assert response["Content-Type"] == "application/pdf"
    return PdfReader(io.BytesIO(response.content))


def text_of(card: PdfReader) -> str:
    return " ".join(" ".join(page.extract_text() for page in card.pages).split())


def size_of(card: PdfReader) -> tuple[float, float]:
    box = card.pages[0].mediabox
    return float(box.width), float(box.height)


def test_card_of_what_was_chosen(page: Client, colourway: Colourway) -> None:
    make_colourway(colourway.pattern, "Dusk")
    size, ending = Size.objects.get(name="Large"), Ending.objects.exclude(is_default=True)[0]
    card = card_of(page, colourway, size=size.pk, ending=ending.pk, colourway=colourway.pk)
    text = text_of(card)
    assert f"{colourway.name} · Large · {ending.name}" in text
    for shade in colourway.shades_by_slot().values():
        assert shade.code in text
    answer = page.get(
        reverse("pattern_detail", args=[colourway.pattern_id]),
        {"size": size.pk, "ending": ending.pk},
    ).context["answer"]
    assert f"Tie {answer.rows} rows" in text


def test_card_without_choices_takes_the_usual_ones(page: Client, colourway: Colourway) -> None:
    text = text_of(card_of(page, colourway))
    assert Ending.objects.get(is_default=True).name in text
    assert colourway.name in text


def test_card_cut_in_few_lengths(page: Client, colourway: Colourway) -> None:
    detail = page.get(reverse("pattern_detail", args=[colourway.pattern_id]), {"lengths": 1})
    lengths = {line.piece.cut_mm for line in detail.context["answer"].pieces}
    assert len(lengths) == 1
    assert f"{lengths.pop() // 10}" in text_of(card_of(page, colourway, lengths=1))


@pytest.mark.parametrize(("paper", "size"), [("A4", A5), ("Letter", HALF_LETTER)])
def test_card_paper_follows_the_workshop(
    page: Client, colourway: Colourway, paper: str, size: tuple[float, float]
) -> None:
    make_workshop(paper=paper)
    assert size_of(card_of(page, colourway)) == size


def test_card_paper_as_asked(page: Client, colourway: Colourway) -> None:
    assert size_of(card_of(page, colourway, paper="half-letter")) == HALF_LETTER
    assert size_of(card_of(page, colourway, paper="a5")) == A5


@pytest.mark.parametrize(
    ("query", "says"),
    [
        ({"size": "99999"}, "not there any more"),
        ({"size": "soup"}, "not there any more"),
        ({"ending": ""}, "This field is required"),
        ({"gauge": "-1"}, "not there any more"),
        ({"colourway": "99999"}, "not there any more"),
        ({"lengths": "900"}, "not there any more"),
        ({"paper": "a4"}, "There is no such paper. Choose A5 or half Letter."),
        ({"paper": "\x00"}, "There is no such paper"),
    ],
)
def test_card_choice_that_is_not_there(
    page: Client, colourway: Colourway, query: dict[str, str], says: str
) -> None:
    response = page.get(reverse("knotting_card", args=[colourway.pattern_id]), query)
    assert response.status_code == 400
    assert says in response.content.decode()
    assert "Which card of" in response.content.decode()


def test_card_of_a_size_without_a_knotted_length(page: Client, colourway: Colourway) -> None:
    KnottedLength.objects.all().delete()
    response = page.get(reverse("knotting_card", args=[colourway.pattern_id]))
    assert response.status_code == 400
    assert "has no knotted length with" in response.content.decode()


def test_card_of_a_picture_longer_than_the_band(page: Client, colourway: Colourway) -> None:
    rows = ("AB",) * 400
    way = make_colourway(make_grid_pattern("Mast", rows=rows, finish="centred"))
    response = page.get(reverse("knotting_card", args=[way.pattern_id]))
    assert response.status_code == 400
    assert "Choose a longer size" in response.content.decode()


def test_card_in_a_workshop_without_sizes(page: Client, colourway: Colourway) -> None:
    KnottedLength.objects.all().delete()
    Size.objects.all().delete()
    Gauge.objects.all().delete()
    assert page.get(reverse("knotting_card", args=[colourway.pattern_id])).status_code == 400


def test_card_of_a_pattern_without_a_colourway(page: Client, colourway: Colourway) -> None:
    colourway.delete()
    assert "no colourway chosen" in text_of(card_of(page, colourway))


def test_card_of_another_colourway_than_the_patterns(page: Client, colourway: Colourway) -> None:
    other = make_colourway(make_grid_pattern())
    address = reverse("knotting_card", args=[colourway.pattern_id])
    assert page.get(address, {"colourway": other.pk}).status_code == 400


def test_card_that_is_not_there(page: Client, colourway: Colourway) -> None:
    assert page.get(reverse("knotting_card", args=[99999])).status_code == 404
    assert page.post(reverse("knotting_card", args=[colourway.pattern_id])).status_code == 405


def test_card_needs_a_sign_in(client: Client, colourway: Colourway) -> None:
    response = client.get(reverse("knotting_card", args=[colourway.pattern_id]))
    assert response.status_code == 302


# --- of a plan ----------------------------------------------------------------------------------


@pytest.fixture
def plan(colourway: Colourway, batch: Batch) -> Plan:
    make_order(batch, colourway, quantity=2, size="Child")
    heart = make_colourway(make_grid_pattern(carry="cut"), A=make_shade(), B=make_shade())
    make_order(batch, heart)
    return make_plan(batch=batch, user=None)


def plan_card(page: Client, plan: Plan, pattern: str, **query: str) -> PdfReader:
    kind = plan.kinds.get(pattern_name=pattern)
    response = page.get(reverse("plan_card", args=[plan.pk, kind.pk]), query)
    assert response.status_code == 200
    return PdfReader(io.BytesIO(response.content))


def test_plan_card_shows_the_pattern_as_of_the_plan(
    page: Client, plan: Plan, colourway: Colourway
) -> None:
    before = text_of(plan_card(page, plan, "Wave"))
    change_pattern(
        pattern=colourway.pattern, text=pattern_text("Surge", rows=("fb fb fb", "bf bf"))
    )
    after = text_of(plan_card(page, plan, "Wave"))
    assert after == before
    assert f"Plan {plan.number}" in after
    assert "f f f" in after
    assert "fb fb" not in after
    # The card of the pattern itself is the new one.
    assert "fb fb fb" in text_of(card_of(page, colourway))


def test_plan_card_has_the_cautions_of_a_childs_size(page: Client, plan: Plan) -> None:
    assert "Not for children under 3" in text_of(plan_card(page, plan, "Wave"))


def test_plan_card_of_a_grid_lists_its_runs(page: Client, plan: Plan) -> None:
    text = text_of(plan_card(page, plan, "Heart row"))
    kind = plan.kinds.get(pattern_name="Heart row")
    runs = [piece for piece in kind.making["pieces"] if piece["role"] == "run"]
    assert len(runs) > 2
    for number, piece in enumerate(runs, start=1):
        assert f"Run {number} of B: any scrap of {piece['cut_mm'] // 10} cm does" in text


def test_plan_card_paper(page: Client, plan: Plan) -> None:
    assert size_of(plan_card(page, plan, "Wave")) == A5
    assert size_of(plan_card(page, plan, "Wave", paper="half-letter")) == HALF_LETTER
    assert size_of(plan_card(page, plan, "Wave", paper="soup")) == A5


def test_plan_card_is_linked_from_its_bracelets(page: Client, plan: Plan) -> None:
    bracelet = plan.bracelets.all()[0]
    shown = page.get(reverse("bracelet", args=[bracelet.pk])).content.decode()
    address = reverse("plan_card", args=[plan.pk, bracelet.kind_id])
    assert f"{address}?paper=a5" in shown
    assert f"{address}?paper=half-letter" in shown


def test_plan_card_of_another_plan(page: Client, plan: Plan, batch: Batch) -> None:
    other = make_plan(batch=batch, user=None)
    kind = other.kinds.all()[0]
    assert page.get(reverse("plan_card", args=[plan.pk, kind.pk])).status_code == 404
