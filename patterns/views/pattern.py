from django.http import HttpRequest, HttpResponse
from django.shortcuts import render


def pattern_detail(request: HttpRequest, pk: int) -> HttpResponse:
    return render(request, "patterns/coming.html", {"section": "patterns"})


def pattern_edit(request: HttpRequest, pk: int) -> HttpResponse:
    return render(request, "patterns/coming.html", {"section": "patterns"})


def pattern_file(request: HttpRequest, pk: int) -> HttpResponse:
    return render(request, "patterns/coming.html", {"section": "patterns"})


def pattern_remove(request: HttpRequest, pk: int) -> HttpResponse:
    return render(request, "patterns/coming.html", {"section": "patterns"})
