"""Who may see what, before any view runs."""

from collections.abc import Callable
from urllib.parse import urlsplit

from django.contrib.auth.middleware import LoginRequiredMiddleware
from django.contrib.auth.views import redirect_to_login
from django.http import HttpRequest, HttpResponseBase
from django.shortcuts import resolve_url
from django_htmx.http import HttpResponseClientRedirect


class SignInRequiredMiddleware(LoginRequiredMiddleware):
    """For htmx the whole page goes to sign-in: a form swapped into a table cell helps nobody."""

    def handle_no_permission(  # type: ignore[override]
        self, request: HttpRequest, view_func: Callable[..., HttpResponseBase]
    ) -> HttpResponseBase:
        if not getattr(request, "htmx", False):
            return super().handle_no_permission(request, view_func)
        sign_in = redirect_to_login(
            _page_shown(request), resolve_url(self.get_login_url(view_func))
        )
        return HttpResponseClientRedirect(sign_in.url)


def _page_shown(request: HttpRequest) -> str:
    """The path that htmx names; anybody may send anything in its place."""
    try:
        return urlsplit(request.headers.get("HX-Current-URL", "")).path or "/"
    except ValueError:
        return "/"
