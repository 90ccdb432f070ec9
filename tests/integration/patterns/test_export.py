"""Pattern files out, and the way round: what is taken away comes back the same."""

import io
import zipfile

import pytest
from django.core.files.uploadedfile import SimpleUploadedFile
from django.urls import reverse
from django.utils import timezone

from patterns.models import Pattern, PatternImport
from tests.factories import make_grid_pattern, make_pattern, pattern_text

EXPORT = "/patterns/export.zip"


def unpacked(response):
    """File names and texts, as the standard library reads them."""
    assert response["Content-Type"] == "application/zip"
    assert response["Content-Disposition"] == 'attachment; filename="patterns.zip"'
    with zipfile.ZipFile(io.BytesIO(response.content)) as archive:
        return {name: archive.read(name).decode() for name in archive.namelist()}


@pytest.fixture
def three(maker):
    return make_pattern("Quay"), make_pattern("Two piers"), make_grid_pattern("Größe")


def test_all_that_is_shown(maker, three):
    quay, piers, heart = three
    assert unpacked(maker.get(EXPORT, {"what": "shown"})) == {
        "Quay.toml": quay.text,
        "Two-piers.toml": piers.text,
        "Größe.toml": heart.text,
    }
    assert unpacked(maker.get(EXPORT, {"technique": "grid"})).keys() == {"Größe.toml"}


def test_what_is_ticked(maker, three):
    quay, _, heart = three
    ticked = {"what": "ticked", "pattern": [quay.pk, heart.pk, "x", "9" * 400, "-1", "\0"]}
    assert unpacked(maker.get(EXPORT, ticked)).keys() == {"Quay.toml", "Größe.toml"}


def test_archived_are_saved_where_they_are_shown(maker, three):
    Pattern.objects.filter(pk=three[0].pk).update(archived_at=timezone.now())
    assert "Quay.toml" not in unpacked(maker.get(EXPORT))
    assert unpacked(maker.get(EXPORT, {"kept": "archived"})).keys() == {"Quay.toml"}


def test_nothing_ticked_is_told_and_the_filters_stay(maker, three):
    response = maker.get(EXPORT, {"what": "ticked", "q": "qu", "sort": "newest"}, follow=True)
    assert response.redirect_chain == [("/patterns/?q=qu&sort=newest", 302)]
    assert "Tick the patterns first" in response.content.decode()


def test_page_offers_both_with_its_filters(maker, three):
    page = maker.get("/patterns/", {"technique": "diagonal"}).content.decode()
    assert f'action="{EXPORT}"' in page
    assert '<input type="hidden" name="technique" value="diagonal">' in page
    assert "Save all 2 as files" in page
    assert f'name="pattern" value="{three[0].pk}" form="export"' in page


def test_same_bytes_each_time(maker, three):
    assert maker.get(EXPORT).content == maker.get(EXPORT).content


def test_wrong_method_and_signed_out(maker, client):
    assert maker.post(EXPORT).status_code == 405
    client.logout()
    assert client.get(EXPORT).status_code == 302


def test_library_comes_back_the_same(maker):
    """Comments and spaces too; names that differ by case alone; names that no file may have."""
    for name in ("Quay", "quay 2", "con", "../../etc", "Größe", 'a/b\\\\c:*?\\"<>|', "波"):
        make_pattern(name)
    Pattern.objects.filter(name="con").delete()
    for name in ("con", "Con 2"):
        text = f"# mine\n\n{pattern_text(name)}\n# the end"
        Pattern.objects.filter(pk=make_pattern(name).pk).update(text=text)
    make_grid_pattern("Heart", finish="centred", carry="cut")
    before = sorted(Pattern.objects.values_list("name", "text", "technique", "strand_count"))
    content = maker.get(EXPORT).content
    Pattern.objects.all().delete()
    upload = SimpleUploadedFile("patterns.zip", content)
    maker.post(reverse("pattern_import"), {"sent": [upload]})
    waiting = PatternImport.objects.get()
    choices = {f"do-{number}": "add" for number in range(1, len(before) + 1)}
    maker.post(reverse("pattern_import_check", args=[waiting.pk]), choices)
    after = sorted(Pattern.objects.values_list("name", "text", "technique", "strand_count"))
    assert after == before
    assert not PatternImport.objects.exists()
