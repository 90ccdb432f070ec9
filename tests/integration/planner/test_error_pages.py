"""What a maker sees when something is wrong, and what the browser is told it may do."""

import logging

import pytest
from django.test import Client
from django.urls import path, reverse

from planner.signin.links import make_link_path
from planner.urls import *  # noqa: F403
from planner.urls import urlpatterns as own_addresses

pytestmark = pytest.mark.django_db


def break_down(request):
    raise RuntimeError("a bobbin broke")


def forbid(request):
    from django.core.exceptions import PermissionDenied

    raise PermissionDenied


# This module stands in for planner.urls where a test needs a page that fails.
urlpatterns = [*own_addresses, path("break-down/", break_down), path("forbid/", forbid)]


def words(answer) -> str:
    return " ".join(answer.content.decode().split())


def test_failure_is_logged_and_shown_with_words(owner_client, settings, caplog):
    settings.ROOT_URLCONF = __name__
    answer = owner_client.get("/break-down/")
    assert answer.status_code == 500
    assert "Something broke, and it was not you" in words(answer)
    assert "bobbin" not in words(answer)
    (record,) = [entry for entry in caplog.records if entry.levelno >= logging.ERROR]
    assert "a bobbin broke" in str(record.exc_info)


def test_failure_reaches_standard_error(settings):
    django_logger = logging.getLogger("django.request")
    assert django_logger.isEnabledFor(logging.ERROR)
    assert any(
        isinstance(handler, logging.StreamHandler) and handler.filters
        for handler in logging.getLogger().handlers
    )


def test_forbidden_page_has_words(owner_client, settings):
    settings.ROOT_URLCONF = __name__
    answer = owner_client.get("/forbid/")
    assert answer.status_code == 403
    assert "Ask the owner" in words(answer)


@pytest.mark.parametrize(
    "address", ["/nothing/", "/%00/", "/orders/99999999999999999999999/", "/‮/"]
)
def test_unknown_address_has_words(owner_client, address):
    answer = owner_client.get(address)
    assert answer.status_code == 404
    assert "There is nothing at this address" in words(answer)


def test_stale_form_has_words(owner):
    client = Client(enforce_csrf_checks=True)
    client.force_login(owner, backend="django.contrib.auth.backends.ModelBackend")
    answer = client.post(reverse("change_password"), {"csrfmiddlewaretoken": "old"})
    assert answer.status_code == 403
    assert "This page was open too long" in words(answer)


def test_wrong_host_has_words(owner_client):
    answer = owner_client.get("/", headers={"Host": "evil.example"})
    assert answer.status_code == 400
    assert "could not be read" in words(answer)


@pytest.mark.parametrize(
    "sent",
    [
        {"new_password1": "x" * 5_000_001},
        {f"field{number}": "" for number in range(20_001)},
    ],
    ids=["text", "fields"],
)
def test_form_too_large_states_the_limits(owner_client, sent):
    answer = owner_client.post(reverse("change_password"), sent)
    assert answer.status_code == 413
    for limit in ("12 MB", "5 MB", "20000 fields"):
        assert limit in words(answer)


def test_request_too_large_is_refused_unread(owner_client):
    answer = owner_client.post(
        reverse("change_password"), b"x", content_type="text/plain", CONTENT_LENGTH="12000001"
    )
    assert answer.status_code == 413
    just_below = owner_client.post(
        reverse("change_password"), b"x", content_type="text/plain", CONTENT_LENGTH="12000000"
    )
    assert just_below.status_code != 413


@pytest.mark.parametrize("length", ["", "-1", "x", "９" * 30, "1e9"])
def test_odd_content_length_is_no_failure(owner_client, length):
    answer = owner_client.get(reverse("change_password"), CONTENT_LENGTH=length)
    assert answer.status_code < 500


def test_every_answer_tells_the_browser_to_be_strict(client):
    answer = client.get(reverse("sign_in"))
    policy = dict(
        directive.strip().split(" ", 1)
        for directive in answer["Content-Security-Policy"].split(";")
    )
    assert policy == {
        "default-src": "'self'",
        "script-src": "'self'",
        "style-src": "'self'",
        "img-src": "'self'",
        "object-src": "'none'",
        "base-uri": "'none'",
        "form-action": "'self'",
        "frame-ancestors": "'none'",
    }
    assert answer["X-Frame-Options"] == "DENY"
    assert answer["X-Content-Type-Options"] == "nosniff"
    assert answer["Referrer-Policy"] == "same-origin"
    assert "camera=()" in answer["Permissions-Policy"]


def test_cookies_are_kept_from_scripts_and_other_sites(client, owner):
    cookies = client.get(make_link_path(owner.username)).cookies
    assert set(cookies) == {"flosswright_session", "flosswright_csrf"}
    for cookie in cookies.values():
        assert cookie["httponly"]
        assert cookie["samesite"] == "Lax"
