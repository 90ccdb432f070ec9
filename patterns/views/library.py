from django.http import HttpRequest, HttpResponse
from django.shortcuts import render


def pattern_list(request: HttpRequest) -> HttpResponse:
    return render(request, "patterns/coming.html", {"section": "patterns"})


def pattern_new(request: HttpRequest) -> HttpResponse:
    return render(request, "patterns/coming.html", {"section": "patterns"})
