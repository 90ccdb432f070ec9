import pytest
from django.urls import reverse

from patterns.models import Pattern
from patterns.pattern_file import read_pattern
from tests.data_builders.hostile_pastes import hostile_pastes as hostile
from tests.factories import make_pattern, make_shade

NEW = "/patterns/new/"
BY_ROWS = "/patterns/new/rows/"
ROWS = {"name": "Quay", "strands": "A A B B", "rows": "f b\nfb", "finish": "exact"}


def errors(response) -> str:
    """The words of every error on the page."""
    assert response.status_code == 200
    assert not Pattern.objects.exists()
    form = response.context["form"]
    return " ".join(error for list_ in form.errors.values() for error in list_)


def test_pattern_new_offers_every_way(maker):
    page = maker.get(NEW).content.decode()
    for way in ("pattern_draw", "pattern_rows", "pattern_family", "pattern_import"):
        assert reverse(way) in page


def test_pattern_new_typed_becomes_the_same_text_as_a_file(maker):
    maker.post(BY_ROWS, ROWS | {"name": 'Quay "north" \\ side', "finish": "nearest"})
    pattern = Pattern.objects.get()
    definition = read_pattern(pattern.text)
    assert definition.name == pattern.name == 'Quay "north" \\ side'
    assert (definition.slots, definition.finish) == (("A", "A", "B", "B"), "nearest")
    assert [[str(knot) for knot in row] for row in definition.rows] == [["f", "b"], ["fb"]]


def test_pattern_new_next_step_is_a_shade_then_a_colourway(maker):
    page = maker.post(BY_ROWS, ROWS, follow=True).content.decode()
    assert "you have no shades yet" in page
    assert reverse("shade_new") in page
    make_shade()
    pattern = Pattern.objects.get()
    page = maker.get(reverse("pattern_detail", args=[pattern.pk])).content.decode()
    assert f'class="button main" href="{reverse("colourway_new", args=[pattern.pk])}"' in page


@pytest.mark.parametrize(
    ("change", "words"),
    [
        ({"name": ""}, "Fill this in."),
        ({"name": "n" * 10_000}, "80 characters"),
        ({"name": "a\u202eb"}, "hidden character"),
        ({"name": "a\0b"}, "hidden character"),
        ({"strands": "A"}, "2 to 60 strands"),
        ({"strands": "A " * 61}, "2 to 60 strands"),
        ({"strands": "A B ! C"}, "Strand 3: '!'"),
        ({"rows": "f b\nf q"}, "Row 2, knot 2: 'q' is not a knot"),
        ({"rows": "f b"}, "2 to 400 rows"),
        ({"rows": "f b\nf b"}, "Row 2 has 2 knots; 4 strands need 1"),
        ({"rows": "f b\nffb"}, "Row 2, knot 1: 'ffb' may be f f b or f fb"),
        ({"rows": "f b\nf\nf b"}, "even number of rows"),
        ({"strands": "A 5"}, "Strand 2: '5' does not say which letter"),
        ({"technique": "knitted"}, "Choose one from the list."),
        ({"finish": "centred"}, "Only grid patterns can be centred."),
        ({"technique": "grid", "rows": "AB\nABA", "strands": ""}, "Row 2, column 3: the row has"),
        ({"technique": "grid", "rows": "A", "strands": ""}, "2 to 60 columns"),
        ({"technique": "grid", "rows": "AB"}, "Cells have one background"),
        ({"rows": 'f b\n"""\nfinish = "exact"'}, "is not a knot"),
        ({"rows": "f b\n\x07"}, "Line 2 holds a hidden character"),
        ({"rows": "f " * 40_000}, "more than 64 KB"),
        ({"finish": "never"}, "Choose one from the list."),
    ],
)
def test_pattern_new_typed_wrong_says_what_and_where(maker, change, words):
    response = maker.post(BY_ROWS, ROWS | change)
    assert words in errors(response)


@pytest.mark.parametrize("strands", ["A", "A B ! C", "A ? C", "A " * 61])
def test_pattern_new_typed_wrong_strands_are_marked_there(maker, strands):
    form = maker.post(BY_ROWS, ROWS | {"strands": strands}).context["form"]
    assert list(form.errors) == ["strands"]


@pytest.mark.parametrize("strands", ["A B", "A B C", "A B C D", "A B C D E"])
def test_pattern_new_typed_wrong_rows_are_marked_there(maker, strands):
    data = ROWS | {"strands": strands, "rows": "f f f f\nf"}
    assert list(maker.post(BY_ROWS, data).context["form"].errors) == ["rows"]


def test_pattern_new_typed_wrong_loses_nothing(maker):
    page = maker.post(BY_ROWS, ROWS | {"rows": "f b\nf q"}).content.decode()
    assert 'value="Quay"' in page
    assert "f b\nf q" in page


def test_pattern_new_with_a_name_that_is_taken_says_so(maker):
    make_pattern("Quay")
    response = maker.post(BY_ROWS, ROWS)
    assert "A pattern called Quay is there already." in response.content.decode()
    assert Pattern.objects.count() == 1


