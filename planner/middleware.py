"""What holds for every request and every answer."""

from collections.abc import Callable

from django.conf import settings
from django.http import HttpRequest, HttpResponse

from planner import error_pages

GetResponse = Callable[[HttpRequest], HttpResponse]


def permissions_policy(get_response: GetResponse) -> GetResponse:
    def middleware(request: HttpRequest) -> HttpResponse:
        response = get_response(request)
        response.setdefault("Permissions-Policy", settings.PERMISSIONS_POLICY)
        return response

    return middleware


def limit_request_size(get_response: GetResponse) -> GetResponse:
    """Django limits fields but not files: refuse the whole before any of it is read."""

    def middleware(request: HttpRequest) -> HttpResponse:
        announced = request.META.get("CONTENT_LENGTH") or "0"
        if announced.isdecimal() and int(announced[:20]) > settings.LARGEST_REQUEST_BYTES:
            return error_pages.too_large(request)
        return get_response(request)

    return middleware
