import re

import pytest
from django.urls import reverse

from patterns.actions import change_pattern
from patterns.models import Pattern
from patterns.views import versions
from tests.factories import (
    grid_text,
    make_batch,
    make_colourway,
    make_grid_pattern,
    make_order,
    make_pattern,
    pattern_text,
)

OLD = pattern_text("Quay")
NEW = pattern_text("Quay", rows=("b b b", "b b"))


@pytest.fixture
def pattern(workshop, owner):
    return change_pattern(pattern=make_pattern("Quay"), text=NEW, by=owner)


def test_versions_are_listed_with_who_saved_them(maker, pattern, owner):
    page = maker.get(reverse("pattern_versions", args=[pattern.pk])).content.decode()
    assert "Version 2</a> (now)" in page
    assert "Version 1</a>" in page
    assert str(owner) in page


def test_versions_say_what_changed(maker, pattern):
    change_pattern(pattern=pattern, text="# by hand\n" + NEW)
    change_pattern(pattern=pattern, text=pattern_text("Pier", rows=("b b b", "b f")))
    page = maker.get(reverse("pattern_versions", args=[pattern.pk])).content.decode()
    found = re.findall(r'"What changed"><bdi>(.*?)</bdi>', page)
    assert found == [
        "Called Pier instead of Quay, 1 knot changed",
        "Only the way its text is written",
        "5 knots changed",
        "The first",
    ]


def test_versions_over_a_page_still_say_what_changed(maker, pattern, monkeypatch):
    monkeypatch.setattr(versions, "VERSIONS_A_PAGE", 1)
    url = reverse("pattern_versions", args=[pattern.pk])
    assert "5 knots changed" in maker.get(url).content.decode()
    second = maker.get(url, {"page": 2}).content.decode()
    assert "The first" in second
    assert "Version 1</a></th>" in second


def test_version_has_its_file(maker, pattern):
    url = reverse("pattern_version_file", args=[pattern.pk, 1])
    assert url in maker.get(reverse("pattern_version", args=[pattern.pk, 1])).content.decode()
    answer = maker.get(url)
    assert answer.content.decode() == OLD
    assert answer["Content-Disposition"] == 'attachment; filename="Quay-version-1.toml"'
    assert maker.get(reverse("pattern_version_file", args=[pattern.pk, 9])).status_code == 404


def test_version_that_cannot_be_read_is_no_failure(maker, pattern):
    pattern.versions.filter(number=1).update(text="damaged")
    assert maker.get(reverse("pattern_versions", args=[pattern.pk])).status_code == 200
    assert maker.get(reverse("pattern_version", args=[pattern.pk, 1])).status_code == 404
    assert maker.post(reverse("pattern_restore", args=[pattern.pk, 1])).status_code == 302
    assert Pattern.objects.get().version == 2


def test_old_version_is_drawn_as_it_was(maker, pattern):
    page = maker.get(reverse("pattern_version", args=[pattern.pk, 1])).content.decode()
    assert "<svg" in page
    assert "Row 1: f f f" in page
    assert (
        "Row 1: b b b"
        in maker.get(reverse("pattern_version", args=[pattern.pk, 2])).content.decode()
    )


def test_going_back_is_a_version_and_can_be_taken_back(maker, pattern):
    maker.post(reverse("pattern_restore", args=[pattern.pk, 1]))
    pattern.refresh_from_db()
    assert (pattern.text, pattern.version) == (OLD, 3)
    maker.post(reverse("pattern_restore", args=[pattern.pk, 2]))
    pattern.refresh_from_db()
    assert (pattern.text, pattern.version) == (NEW, 4)
    assert pattern.versions.count() == 4


def test_going_back_to_a_name_that_is_taken_is_told(maker, pattern):
    change_pattern(pattern=pattern, text=pattern_text("Pier"))
    make_pattern("Quay")
    answer = maker.post(reverse("pattern_restore", args=[pattern.pk, 1]), follow=True)
    assert "called Quay is there already" in answer.content.decode()
    pattern.refresh_from_db()
    assert pattern.name == "Pier"


