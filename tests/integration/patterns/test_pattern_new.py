import pytest
from django.core.files.uploadedfile import SimpleUploadedFile
from django.urls import reverse

from patterns.models import Pattern
from patterns.pattern_file import read_pattern
from tests.data_builders.hostile_pastes import hostile_pastes as hostile
from tests.factories import make_pattern, make_shade, pattern_text

NEW = "/patterns/new/"
BY_ROWS = "/patterns/new/rows/"
ROWS = {"name": "Quay", "strands": "A A B B", "rows": "f b\nfb", "finish": "exact"}


def upload(content: bytes, name: str = "quay.toml") -> dict:
    return {"text": "", "file": SimpleUploadedFile(name, content)}


def errors(response) -> str:
    """The words of every error on the page."""
    assert response.status_code == 200
    assert not Pattern.objects.exists()
    form = response.context["form"]
    return " ".join(error for list_ in form.errors.values() for error in list_)


def test_pattern_new_says_the_limit_and_both_ways(maker):
    page = maker.get(NEW).content.decode()
    assert "at most 64 KB" in page
    for way in ("pattern_draw", "pattern_rows", "pattern_family"):
        assert reverse(way) in page
    assert page.count("<form") == 2  # a file, and signing out


def test_pattern_new_pasted_is_kept_as_typed(maker):
    text = "# my own\n" + pattern_text("Quay")
    response = maker.post(NEW, {"text": text.replace("\n", "\r\n")}, follow=True)
    pattern = Pattern.objects.get()
    assert (pattern.name, pattern.text) == ("Quay", text)
    assert response.redirect_chain[-1][0] == reverse("pattern_detail", args=[pattern.pk])
    assert "Quay is in your library." in response.content.decode()


@pytest.mark.parametrize("mark", [b"", b"\xef\xbb\xbf"])
def test_pattern_new_uploaded(maker, mark):
    maker.post(NEW, upload(mark + pattern_text("Quay").encode()))
    assert Pattern.objects.get().text == pattern_text("Quay")


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


@pytest.mark.parametrize(
    ("text", "words"),
    [
        ("", "Paste the text of a pattern file, or choose one."),
        ("   \n ", "Paste the text of a pattern file, or choose one."),
        ("name =", "not valid TOML"),
        ("a\0b", "Line 1 holds a hidden character"),
        ('name = "x"\n' * 2, "not valid TOML"),
        ("a" + ".a" * 30_000 + " = 1", "too many dots"),
        ("x = " + "[" * 20_000, "not valid TOML"),
        ("x" * 65_537, "more than 64 KB"),
        (pattern_text(strands="A A B B C C", rows=("f f f", "f f f")), "Row 2 has 3 knots"),
        (pattern_text("<script>", rows=("f f <script>", "f f")), "Row 1, knot 3: '<script>'"),
    ],
)
def test_pattern_new_pasted_wrong_says_what(maker, text, words):
    response = maker.post(NEW, {"text": text})
    assert words in errors(response)
    assert b"<script>'" not in response.content


@pytest.mark.parametrize(
    ("content", "words"),
    [
        (b"", "The file is empty."),
        (b"\x89PNG\r\n\x1a\n\0\0", "not a text file in UTF-8"),
        (pattern_text().encode("utf-16"), "not a text file in UTF-8"),
        (b"\0" * 100, "hidden character"),
        (b"#" * 65_537, "larger than 64 KB"),
        (b"#" * 3_000_000, "larger than 64 KB"),
    ],
)
def test_pattern_new_uploaded_wrong_says_what(maker, content, words):
    assert words in errors(maker.post(NEW, upload(content)))


def test_pattern_new_uploaded_wrong_stands_in_the_box(maker):
    text = pattern_text(rows=("f f q", "f f"))
    page = maker.post(NEW, upload(text.encode())).content.decode()
    assert "f f q" in page
    assert "Row 1, knot 3" in page


def test_pattern_new_pasted_and_uploaded_asks_for_one(maker):
    data = upload(pattern_text().encode()) | {"text": pattern_text()}
    assert "not both" in errors(maker.post(NEW, data))


def test_pattern_new_with_a_name_that_is_taken_says_so(maker):
    make_pattern("Quay")
    response = maker.post(BY_ROWS, ROWS)
    assert "A pattern called Quay is there already." in response.content.decode()
    assert Pattern.objects.count() == 1


@pytest.mark.parametrize("data", [{}, {"way": "none"}])
@pytest.mark.parametrize("url", [NEW, BY_ROWS])
def test_pattern_new_with_nothing_typed_says_what_it_lacks(maker, url, data):
    assert errors(maker.post(url, data))


def test_pattern_new_refuses_other_methods(maker):
    assert maker.put(NEW).status_code == 405


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


def test_hostile_pastes_are_refused_in_words(maker):
    for number, text in enumerate(hostile()):
        if number % 8:
            continue
        response = maker.post(BY_ROWS, ROWS | {"rows": text, "look": "yes"})
        assert response.status_code == 200
    assert not Pattern.objects.exists()
