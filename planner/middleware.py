"""What holds for every request and every answer."""

import logging
from collections.abc import Callable

from django.conf import settings
from django.db import IntegrityError
from django.http import HttpRequest, HttpResponse

from inventory.actions import ShelfError
from planner import error_pages

logger = logging.getLogger(__name__)

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


class ChangedMeanwhile:
    """Two windows at the same moment: what one uses, the other has just removed.

    The checks before a write cannot see that; the database can, and keeps nothing of the write.
    """

    def __init__(self, get_response: GetResponse) -> None:
        self.get_response = get_response

    def __call__(self, request: HttpRequest) -> HttpResponse:
        return self.get_response(request)

    def process_exception(self, request: HttpRequest, exception: Exception) -> HttpResponse | None:
        if not isinstance(exception, IntegrityError | ShelfError):
            return None
        view = request.resolver_match and request.resolver_match.view_name
        logger.warning("%s kept nothing: %s", view, exception)
        return error_pages.changed_meanwhile(request)
