import json
import re

import pytest
from django.urls import reverse

from patterns.actions import change_pattern
from patterns.editor_state import write_state
from patterns.models import Pattern
from patterns.pattern_file import read_pattern
from tests.factories import grid_text, make_colourway, make_grid_pattern, make_pattern, pattern_text

PREVIEW = "/patterns/preview/"
DRAW = "/patterns/new/draw/"


def post(maker, url, body):
    text = body if isinstance(body, str | bytes) else json.dumps(body)
    return maker.post(url, text, content_type="application/json")


def state(text=None):
    return write_state(read_pattern(text or pattern_text("Quay")))


def editor_data(response):
    found = re.search(
        r'<script id="editor-data" type="application/json">(.*?)</script>',
        response.content.decode(),
        re.DOTALL,
    )
    return json.loads(found[1])


# --- the page --------------------------------------------------------------------------------


@pytest.mark.parametrize("make", [make_pattern, make_grid_pattern])
def test_editor_begins_with_the_pattern_and_its_colours(maker, make):
    pattern = make("Quay")
    colourway = make_colourway(pattern)
    data = editor_data(maker.get(reverse("pattern_edit", args=[pattern.pk])))
    assert data["state"] == write_state(pattern.definition)
    assert data["version"] == 1
    assert data["colourways"][str(colourway.pk)]["colours"] == data["colours"]
    assert data["colours"] == {
        slot: shade.colour for slot, shade in colourway.shades_by_slot().items()
    }


def test_editor_names_the_text_for_those_without_javascript(maker):
    pattern = make_pattern("Quay")
    page = maker.get(reverse("pattern_edit", args=[pattern.pk])).content.decode()
    assert reverse("pattern_edit_text", args=[pattern.pk]) in page


@pytest.mark.parametrize(("technique", "kind"), [("diagonal", "slots"), ("grid", "background")])
def test_new_pattern_begins_empty_and_can_be_tied(maker, technique, kind):
    data = editor_data(maker.get(DRAW, {"technique": technique}))
    assert kind in data["state"]
    assert data["version"] is None
    assert not Pattern.objects.exists()


def test_name_cannot_break_out_of_the_page(maker):
    pattern = make_pattern("</script><b>Quay")
    response = maker.get(reverse("pattern_edit", args=[pattern.pk]))
    assert b"</script><b>" not in response.content
    assert editor_data(response)["state"]["name"] == "</script><b>Quay"


@pytest.mark.parametrize("url", [PREVIEW, DRAW])
def test_editor_needs_signing_in(client, workshop, url):
    assert post(client, url, {"state": state()}).status_code in (302, 403)
    assert not Pattern.objects.exists()


def test_wrong_methods(maker):
    pattern = make_pattern("Quay")
    assert maker.get(PREVIEW).status_code == 405
    assert maker.put(DRAW).status_code == 405
    assert maker.delete(reverse("pattern_edit", args=[pattern.pk])).status_code == 405


def test_pattern_that_is_gone(maker):
    assert maker.get("/patterns/9999/edit/").status_code == 404
    assert post(maker, "/patterns/9999/edit/", {"state": state()}).status_code == 404


# --- saving ----------------------------------------------------------------------------------


def test_first_saving_puts_it_in_the_library(maker, owner):
    answer = post(maker, DRAW, {"state": state()}).json()
    pattern = Pattern.objects.get()
    assert read_pattern(pattern.text) == read_pattern(pattern_text("Quay"))
    assert answer["version"] == 1
    assert answer["edit_url"] == reverse("pattern_edit", args=[pattern.pk])
    assert pattern.versions.get().created_by == owner


def test_saving_makes_a_version(maker):
    pattern = make_grid_pattern("Quay")
    body = {"state": state(grid_text("Quay", finish="centred")), "version": 1}
    answer = post(maker, reverse("pattern_edit", args=[pattern.pk]), body).json()
    pattern.refresh_from_db()
    assert (answer["version"], pattern.version) == (2, 2)
    assert pattern.definition.finish == "centred"


def test_saved_elsewhere_meanwhile_is_told_and_can_be_kept_beside(maker):
    pattern = make_pattern("Quay")
    change_pattern(pattern=pattern, text=pattern_text("Theirs"))
    url = reverse("pattern_edit", args=[pattern.pk])
    refused = post(maker, url, {"state": state(), "version": 1})
    assert refused.status_code == 409
    assert "saved in another window" in refused.json()["message"]
    assert Pattern.objects.get().name == "Theirs"
    kept = post(maker, DRAW, {"state": state()})
    assert kept.status_code == 200
    assert set(Pattern.objects.values_list("name", flat=True)) == {"Theirs", "Quay"}


