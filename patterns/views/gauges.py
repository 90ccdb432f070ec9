from django.http import HttpRequest, HttpResponse
from django.shortcuts import render


def gauge_list(request: HttpRequest) -> HttpResponse:
    return render(request, "patterns/coming.html", {"section": "patterns"})


def gauge_new(request: HttpRequest) -> HttpResponse:
    return render(request, "patterns/coming.html", {"section": "patterns"})


def gauge_edit(request: HttpRequest, pk: int) -> HttpResponse:
    return render(request, "patterns/coming.html", {"section": "patterns"})


def gauge_default(request: HttpRequest, pk: int) -> HttpResponse:
    return render(request, "patterns/coming.html", {"section": "patterns"})


def gauge_remove(request: HttpRequest, pk: int) -> HttpResponse:
    return render(request, "patterns/coming.html", {"section": "patterns"})
