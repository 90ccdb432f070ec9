from django.http import HttpRequest, HttpResponse
from django.shortcuts import render


def put_up_list(request: HttpRequest) -> HttpResponse:
    return render(request, "base.html", {"section": "shelf"})


def put_up_new(request: HttpRequest) -> HttpResponse:
    return render(request, "base.html", {"section": "shelf"})


def put_up_edit(request: HttpRequest, pk: int) -> HttpResponse:
    return render(request, "base.html", {"section": "shelf"})


def put_up_remove(request: HttpRequest, pk: int) -> HttpResponse:
    return render(request, "base.html", {"section": "shelf"})
