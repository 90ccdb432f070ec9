from django.http import HttpRequest, HttpResponse
from django.shortcuts import render


def size_list(request: HttpRequest) -> HttpResponse:
    return render(request, "patterns/coming.html", {"section": "patterns"})


def size_new(request: HttpRequest) -> HttpResponse:
    return render(request, "patterns/coming.html", {"section": "patterns"})


def size_edit(request: HttpRequest, pk: int) -> HttpResponse:
    return render(request, "patterns/coming.html", {"section": "patterns"})


def size_remove(request: HttpRequest, pk: int) -> HttpResponse:
    return render(request, "patterns/coming.html", {"section": "patterns"})
