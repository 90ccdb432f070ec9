"""Pattern files in: looked through first, then all that was decided is done, or none of it."""

import io
import zipfile

import pytest
from django.contrib.auth.models import User
from django.core.files.uploadedfile import SimpleUploadedFile
from django.test import Client
from django.urls import reverse
from django.utils import timezone

from patterns.actions import change_pattern
from patterns.models import Pattern, PatternImport
from patterns.pattern_file import read_pattern
from tests.factories import grid_text, make_pattern, pattern_text

IMPORT = "/patterns/import/"


def upload(*files, text=""):
    return {
        "text": text,
        "sent": [
            SimpleUploadedFile(name, content if isinstance(content, bytes) else content.encode())
            for name, content in files
        ],
    }


def packed(*files):
    content = io.BytesIO()
    with zipfile.ZipFile(content, "w") as archive:
        for name, text in files:
            archive.writestr(name, text)
    return content.getvalue()


def send(maker, *files, text=""):
    """Send files, and return what waits."""
    response = maker.post(IMPORT, upload(*files, text=text))
    assert response.status_code == 302, response.content.decode()
    waiting = PatternImport.objects.latest("pk")
    assert response["Location"] == check(waiting)
    return waiting


def check(waiting):
    return reverse("pattern_import_check", args=[waiting.pk])


def errors(response):
    assert response.status_code == 422
    assert not PatternImport.objects.exists()
    form = response.context["form"]
    return " ".join(error for list_ in form.errors.values() for error in list_)


def names():
    return sorted(Pattern.objects.values_list("name", flat=True))


# --- sending ---------------------------------------------------------------------------------


def test_page_says_the_limits(maker):
    page = maker.get(IMPORT).content.decode()
    for limit in ("at most 64 KB", "at most 5 MB", "Up to 500 at once"):
        assert limit in page


def test_files_wait_and_nothing_is_added_yet(maker):
    waiting = send(maker, ("quay.toml", pattern_text("Quay")), ("h.toml", grid_text("Heart")))
    assert names() == []
    for _ in range(2):  # a reload loses nothing
        page = maker.get(check(waiting)).content.decode()
        assert "2 files: 2 new." in page
        assert "quay.toml</bdi> · diagonal · 6 strands · 2 rows a repeat" in page
        assert "h.toml</bdi> · grid · 6 strands · 5 rows a repeat" in page
    assert check(waiting) in maker.get(IMPORT).content.decode()


def test_pasted_text_is_kept_as_typed(maker):
    text = "# my own\n" + pattern_text("Quay")
    waiting = send(maker, text=text.replace("\n", "\r\n"))
    maker.post(check(waiting), {"do-1": "add"})
    assert Pattern.objects.get().text == text


@pytest.mark.parametrize("mark", [b"", b"\xef\xbb\xbf"])
def test_mark_at_the_start_is_no_part_of_the_text(maker, mark):
    waiting = send(maker, ("quay.toml", mark + pattern_text("Quay").encode()))
    maker.post(check(waiting), {"do-1": "add"})
    assert Pattern.objects.get().text == pattern_text("Quay")


@pytest.mark.parametrize(
    ("data", "words"),
    [
        ({}, "Choose pattern files, or paste the text of one."),
        ({"text": "   \n "}, "Choose pattern files, or paste the text of one."),
        ({"text": "a\0b"}, "Line 1 holds a hidden character"),
        ({"text": "a\x07b"}, "Line 1 holds a hidden character"),
        ({"text": "x" * 65_537}, "more than 64 KB"),
        (upload(("photo.png", "x")), "photo.png is no pattern file."),
        (upload(("all.zip", "no zip")), "all.zip is no ZIP that can be opened."),
        (upload(("all.zip", packed(("a.txt", "x")))), "a.txt is no pattern file."),
        (upload(("all.zip", b"PK\x03\x04" + b"x" * (5 * 2**20))), "larger than 5 MB"),
    ],
)
def test_nothing_that_can_be_looked_at_is_told(maker, data, words):
    assert words in errors(maker.post(IMPORT, data))


