from django.http import HttpRequest, HttpResponse
from django.shortcuts import render


def thread_add(request: HttpRequest, pk: int) -> HttpResponse:
    return render(request, "base.html", {"section": "shelf"})


def thread_edit(request: HttpRequest, pk: int) -> HttpResponse:
    return render(request, "base.html", {"section": "shelf"})


def thread_remove(request: HttpRequest, pk: int) -> HttpResponse:
    return render(request, "base.html", {"section": "shelf"})


def thread_put_back(request: HttpRequest, pk: int) -> HttpResponse:
    return render(request, "base.html", {"section": "shelf"})
