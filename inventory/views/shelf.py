from django.http import HttpRequest, HttpResponse
from django.shortcuts import render


def shelf(request: HttpRequest) -> HttpResponse:
    return render(request, "base.html", {"section": "shelf"})