def test_refused_paste_stays_in_the_box(maker):
    page = maker.post(IMPORT, {"text": "first\nsec\x07ond"}).content.decode()
    assert "Line 2 holds a hidden character" in page
    assert "first\n" in page


def test_what_is_left_out_is_listed(maker):
    content = packed(("p/quay.toml", pattern_text("Quay")), ("p/readme.md", "x"))
    page = maker.post(IMPORT, upload(("all.zip", content)), follow=True).content.decode()
    assert "p/readme.md is left out" in page
    assert "p/quay.toml" in page


def test_what_was_sent_is_named(maker):
    waiting = send(maker, ("a.toml", pattern_text("A")), ("b.toml", "x"), text="x")
    assert waiting.source_name == "a.toml and 2 more"
    assert send(maker, text="x").source_name == "pasted.toml"


# --- looking through -------------------------------------------------------------------------


def test_each_file_says_how_it_stands_to_the_library(maker):
    make_pattern("Same")
    changed = make_pattern("Changed")
    waiting = send(
        maker,
        ("a.toml", pattern_text("New")),
        ("b.toml", "# other words\n" + pattern_text("Same")),
        ("c.toml", pattern_text("changed", rows=("b f f", "f f"))),
        ("d.toml", pattern_text("new")),
        ("e.toml", pattern_text("Bad", rows=("f f q", "f f"))),
        ("f.toml", b"\xff\xfe"),
    )
    page = maker.get(check(waiting)).content.decode()
    assert (
        "6 files: 1 new, 1 same as yours, 1 that would change yours, 1 of a name that comes"
        " twice, 2 that cannot be read." in page
    )
    assert "New in your library." in page
    assert "Same as <a" in page
    assert "called changed instead of Changed, 1 knot changed" in page
    assert "make it version 2 of yours" in page
    assert reverse("pattern_detail", args=[changed.pk]) in page
    assert "Another file above has this name too." in page
    assert "Row 1, knot 3: &#x27;q&#x27; is not a knot" in page
    assert "Line 1 is not text in UTF-8" in page


def test_archived_one_is_told(maker):
    make_pattern("Quay")
    Pattern.objects.update(archived_at=timezone.now())
    waiting = send(maker, ("a.toml", pattern_text("Quay")))
    assert "which is archived" in maker.get(check(waiting)).content.decode()


def test_each_is_drawn(maker):
    waiting = send(maker, ("a.toml", pattern_text("Quay")), ("b.toml", "no pattern"))
    page = maker.get(check(waiting)).content.decode()
    url = reverse("pattern_import_picture", args=[waiting.pk, 1])
    assert f'<img src="{url}?v=' in page
    assert page.count("<img") == 1
    assert b"<svg" in maker.get(url).content
    for number in (2, 3):
        address = reverse("pattern_import_picture", args=[waiting.pk, number])
        assert maker.get(address).status_code == 404


def test_usual_choices_add_what_is_new_and_leave_the_rest_as_it_is(maker, owner):
    make_pattern("Same")
    changed = make_pattern("Changed")
    waiting = send(
        maker,
        ("a.toml", pattern_text("New")),
        ("b.toml", pattern_text("Same")),
        ("c.toml", pattern_text("Changed", rows=("b f f", "f f"))),
        ("d.toml", "no pattern"),
    )
    choices = chosen(maker.get(check(waiting)))
    response = maker.post(check(waiting), choices, follow=True)
    assert "1 pattern added, 1 left out, 2 still waiting here." in response.content.decode()
    assert names() == ["Changed", "New", "Same"]
    assert Pattern.objects.get(pk=changed.pk).version == 1
    assert Pattern.objects.get(name="New").versions.get().created_by == owner
    assert set(PatternImport.objects.get().files) == {"f3", "f4"}
    assert "2 files: 1 that would change yours, 1 that cannot be read." in (
        response.content.decode()
    )


def chosen(response):
    """What a browser would send of the page as it is."""
    choices = {}
    for row in response.context["rows"]:
        number = row["beside"].file.number
        choices |= {f"do-{number}": row["doing"], f"name-{number}": row["name"]}
        if row["beside"].yours:
            choices[f"version-{number}"] = row["beside"].yours.version
    return choices