@pytest.mark.parametrize("data", [{}, {"way": "none"}])
def test_pattern_new_with_nothing_typed_says_what_it_lacks(maker, data):
    assert errors(maker.post(BY_ROWS, data))


def test_pattern_new_refuses_other_methods(maker):
    assert maker.post(NEW).status_code == 405


# --- by its rows, as makers type them --------------------------------------------------------


def test_rows_in_the_words_of_makers(maker):
    typed = "Row 1: F, B\n2. 1f\n(f) x2\n- # nothing here"
    maker.post(BY_ROWS, ROWS | {"strands": "aabb", "rows": "f b\nfb\nx2"})
    pattern = Pattern.objects.get()
    assert [" ".join(row) for row in pattern.definition.rows] == ["f b", "fb", "f b", "fb"]
    assert "".join(pattern.definition.slots) == "AABB"
    problems = errors_of(maker.post(BY_ROWS, ROWS | {"name": "Other", "rows": typed}))
    assert any("Row 4" in problem for problem in problems)


def errors_of(response):
    return [error for list_ in response.context["form"].errors.values() for error in list_]


@pytest.mark.parametrize(
    ("rows", "strands"),
    [("f\n-", "AB"), ("f f f\nf f", "ABCDEF"), ("f f f\nb b b", "ABCDEFG"), ("2f\n1b", "ABCD")],
)
def test_strands_left_empty_are_as_many_as_the_rows_need(maker, rows, strands):
    maker.post(BY_ROWS, ROWS | {"strands": "", "rows": rows})
    assert "".join(Pattern.objects.get().definition.slots) == strands


def test_every_row_that_is_not_understood_is_named(maker):
    response = maker.post(BY_ROWS, ROWS | {"rows": "f huh\nffb\n9999f"})
    page = response.content.decode()
    for part in ("Row 1, knot 2: ", "huh", "Row 2, knot 1: ", "may be f f b", "Row 3, knot 1: "):
        assert part in page
    assert "f huh\nffb\n9999f" in page
    assert not Pattern.objects.exists()


@pytest.mark.parametrize("headers", [{}, {"HX-Request": "true"}])
def test_looking_saves_nothing(maker, headers):
    response = maker.post(BY_ROWS, ROWS | {"look": "yes"}, headers=headers)
    page = response.content.decode()
    assert "<svg" in page
    assert "Row 1: f b" in page
    assert page.startswith("<section") == bool(headers)
    assert not Pattern.objects.exists()
    assert maker.post(BY_ROWS, {"look": "yes"}, headers=headers).status_code == 200


def test_rows_of_cells_become_a_grid_pattern(maker):
    typed = {"technique": "grid", "strands": "", "rows": "3A 2B\nAABBA\nx2", "finish": "centred"}
    maker.post(BY_ROWS, ROWS | typed)
    definition = Pattern.objects.get().definition
    assert definition.technique == "grid"
    assert ["".join(row) for row in definition.rows] == ["AAABB", "AABBA"] * 2
    assert (definition.background, definition.finish) == ("A", "centred")


@pytest.mark.parametrize(("typed", "background"), [("b", "B"), ("", "C")])
def test_background_of_cells_is_typed_or_the_letter_used_most(maker, typed, background):
    maker.post(BY_ROWS, ROWS | {"technique": "grid", "strands": typed, "rows": "CCB\nACC"})
    assert Pattern.objects.get().definition.background == background


def test_look_shows_every_row_and_draws_what_is_right(maker):
    typed = ROWS | {"rows": "f b\nfb\nf huh\nf f f", "look": "yes"}
    page = maker.post(BY_ROWS, typed, headers={"HX-Request": "true"}).content.decode()
    assert page.startswith("<section")
    assert "Row 1: f b<" in page
    assert "Row 3: f<" in page
    assert "knot 2: &#x27;huh&#x27; is not a knot" in page
    assert "3 knots; 4 strands need 1 here" in page
    assert "<svg" in page
    assert "Drawn as far as the rows are right." in page
    assert not Pattern.objects.exists()


def test_look_needs_no_name(maker):
    page = maker.post(BY_ROWS, ROWS | {"name": "", "look": "yes"}).content.decode()
    assert "<svg" in page
    assert "Row 2: fb" in page


def test_look_and_page_show_the_same(maker):
    typed = ROWS | {"rows": "f b\nffb", "look": "yes"}
    fragment = maker.post(BY_ROWS, typed, headers={"HX-Request": "true"}).content.decode()
    whole = maker.post(BY_ROWS, typed).content.decode()
    assert fragment.strip() in whole
    assert "f b\nffb</textarea>" in whole


@pytest.mark.parametrize("technique", ["diagonal", "grid"])
def test_hostile_pastes_are_answered(maker, technique):
    """Every eighth of the hostile pastes, through the whole page, with and without strands."""
    for number, text in enumerate(list(hostile())[::8]):
        typed = {"technique": technique, "rows": text, "strands": "" if number % 2 else "AABB"}
        for headers in ({}, {"HX-Request": "true"}):
            response = maker.post(BY_ROWS, ROWS | typed | {"look": "yes"}, headers=headers)
            assert response.status_code == 200
    assert not Pattern.objects.exists()
