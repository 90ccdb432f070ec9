"""The 2,000 hostile pattern files, sent to the pages that take them."""

import html
import io
import re
import zipfile

import pytest
from django.core.files.uploadedfile import SimpleUploadedFile
from django.urls import reverse

from patterns.models import Pattern
from tests.data_builders.hostile_patterns import hostile_patterns
from tests.factories import make_pattern

FILES_AT_ONCE = 100
HOSTILE = list(hostile_patterns())
GROUPS = [HOSTILE[start : start + FILES_AT_ONCE] for start in range(0, 2_000, FILES_AT_ONCE)]


def packed(files: list[tuple[str, str]]) -> SimpleUploadedFile:
    content = io.BytesIO()
    with zipfile.ZipFile(content, "w") as archive:
        for name, text in files:
            archive.writestr(name, text)
    return SimpleUploadedFile("hostile.zip", content.getvalue())


def problem_beside(page: str, name: str) -> str:
    """The words in the leaf of one file."""
    leaf = page.partition(f"<bdi>{name}</bdi>")[2].partition("</li>")[0]
    found = re.search(r'<p class="problem">(.*?)</p>', leaf, re.DOTALL)
    return html.unescape(found[1]) if found else ""


@pytest.mark.parametrize("group", GROUPS, ids=range(len(GROUPS)))
def test_hostile_files_are_told_row_and_place_on_the_page(maker, group):
    names = [f"hostile-{number}.toml" for number in range(len(group))]
    files = list(zip(names, (entry.text for entry in group), strict=True))
    sent = maker.post(reverse("pattern_import"), {"sent": packed(files)}, follow=True)
    assert sent.status_code == 200
    page = sent.content.decode()
    for name, entry in zip(names, group, strict=True):
        if entry.row is None:
            continue
        place = f", {'knot' if entry.technique == 'diagonal' else 'column'} {entry.place}:"
        wanted = f"Row {entry.row}{place if entry.place else ''}"
        assert wanted in problem_beside(page, name), (name, entry)
    assert not Pattern.objects.exists()


def test_hostile_texts_in_place_of_a_pattern_change_nothing(maker):
    pattern = make_pattern("Pier")
    url = reverse("pattern_edit_text", args=[pattern.pk])
    before = pattern.text
    for entry in HOSTILE[::10]:
        response = maker.post(url, {"text": entry.text})
        assert response.status_code in (200, 302, 422)
        if entry.row is not None:
            pattern.refresh_from_db()
            assert pattern.text == before