def test_replacing_makes_a_new_version(maker):
    pattern = make_pattern("Quay")
    text = pattern_text("Quay", rows=("b b b", "b b"))
    waiting = send(maker, ("a.toml", text))
    response = maker.post(check(waiting), {"do-1": "replace", "version-1": "1"}, follow=True)
    assert "1 with a new version." in response.content.decode()
    pattern.refresh_from_db()
    assert (pattern.text, pattern.version, pattern.versions.count()) == (text, 2, 2)
    assert not PatternImport.objects.exists()


def test_another_name_is_offered_and_taken(maker):
    make_pattern("Quay")
    make_pattern("Quay 2")
    waiting = send(maker, ("a.toml", pattern_text("Quay", finish="nearest")))
    assert 'value="Quay 3"' in maker.get(check(waiting)).content.decode()
    maker.post(check(waiting), {"do-1": "rename", "name-1": " Pier "})
    added = Pattern.objects.get(name="Pier")
    assert read_pattern(added.text).finish == "nearest"
    assert Pattern.objects.get(name="Quay").version == 1


# --- all or nothing --------------------------------------------------------------------------


@pytest.mark.parametrize(
    ("choice", "words"),
    [
        ({"do-2": "add"}, "A pattern called Quay is there already."),
        ({"do-2": "rename", "name-2": ""}, "The pattern has no name."),
        ({"do-2": "rename", "name-2": "quay"}, "A pattern called quay is there already."),
        ({"do-2": "rename", "name-2": "New"}, "A pattern called New is there already."),
        ({"do-2": "rename", "name-2": "n" * 81}, "The name has 81 characters"),
        ({"do-2": "replace", "version-2": "7"}, "yours began at version 7"),
        ({"do-3": "add"}, "It holds no pattern that could be added."),
        ({"do-3": "replace"}, "It holds no pattern that could be added."),
        ({"do-1": "replace"}, "You have no pattern called New any more."),
    ],
)
def test_one_that_cannot_be_done_keeps_all_from_being_done(maker, choice, words):
    make_pattern("Quay")
    other = pattern_text("Quay", rows=("b f f", "f f"))
    waiting = send(
        maker, ("a.toml", pattern_text("New")), ("b.toml", other), ("c.toml", "no pattern")
    )
    response = maker.post(check(waiting), {"do-1": "add"} | choice)
    page = response.content.decode()
    assert response.status_code == 422
    assert words in page
    assert "Nothing is added yet." in page
    assert names() == ["Quay"]
    assert len(PatternImport.objects.get().files) == 3
    for name in ("n" * 81, "quay"):  # what was typed stands there still
        if choice.get("name-2") == name:
            assert f'value="{name}"' in page


def test_library_that_changed_meanwhile_is_not_written_over(maker):
    pattern = make_pattern("Quay")
    waiting = send(maker, ("a.toml", pattern_text("Quay", rows=("b f f", "f f"))))
    choices = chosen(maker.get(check(waiting))) | {"do-1": "replace"}
    mine = pattern_text("Quay", rows=("bf bf bf", "f f"))
    change_pattern(pattern=pattern, text=mine)
    response = maker.post(check(waiting), choices)
    assert "was saved in another window since you opened it" in response.content.decode()
    pattern.refresh_from_db()
    assert pattern.text == mine


def test_sent_twice_is_added_once(maker):
    waiting = send(maker, ("a.toml", pattern_text("Quay")))
    for _ in range(2):
        response = maker.post(check(waiting), {"do-1": "add"}, follow=True)
    assert "added or put away in another window" in response.content.decode()
    assert names() == ["Quay"]