def test_saving_names_colourways_that_need_a_shade_now(maker):
    pattern = make_pattern("Quay")
    make_colourway(pattern, "Harbour")
    text = pattern_text("Quay", strands="A A B B D D")
    url = reverse("pattern_edit", args=[pattern.pk])
    words = post(maker, url, {"state": state(text), "version": 1}).json()["words"]
    assert words == "Quay is saved. Colourways that need a shade now: Harbour."


def test_name_that_is_taken_is_told(maker):
    make_pattern("Quay")
    refused = post(maker, DRAW, {"state": state()})
    assert refused.status_code == 422
    assert "called Quay is there already" in refused.json()["message"]


@pytest.mark.parametrize("version", [None, "1", True, [], 1.5])
def test_saving_says_which_version_it_began_with(maker, version):
    pattern = make_pattern("Quay")
    url = reverse("pattern_edit", args=[pattern.pk])
    assert post(maker, url, {"state": state(), "version": version}).status_code == 422


HOSTILE = [
    b"",
    b"{",
    b"\xff\xfe",
    b"null",
    b"[]",
    b"7",
    b'"text"',
    b"[" * 100_000,
    b'{"state": null}',
    b'{"state": {"technique": "diagonal"}}',
    b'{"state": {"technique": "grid", "name": "x", "rows": [[]]}}',
    b'{"state": ' + json.dumps(state()).replace('"f"', '"\\ud800"').encode() + b"}",
    b'{"state": {"technique": "diagonal", "name": "' + b"x" * 600_000 + b'"}}',
]


@pytest.mark.parametrize("body", HOSTILE, ids=range(len(HOSTILE)))
@pytest.mark.parametrize("url", [PREVIEW, DRAW])
def test_hostile_bodies_are_refused_in_words(maker, url, body):
    response = post(maker, url, body)
    assert response.status_code == 422
    message = response.json()["message"]
    assert message.endswith(".")
    assert len(message) < 400
    assert not Pattern.objects.exists()


def test_refusal_names_row_and_knot(maker):
    broken = state() | {"rows": [["f", "f", "f"], ["f", "x"]]}
    answer = post(maker, DRAW, {"state": broken}).json()
    assert (answer["row"], answer["knot"]) == (2, 2)
    assert "Row 2, knot 2: 'x' is not a knot" in answer["message"]


def test_editor_asks_as_often_for_many_colourways_as_for_one(query_count):
    pattern = make_pattern("Quay")
    counts = set()
    for name in ("One", "Two", "Three", "Four"):
        make_colourway(pattern, name=name)
        counts.add(query_count(reverse("pattern_edit", args=[pattern.pk])))
    assert len(counts) == 1


# --- the preview -----------------------------------------------------------------------------


@pytest.mark.parametrize("text", [pattern_text("Quay"), grid_text("Quay")])
def test_preview_shows_the_band_and_the_pieces(maker, text):
    response = post(maker, PREVIEW, {"state": state(text), "choice": {}})
    page = response.content.decode()
    assert response.status_code == 200
    assert "<svg" in page
    assert "Cut these pieces" in page
    assert not Pattern.objects.exists()


def test_preview_is_the_same_as_the_pattern_page(maker):
    pattern = make_pattern("Quay")
    saved = maker.get(reverse("pattern_detail", args=[pattern.pk])).context["answer"]
    shown = post(maker, PREVIEW, {"state": state(), "choice": {}}).context["answer"]
    assert shown == saved


@pytest.mark.parametrize("choice", [7, {"size": "9999"}, {"size": []}, {"colourway": "x"}])
def test_preview_of_a_choice_that_is_gone(maker, choice):
    response = post(maker, PREVIEW, {"state": state(), "choice": choice})
    assert response.status_code in (200, 422)


def test_preview_says_why_there_is_no_answer(maker):
    long = grid_text("Quay", rows=("AB",) * 300, finish="centred")
    page = post(maker, PREVIEW, {"state": state(long), "choice": {}}).content.decode()
    assert "The picture of 300 rows is 540 mm" in page
