"""Pattern files in: sent, looked through, then added."""

import re
from collections import Counter
from collections.abc import Mapping
from typing import cast, get_args

from django.contrib import messages
from django.contrib.auth.models import User
from django.db.models.fields.json import KT
from django.http import Http404, HttpRequest, HttpResponse, HttpResponseBase, QueryDict
from django.shortcuts import get_object_or_404, redirect, render
from django.urls import reverse
from django.views.decorators.http import require_http_methods, require_POST, require_safe

from patterns.actions import LibraryError
from patterns.actions_import import (
    GONE,
    Decision,
    ImportRefused,
    Taken,
    keep_import,
    put_import_right,
    take_import,
)
from patterns.forms_library import ImportForm
from patterns.incoming import Doing, IncomingFile, Standing, Waiting, beside_library, key_of
from patterns.models import PatternImport
from patterns.thumbnails import picture_name
from patterns.views._shared import posted
from patterns.views.library import svg_answer

CHOICE_NAME = re.compile(r"(do|name|version|text)-([0-9]{1,4})\Z")
STANDINGS: dict[Standing, str] = {
    "new": "new",
    "same": "same as yours",
    "changes": "that would change yours",
    "twice": "of a name that comes twice",
    "unreadable": "that cannot be read",
}
MOST_TEXTS = 20
MOST_NOTICES = 25


@require_http_methods(["GET", "HEAD", "POST"])
def pattern_import(request: HttpRequest) -> HttpResponse:
    user = cast(User, request.user)
    form = ImportForm(posted(request), request.FILES or None)
    if request.method == "POST" and form.is_valid():
        waiting = keep_import(found=form.found.files, source_name=form.source_name, by=user)
        for words in form.found.left_out[:MOST_NOTICES]:
            messages.info(request, words)
        return redirect("pattern_import_check", pk=waiting.pk)
    context = {
        "section": "patterns",
        "form": form,
        "waiting": PatternImport.objects.filter(created_by=user).defer("files")[:20],
    }
    status = 422 if form.is_bound else 200
    return render(request, "patterns/pattern_import.html", context, status=status)


@require_http_methods(["GET", "HEAD", "POST"])
def pattern_import_check(request: HttpRequest, pk: int) -> HttpResponse:
    waiting = _waiting(request, pk)
    if waiting is None:
        messages.error(request, GONE)
        return redirect("pattern_import")
    if request.method != "POST":
        return _check_page(request, waiting)
    decisions, texts = _read_choices(request.POST)
    try:
        waiting = put_import_right(waiting=waiting, texts=texts)
        if "again" in request.POST:
            return _check_page(request, waiting, decisions)
        taken = take_import(waiting=waiting, decisions=decisions, by=request.user)
    except ImportRefused as refusal:
        messages.error(request, str(refusal))
        return _check_page(request, waiting, decisions, refusal.problems)
    except LibraryError as error:
        messages.error(request, str(error))
        return redirect("pattern_import")
    messages.success(request, _words(taken))
    if taken.waiting:
        return redirect("pattern_import_check", pk=pk)
    if taken.newest and taken.added + taken.replaced == 1:
        return redirect("pattern_detail", pk=taken.newest.pk)
    return redirect("pattern_list")


def _waiting(request: HttpRequest, pk: int) -> PatternImport | None:
    """Those of somebody else are not there; one's own may have been taken in another window."""
    waiting = PatternImport.objects.filter(pk=pk).first()
    if waiting is not None and waiting.created_by_id != request.user.pk:
        raise Http404
    return waiting


def _read_choices(data: QueryDict) -> tuple[dict[int, Decision], dict[int, str]]:
    """What was chosen for each file, and texts that were corrected; what is neither is left aside."""
    typed: dict[int, dict[str, str]] = {}
    for name, value in data.items():
        match = CHOICE_NAME.match(name)
        if match:
            typed.setdefault(int(match[2]), {})[match[1]] = str(value).replace("\0", "")
    decisions = {}
    for number, values in typed.items():
        doing = values.get("do", "later")
        decisions[number] = Decision(
            doing=cast(Doing, doing) if doing in get_args(Doing) else "later",
            name=values.get("name", ""),
            version=_whole_number(values.get("version", "")),
        )
    texts = {
        number: values["text"].replace("\r\n", "\n").replace("\r", "\n")
        for number, values in typed.items()
        if "text" in values
    }
    return decisions, texts


def _whole_number(text: str) -> int | None:
    return int(text) if re.fullmatch(r"[0-9]{1,9}", text) else None


def _check_page(
    request: HttpRequest,
    waiting: PatternImport,
    decisions: Mapping[int, Decision] | None = None,
    problems: Mapping[int, str] | None = None,
) -> HttpResponse:
    files = [IncomingFile(**values) for values in waiting.files.values()]
    files.sort(key=lambda file: file.number)
    beside = list(beside_library(files))
    rows = [_row(waiting, file, decisions or {}, problems or {}) for file in beside]
    unread = [file.file.number for file in beside if file.standing == "unreadable"]
    context = {
        "section": "patterns",
        "waiting": waiting,
        "rows": rows,
        "summary": _summary(beside),
        "shown_texts": set(unread[:MOST_TEXTS]),
    }
    status = 422 if problems else 200
    return render(request, "patterns/pattern_import_check.html", context, status=status)


def _row(
    waiting: PatternImport,
    beside: Waiting,
    decisions: Mapping[int, Decision],
    problems: Mapping[int, str],
) -> dict[str, object]:
    """What was chosen stays chosen, unless the file stands otherwise now."""
    number = beside.file.number
    decision = decisions.get(number)
    kept = decision if decision and decision.doing in beside.doings else None
    return {
        "beside": beside,
        "doing": kept.doing if kept else beside.doings[0],
        "name": decision.name if decision and decision.name else beside.free_name,
        "problem": problems.get(number, ""),
        "picture_url": ""
        if beside.standing == "unreadable"
        else f"{reverse('pattern_import_picture', args=[waiting.pk, number])}"
        f"?v={picture_name(beside.file.text, ())}",
    }


def _summary(beside: list[Waiting]) -> str:
    counts = Counter(file.standing for file in beside)
    words = [f"{counts[name]} {words}" for name, words in STANDINGS.items() if counts[name]]
    return f"{len(beside)} file{'' if len(beside) == 1 else 's'}: {', '.join(words)}."


def _words(taken: Taken) -> str:
    parts = [
        f"{taken.added} pattern{'' if taken.added == 1 else 's'} added" if taken.added else "",
        f"{taken.replaced} with a new version" if taken.replaced else "",
        f"{taken.left_out} left out" if taken.left_out else "",
        f"{taken.waiting} still waiting here" if taken.waiting else "",
    ]
    return ", ".join(part for part in parts if part).capitalize() + "."


@require_safe
def pattern_import_picture(request: HttpRequest, pk: int, number: int) -> HttpResponseBase:
    """The database looks into the file, so that a picture costs no reading of all the others."""
    waiting = PatternImport.objects.filter(pk=pk, created_by=cast(User, request.user))
    text = waiting.values_list(KT(f"files__{key_of(number)}__text"), flat=True).first()
    if not text:
        raise Http404
    return svg_answer(request, text, ())


@require_POST
def pattern_import_discard(request: HttpRequest, pk: int) -> HttpResponse:
    waiting = get_object_or_404(PatternImport, pk=pk, created_by=cast(User, request.user))
    waiting.delete()
    messages.success(request, "The files were put away. Your library is as it was.")
    return redirect("pattern_import")