@pytest.mark.parametrize(
    "choices",
    [
        {},
        {"do-1": "burn"},
        {"do-9": "add", "do-1": "later"},
        {"do-99999": "add", "do-": "add", "do-x": "add"},
        {"version-1": "\0", "name-1": "\0", "do-1": "\0"},
        {"text-1": "x", "text-9": "\0"},
    ],
)
def test_choices_that_are_none_change_nothing(maker, choices):
    waiting = send(maker, ("a.toml", pattern_text("Quay")))
    before = PatternImport.objects.get().files
    assert maker.post(check(waiting), choices).status_code == 302
    assert names() == []
    assert PatternImport.objects.get().files == before


# --- putting right ---------------------------------------------------------------------------


def test_text_is_put_right_on_the_page(maker):
    waiting = send(maker, ("a.toml", pattern_text("Quay", rows=("f f q", "f f"))))
    assert "f f q" in maker.get(check(waiting)).content.decode()
    still = pattern_text("Quay", rows=("f f f", "f x"))
    page = maker.post(check(waiting), {"text-1": still, "again": "yes"}).content.decode()
    assert "Row 2, knot 2: &#x27;x&#x27; is not a knot" in page
    assert "f x" in page
    right = pattern_text("Quay").replace("\n", "\r\n")
    page = maker.post(check(waiting), {"text-1": right, "again": "yes"}).content.decode()
    assert "New in your library." in page
    maker.post(check(waiting), {"do-1": "add"})
    assert Pattern.objects.get().text == pattern_text("Quay")


def test_choices_stay_when_texts_are_read_again(maker):
    waiting = send(maker, ("a.toml", pattern_text("Quay")), ("b.toml", "no pattern"))
    typed = {"do-1": "rename", "name-1": "Pier", "text-2": pattern_text("New"), "again": "yes"}
    response = maker.post(check(waiting), typed)
    assert [row["doing"] for row in response.context["rows"]] == ["rename", "later"]
    assert 'value="Pier"' in response.content.decode()
    assert names() == []


def test_readable_file_is_not_changed_by_a_text(maker):
    waiting = send(maker, ("a.toml", pattern_text("Quay")))
    maker.post(check(waiting), {"text-1": pattern_text("Other"), "do-1": "add"})
    assert names() == ["Quay"]


# --- who and how -----------------------------------------------------------------------------


def test_files_of_somebody_else_are_not_there(maker):
    waiting = send(maker, ("a.toml", pattern_text("Quay")))
    other = Client(raise_request_exception=False)
    other.force_login(
        User.objects.create(username="other"), "django.contrib.auth.backends.ModelBackend"
    )
    assert other.get(check(waiting)).status_code == 404
    assert other.post(check(waiting), {"do-1": "add"}).status_code == 404
    discard = reverse("pattern_import_discard", args=[waiting.pk])
    picture = reverse("pattern_import_picture", args=[waiting.pk, 1])
    assert other.post(discard).status_code == 404
    assert other.get(picture).status_code == 404
    assert check(waiting) not in other.get(IMPORT).content.decode()
    assert names() == []


def test_put_away(maker):
    waiting = send(maker, ("a.toml", pattern_text("Quay")))
    url = reverse("pattern_import_discard", args=[waiting.pk])
    assert "put away" in maker.post(url, follow=True).content.decode()
    assert not PatternImport.objects.exists()
    assert maker.get(check(waiting), follow=True).status_code == 200
    assert names() == []


def test_signed_out_goes_to_the_sign_in(client, workshop):
    for url in (IMPORT, f"{IMPORT}1/", f"{IMPORT}1/1.svg"):
        assert client.get(url).status_code == 302


def test_wrong_methods(maker):
    assert maker.put(IMPORT).status_code == 405
    assert maker.delete(f"{IMPORT}1/").status_code == 405
    assert maker.get(f"{IMPORT}1/discard/").status_code == 405
    assert maker.post(f"{IMPORT}1/1.svg").status_code == 405


def test_query_count_is_the_same_for_twice_the_files(maker, query_count):
    def files(count):
        return [(f"{n}.toml", pattern_text(f"Pattern {n}", finish="nearest")) for n in range(count)]

    for number in range(4):
        make_pattern(f"Pattern {number}")
    few = query_count(check(send(maker, *files(4))))
    assert query_count(check(send(maker, *files(8)))) == few
