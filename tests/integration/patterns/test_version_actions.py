import importlib

import pytest
from django.apps import apps

from patterns.actions import LibraryError, VersionConflict, add_pattern, change_pattern
from patterns.knots import PatternError
from patterns.models import Pattern, PatternVersion
from tests.factories import grid_text, make_pattern, pattern_text

pytestmark = pytest.mark.django_db


def numbers(pattern):
    return list(pattern.versions.values_list("number", flat=True))


def test_first_save_is_version_one(owner):
    pattern = add_pattern(text=pattern_text("Quay"), by=owner)
    (version,) = pattern.versions.all()
    assert (version.number, version.text, version.created_by) == (1, pattern.text, owner)


def test_each_change_is_a_version_and_the_old_text_stays(owner):
    pattern = make_pattern("Quay")
    old = pattern.text
    changed = change_pattern(pattern=pattern, text=grid_text("Quay"), by=owner)
    changed.refresh_from_db()
    assert (changed.version, changed.technique) == (2, "grid")
    assert numbers(pattern) == [2, 1]
    assert pattern.versions.get(number=1).text == old
    assert pattern.versions.get(number=2).text == changed.text


def test_same_text_is_no_new_version():
    pattern = make_pattern("Quay")
    change_pattern(pattern=pattern, text=pattern.text)
    assert numbers(pattern) == [1]


def test_somebody_elses_save_is_not_written_over():
    pattern = make_pattern("Quay")
    mine = Pattern.objects.get(pk=pattern.pk)
    change_pattern(pattern=pattern, text=pattern_text("Quay", finish="nearest"))
    with pytest.raises(VersionConflict, match="at version 2 now, and yours began at version 1"):
        change_pattern(pattern=mine, text=pattern_text("Mine"), expected_version=1)
    assert Pattern.objects.get(pk=pattern.pk).name == "Quay"
    change_pattern(pattern=mine, text=pattern_text("Mine"), expected_version=2)
    assert numbers(pattern) == [3, 2, 1]


def test_refused_text_leaves_no_version():
    pattern = make_pattern("Quay")
    with pytest.raises(PatternError):
        change_pattern(pattern=pattern, text="no pattern")
    make_pattern("Pier")
    with pytest.raises(LibraryError):
        change_pattern(pattern=pattern, text=pattern_text("Pier"))
    assert numbers(pattern) == [1]


def test_removed_meanwhile_is_told():
    pattern = make_pattern("Quay")
    Pattern.objects.filter(pk=pattern.pk).delete()
    with pytest.raises(LibraryError, match="removed in another window"):
        change_pattern(pattern=pattern, text=pattern_text("Pier"))


def test_patterns_from_before_get_their_first_version():
    pattern = make_pattern("Quay")
    unreadable = make_pattern("Pier")
    Pattern.objects.filter(pk=unreadable.pk).update(text="damaged")
    Pattern.objects.update(thread_mm=0)
    PatternVersion.objects.all().delete()
    importlib.import_module("patterns.migrations.0003_first_versions").first_versions(apps, None)
    pattern.refresh_from_db()
    # Derived from the geometry: 150 mm takes 61.83 cm a strand on average with six strands and idle runs, by the
    # length; 118 whole rows are 150.2 mm.
    assert pattern.thread_mm == pytest.approx(6 * 618.3, rel=0.005)
    assert numbers(pattern) == [1]
    assert Pattern.objects.get(pk=unreadable.pk).thread_mm == 0
    assert numbers(unreadable) == [1]
