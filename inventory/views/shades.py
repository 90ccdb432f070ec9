from django.http import HttpRequest, HttpResponse
from django.shortcuts import render


def shade_new(request: HttpRequest) -> HttpResponse:
    return render(request, "base.html", {"section": "shelf"})


def shade_detail(request: HttpRequest, pk: int) -> HttpResponse:
    return render(request, "base.html", {"section": "shelf"})


def shade_edit(request: HttpRequest, pk: int) -> HttpResponse:
    return render(request, "base.html", {"section": "shelf"})


def shade_remove(request: HttpRequest, pk: int) -> HttpResponse:
    return render(request, "base.html", {"section": "shelf"})
