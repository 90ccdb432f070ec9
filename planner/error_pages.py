"""Pages for what went wrong: what it was, and what to do."""

from http import HTTPStatus

from django.conf import settings
from django.core.exceptions import RequestDataTooBig, TooManyFieldsSent, TooManyFilesSent
from django.http import HttpRequest, HttpResponse
from django.shortcuts import render
from django.utils.cache import add_never_cache_headers

TOO_LARGE = (RequestDataTooBig, TooManyFieldsSent, TooManyFilesSent)


def _page(
    request: HttpRequest, template: str, status: HTTPStatus, **context: object
) -> HttpResponse:
    response = render(request, template, context, status=status)
    add_never_cache_headers(response)
    return response


def bad_request(request: HttpRequest, exception: Exception) -> HttpResponse:
    if isinstance(exception, TOO_LARGE):
        return too_large(request)
    return _page(request, "400.html", HTTPStatus.BAD_REQUEST)


def too_large(request: HttpRequest) -> HttpResponse:
    return _page(
        request,
        "413.html",
        HTTPStatus.REQUEST_ENTITY_TOO_LARGE,
        largest_request_mb=settings.LARGEST_REQUEST_BYTES // 1_000_000,
        largest_text_mb=settings.DATA_UPLOAD_MAX_MEMORY_SIZE // 1_000_000,
        most_fields=settings.DATA_UPLOAD_MAX_NUMBER_FIELDS,
    )


def changed_meanwhile(request: HttpRequest) -> HttpResponse:
    return _page(request, "409.html", HTTPStatus.CONFLICT)


def csrf_failure(request: HttpRequest, reason: str = "") -> HttpResponse:
    return _page(request, "403_csrf.html", HTTPStatus.FORBIDDEN)


def locked_out(
    request: HttpRequest, response: HttpResponse | None, credentials: dict[str, str] | None
) -> HttpResponse:
    wait = settings.AXES_COOLOFF_TIME
    page = _page(
        request,
        "429.html",
        HTTPStatus.TOO_MANY_REQUESTS,
        wait_minutes=round(wait.total_seconds() / 60),
        tries=settings.AXES_FAILURE_LIMIT,
    )
    page["Retry-After"] = str(round(wait.total_seconds()))
    return page
