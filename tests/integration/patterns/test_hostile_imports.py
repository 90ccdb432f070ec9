"""Whatever is sent as pattern files is told in words, or looked through like any other."""

import re

from django.core.files.uploadedfile import SimpleUploadedFile
from django.urls import reverse

from patterns.models import Pattern, PatternImport
from patterns.pattern_file import read_pattern
from tests.data_builders.hostile_archives import hostile_archives

IMPORT = "/patterns/import/"


def test_hostile_uploads_never_fail(maker):
    sent = refused = 0
    for name, content in hostile_archives():
        response = maker.post(IMPORT, {"sent": [SimpleUploadedFile(name, content)]})
        assert response.status_code in (302, 422), (name, content[:200])
        sent += 1
        if response.status_code == 422:
            refused += 1
            assert re.search(r'class="problem"[^>]*>[^<]{20,}', response.content.decode())
            continue
        look_through(maker, response["Location"])
    assert sent > 500
    assert 100 < refused < sent - 100
    for pattern in Pattern.objects.all():
        assert read_pattern(pattern.text).name == pattern.name


def look_through(maker, address):
    """Every file is there with its name and a sentence; what is good can be added."""
    page = maker.get(address)
    assert page.status_code == 200
    assert b"<script>alert" not in page.content
    assert b"onerror=alert(1)>" not in page.content
    rows = page.context["rows"]
    for row in rows:
        beside = row["beside"]
        assert (beside.standing == "unreadable") == bool(beside.file.problem)
        assert "\0" not in beside.file.file
        assert ".." not in beside.file.file.split("/")
    choices = {f"do-{row['beside'].file.number}": row["doing"] for row in rows}
    assert maker.post(address, choices).status_code == 302
    PatternImport.objects.all().delete()


def test_choices_of_any_kind_never_fail(maker):
    text = 'name = "Quay"\ntechnique = "diagonal"\nstrands = "A B"\nrows = """\nf\n-\n"""\n'
    maker.post(IMPORT, {"text": text})
    address = reverse("pattern_import_check", args=[PatternImport.objects.get().pk])
    odd = ["", "\0", "x" * 70_000, "-1", "9" * 400, "add\nadd", "\ud800".encode("utf-8", "replace")]
    for value in odd:
        for name in ("do-1", "name-1", "version-1", "text-1", f"do-{'9' * 400}", "do-٣"):
            doing = {} if name == "do-1" else {"do-1": "rename"}
            response = maker.post(address, {**doing, name: value, "again": "yes"})
            assert response.status_code == 200
    assert not Pattern.objects.exists()
