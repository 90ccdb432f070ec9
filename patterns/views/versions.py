"""Earlier versions of a pattern, and patterns put away and brought back."""

from itertools import pairwise

from django.contrib import messages
from django.core.paginator import Page, Paginator
from django.db.models import QuerySet
from django.http import Http404, HttpRequest, HttpResponse
from django.shortcuts import get_object_or_404, redirect, render
from django.urls import reverse
from django.utils import timezone
from django.utils.safestring import mark_safe
from django.views.decorators.http import require_POST, require_safe

from inventory.page_helpers import say_with_undo
from patterns.actions import (
    LibraryError,
    archive_pattern,
    bring_back_pattern,
    restore_version,
)
from patterns.knots import PatternError
from patterns.models import Pattern, PatternVersion
from patterns.pattern_file import read_pattern
from patterns.pictures import band_picture
from patterns.reading import written_rows
from patterns.version_words import change_words
from patterns.views._shared import file_answer

VERSIONS_A_PAGE = 50
PICTURE_ROWS = 120


@require_safe
def pattern_versions(request: HttpRequest, pk: int) -> HttpResponse:
    pattern = get_object_or_404(Pattern, pk=pk)
    versions = pattern.versions.select_related("created_by")
    page = Paginator(versions, VERSIONS_A_PAGE).get_page(request.GET.get("page"))
    context = {
        "section": "patterns",
        "pattern": pattern,
        "page": page,
        "versions": _with_changes(versions, page),
    }
    return render(request, "patterns/pattern_versions.html", context)


def _with_changes(
    versions: QuerySet[PatternVersion], page: Page[PatternVersion]
) -> list[tuple[PatternVersion, str]]:
    """Each with what changed since the one before it, which may stand on the next page."""
    last = page.end_index()
    shown = [*page, *versions[last : last + 1]]
    words = [_changes(old.text, new.text) for new, old in pairwise(shown)]
    return list(zip(page, [*words, "the first"], strict=False))


def _changes(before: str, after: str) -> str:
    """Texts of earlier releases may not be readable any more."""
    try:
        return change_words(read_pattern(before), read_pattern(after))
    except PatternError:
        return ""


@require_safe
def pattern_version(request: HttpRequest, pk: int, number: int) -> HttpResponse:
    version = _version(pk, number)
    try:
        definition = read_pattern(version.text)
    except PatternError as error:
        raise Http404(str(error)) from None
    title = f"{definition.name}, version {number}, the start at the left"
    context = {
        "section": "patterns",
        "pattern": version.pattern,
        "version": version,
        "definition": definition,
        # The drawing escapes its title; everything else in it is numbers and colours.
        "picture": mark_safe(band_picture(definition, PICTURE_ROWS, {}, title=title)),
        "rows": written_rows(definition),
    }
    return render(request, "patterns/pattern_version.html", context)


def _version(pk: int, number: int) -> PatternVersion:
    versions = PatternVersion.objects.select_related("pattern", "created_by")
    return get_object_or_404(versions, pattern=pk, number=number)


@require_safe
def pattern_version_file(request: HttpRequest, pk: int, number: int) -> HttpResponse:
    version = _version(pk, number)
    return file_answer(version.text, f"{version.pattern.name} version {number}")


@require_POST
def pattern_restore(request: HttpRequest, pk: int, number: int) -> HttpResponse:
    """Going back is a version of its own, so there is always a way forward again."""
    version = _version(pk, number)
    before = version.pattern.version
    try:
        pattern = restore_version(version=version, by=request.user)
    except (LibraryError, PatternError) as error:
        messages.error(request, str(error))
        return redirect("pattern_versions", pk=pk)
    say_with_undo(
        request,
        f"{pattern} is as it was in version {number}.",
        undo_url=reverse("pattern_restore", args=[pk, before]),
    )
    return redirect("pattern_detail", pk=pk)


@require_POST
def pattern_archive(request: HttpRequest, pk: int) -> HttpResponse:
    pattern = get_object_or_404(Pattern, pk=pk)
    archive_pattern(pattern=pattern, at=timezone.now())
    say_with_undo(
        request,
        f"{pattern} is archived. Orders and plans that have it keep it.",
        undo_url=reverse("pattern_bring_back", args=[pk]),
    )
    return redirect("pattern_list")


@require_POST
def pattern_bring_back(request: HttpRequest, pk: int) -> HttpResponse:
    pattern = get_object_or_404(Pattern, pk=pk)
    bring_back_pattern(pattern=pattern)
    messages.success(request, f"{pattern} is back in your library.")
    return redirect("pattern_detail", pk=pk)
