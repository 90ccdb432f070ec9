from django.http import HttpRequest, HttpResponse
from django.shortcuts import render


def ending_list(request: HttpRequest) -> HttpResponse:
    return render(request, "patterns/coming.html", {"section": "patterns"})


def ending_new(request: HttpRequest) -> HttpResponse:
    return render(request, "patterns/coming.html", {"section": "patterns"})


def ending_edit(request: HttpRequest, pk: int) -> HttpResponse:
    return render(request, "patterns/coming.html", {"section": "patterns"})


def ending_default(request: HttpRequest, pk: int) -> HttpResponse:
    return render(request, "patterns/coming.html", {"section": "patterns"})


def ending_remove(request: HttpRequest, pk: int) -> HttpResponse:
    return render(request, "patterns/coming.html", {"section": "patterns"})