def test_going_back_to_the_other_technique(maker, workshop):
    pattern = make_grid_pattern("Quay")
    change_pattern(pattern=pattern, text=OLD)
    maker.post(reverse("pattern_restore", args=[pattern.pk, 1]))
    pattern.refresh_from_db()
    assert (pattern.technique, pattern.text) == ("grid", grid_text("Quay"))


@pytest.mark.parametrize("number", [0, 9, 987_654_321_987])
def test_version_that_is_not_there(maker, pattern, number):
    assert maker.get(reverse("pattern_version", args=[pattern.pk, number])).status_code == 404
    assert maker.post(reverse("pattern_restore", args=[pattern.pk, number])).status_code == 404


def test_wrong_methods(maker, pattern):
    for name in ("pattern_archive", "pattern_bring_back"):
        assert maker.get(reverse(name, args=[pattern.pk])).status_code == 405
    assert maker.get(reverse("pattern_restore", args=[pattern.pk, 1])).status_code == 405
    assert maker.post(reverse("pattern_versions", args=[pattern.pk])).status_code == 405


def test_signed_out(client, pattern):
    for name, args in (
        ("pattern_versions", []),
        ("pattern_version", [1]),
        ("pattern_restore", [1]),
    ):
        assert client.post(reverse(name, args=[pattern.pk, *args])).status_code == 302
    assert client.post(reverse("pattern_archive", args=[pattern.pk])).status_code == 302
    assert Pattern.objects.get().archived_at is None


def test_archived_and_brought_back(maker, pattern):
    answer = maker.post(reverse("pattern_archive", args=[pattern.pk]), follow=True)
    assert "Quay is archived" in answer.content.decode()
    pattern.refresh_from_db()
    assert pattern.archived_at is not None
    page = maker.get(reverse("pattern_detail", args=[pattern.pk])).content.decode()
    assert "This pattern is archived since" in page
    maker.post(reverse("pattern_bring_back", args=[pattern.pk]))
    pattern.refresh_from_db()
    assert pattern.archived_at is None


def test_query_count_of_versions(query_count, pattern):
    url = reverse("pattern_versions", args=[pattern.pk])
    few = query_count(url)
    for number in range(6):
        change_pattern(pattern=pattern, text=pattern_text(f"Quay {number}"))
    assert query_count(url) == few


def test_text_saved_over_another_windows_is_told_once(maker, pattern, owner):
    url = reverse("pattern_edit_text", args=[pattern.pk])
    assert '<input type="hidden" name="version" value="2">' in maker.get(url).content.decode()
    theirs = change_pattern(pattern=pattern, text=pattern_text("Quay", finish="nearest"))
    mine = pattern_text("Quay", finish="at_most")
    page = maker.post(url, {"text": mine, "version": "2"}).content.decode()
    assert "at version 3 now, and yours began at version 2" in page
    assert "at_most" in page
    assert Pattern.objects.get().text == theirs.text
    assert '<input type="hidden" name="version" value="3">' in page
    maker.post(url, {"text": mine, "version": "3"})
    assert Pattern.objects.get().text == mine
    assert pattern.versions.get(number=4).created_by == owner


@pytest.mark.parametrize("version", ["x", "0", "-1", "9" * 400, "\0"])
def test_version_that_is_none_is_no_failure(maker, pattern, version):
    url = reverse("pattern_edit_text", args=[pattern.pk])
    assert maker.post(url, {"text": OLD, "version": version}).status_code == 200
    assert Pattern.objects.get().version == 2


def test_removing_is_offered_only_where_nothing_uses_it(maker, pattern):
    page, remove = (reverse(f"pattern_{name}", args=[pattern.pk]) for name in ("detail", "remove"))
    assert remove in maker.get(page).content.decode()
    order = make_order(make_batch(), make_colourway(pattern))
    assert remove not in maker.get(page).content.decode()
    order.delete()
    assert remove in maker.get(page).content.decode()
