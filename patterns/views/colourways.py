from django.http import HttpRequest, HttpResponse
from django.shortcuts import render


def colourway_new(request: HttpRequest, pattern_pk: int) -> HttpResponse:
    return render(request, "patterns/coming.html", {"section": "patterns"})


def colourway_edit(request: HttpRequest, pk: int) -> HttpResponse:
    return render(request, "patterns/coming.html", {"section": "patterns"})


def colourway_remove(request: HttpRequest, pk: int) -> HttpResponse:
    return render(request, "patterns/coming.html", {"section": "patterns"})
