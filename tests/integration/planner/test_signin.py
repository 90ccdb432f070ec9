"""Signing in: by link, by password, and what an unknown visitor may see."""

import logging
import threading
import time
from datetime import timedelta
from urllib.parse import parse_qs, urlsplit

import pytest
from axes.models import AccessAttempt
from django.contrib.auth.models import User
from django.test import Client
from django.urls import URLPattern, URLResolver, get_resolver, reverse
from django.urls.converters import IntConverter
from django.utils import timezone

from planner.signin.links import HideLinks, make_link_path, use_link

pytestmark = pytest.mark.django_db
PASSWORD = "three skeins of madder"


@pytest.fixture
def visitor() -> Client:
    return Client(raise_request_exception=False)


@pytest.fixture
def maker(owner: User) -> User:
    owner.set_password(PASSWORD)
    owner.save()
    return owner


def is_signed_in(client: Client) -> bool:
    return client.get(reverse("change_password")).status_code == 200


def token_of(path: str) -> str:
    return path.removeprefix("/enter/").removesuffix("/")


# The link


def test_link_signs_in_once(visitor, owner):
    path = make_link_path("owner")
    assert not is_signed_in(visitor)
    answer = visitor.get(path)
    assert (answer.status_code, answer["Location"]) == (302, reverse("home"))
    assert is_signed_in(visitor)

    second = Client().get(path)
    assert second.status_code == 410
    assert "manage.py start" in second.content.decode()
    assert second["Referrer-Policy"] == "no-referrer"
    assert "no-store" in second["Cache-Control"]


def test_link_followed_again_by_the_same_browser_goes_home(visitor, owner):
    path = make_link_path("owner")
    visitor.get(path)
    assert visitor.get(path)["Location"] == reverse("home")


def test_link_expires_after_fifteen_minutes(monkeypatch, owner):
    early, late = make_link_path("owner"), make_link_path("owner")
    now = time.time()
    monkeypatch.setattr(time, "time", lambda: now + 14 * 60)
    assert use_link(token_of(early)) == "owner"
    monkeypatch.setattr(time, "time", lambda: now + 15 * 60 + 1)
    assert Client().get(late).status_code == 410


def test_link_expired_is_cleared_away(monkeypatch, data_folder):
    make_link_path("owner")
    now = time.time()
    monkeypatch.setattr(time, "time", lambda: now + 16 * 60)
    make_link_path("owner")
    assert len(list((data_folder / "sign-in-links").iterdir())) == 1


@pytest.mark.parametrize("method", ["head", "post", "put", "options"])
def test_link_is_not_used_up_by_other_methods(visitor, owner, method):
    path = make_link_path("owner")
    assert getattr(visitor, method)(path).status_code == 405
    visitor.get(path)
    assert is_signed_in(visitor)


@pytest.mark.parametrize(
    "token",
    ["x", "..", "a.b.c", "%00", "%2e%2e%2f", "é" * 300, "a" * 5000, "‮.abc.def", "{token}x"],
)
def test_link_not_ours_is_refused(visitor, owner, token):
    path = make_link_path("owner")
    answer = visitor.get(f"/enter/{token.format(token=token_of(path))}/")
    assert answer.status_code in (404, 410)
    assert not is_signed_in(visitor)


def test_link_signed_with_another_key_is_refused(visitor, owner, settings):
    path = make_link_path("owner")
    settings.SECRET_KEY = "another key, as long as it has to be: 0123456789 0123456789"
    assert visitor.get(path).status_code == 410


def test_link_of_a_user_who_left_is_refused(visitor, owner):
    path = make_link_path("owner")
    owner.is_active = False
    owner.save()
    assert visitor.get(path).status_code == 410


def test_link_followed_by_many_at_once_lets_one_in(owner):
    token = token_of(make_link_path("owner"))
    at_once = threading.Barrier(8)
    answers: list[str | None] = []

    def follow() -> None:
        at_once.wait()
        answers.append(use_link(token))

    threads = [threading.Thread(target=follow) for _ in range(8)]
    for thread in threads:
        thread.start()
    for thread in threads:
        thread.join()
    assert sorted(map(str, answers)) == ["None"] * 7 + ["owner"]


def test_link_cannot_be_made_from_what_lies_on_disk(data_folder):
    nonce = token_of(make_link_path("owner")).split(".")[0]
    (unused,) = (data_folder / "sign-in-links").iterdir()
    assert nonce not in unused.name + unused.read_text()
    assert data_folder.stat().st_mode & 0o077 == 0 or unused.parent.stat().st_mode & 0o077 == 0


def test_link_is_kept_out_of_the_log(settings):
    record = logging.LogRecord(
        "django.request", logging.ERROR, "", 1, "Failed: %s", ("/enter/ab.cd.ef/",), None
    )
    HideLinks().filter(record)
    assert record.getMessage() == "Failed: /enter/.../"
    assert settings.LOGGING["handlers"]["stderr"]["filters"] == ["no_links"]
    (handler,) = settings.LOGGING["root"]["handlers"]
    assert handler == "stderr"


# Who may see what


OPEN_TO_ALL = {"enter", "sign_in", "health"}
EXAMPLES = {
    "pk": 1,
    "draft_pk": 1,
    "shade_pk": 1,
    "token": "x",
    "slug": "a",
    "sheet": "tags",
    "ending": "pdf",
    "code": "a",
}


def addresses(resolver: URLResolver) -> list[URLPattern]:
    found: list[URLPattern] = []
    for entry in resolver.url_patterns:
        found += addresses(entry) if isinstance(entry, URLResolver) else [entry]
    return found


def address_of(pattern: URLPattern) -> str:
    assert pattern.name, f"{pattern} has no name"
    arguments = {}
    for name, converter in pattern.pattern.converters.items():
        usual = 1 if isinstance(converter, IntConverter) else "a"
        arguments[name] = EXAMPLES.get(name, usual)
    return reverse(pattern.name, kwargs=arguments)


@pytest.mark.parametrize("method", ["get", "post"])
def test_every_page_needs_sign_in(visitor, method):
    patterns = addresses(get_resolver())
    assert len(patterns) > 20
    for pattern in patterns:
        if pattern.name in OPEN_TO_ALL:
            continue
        address = address_of(pattern)
        answer = getattr(visitor, method)(address)
        assert answer.status_code == 302, address
        assert answer["Location"].startswith(reverse("sign_in") + "?next="), address


def test_fragment_asked_for_unsigned_sends_the_whole_page_to_sign_in(visitor):
    answer = visitor.get(
        reverse("shelf"),
        headers={"HX-Request": "true", "HX-Current-URL": "http://testserver/orders/3/?a=1"},
    )
    target = urlsplit(answer["HX-Redirect"])
    assert target.path == reverse("sign_in")
    assert parse_qs(target.query)["next"] == ["/orders/3/"]


def test_health_answers_anybody(visitor):
    answer = visitor.get(reverse("health"))
    assert (answer.status_code, answer.content) == (200, b"ok\n")


def test_health_without_database_is_503(visitor, monkeypatch):
    from django.db import OperationalError, connection

    def refuse(*arguments):
        raise OperationalError("gone")

    monkeypatch.setattr(connection, "cursor", refuse)
    assert visitor.get(reverse("health")).status_code == 503


# Name and password


def sign_in(client: Client, password: str = PASSWORD, username: str = "owner", **more):
    return client.post(
        reverse("sign_in"), {"username": username, "password": password, "next": ""}, **more
    )


def test_password_signs_in_and_leads_on(visitor, maker):
    answer = visitor.post(
        reverse("sign_in"), {"username": "owner", "password": PASSWORD, "next": "/password/"}
    )
    assert answer["Location"] == "/password/"
    assert is_signed_in(visitor)
    assert visitor.get(reverse("sign_in")).status_code == 302


def test_password_wrong_is_said_on_the_page(visitor, maker):
    answer = sign_in(visitor, "two skeins of woad")
    assert answer.status_code == 200
    assert "do not belong together" in answer.content.decode()
    assert not is_signed_in(visitor)


@pytest.mark.parametrize("password", ["", "!", PASSWORD])
def test_owner_without_password_cannot_sign_in_by_one(visitor, owner, password):
    sign_in(visitor, password)
    assert not is_signed_in(visitor)


@pytest.mark.parametrize(
    "target",
    ["https://elsewhere.example/", "//elsewhere.example", "javascript:1", "\x00", "/a\r\nB: c"],
)
def test_sign_in_never_leads_elsewhere(visitor, maker, target):
    answer = visitor.post(
        reverse("sign_in"), {"username": "owner", "password": PASSWORD, "next": target}
    )
    assert answer.status_code in (200, 302)
    if answer.status_code == 302:
        assert answer["Location"].startswith("/")
        assert not answer["Location"].startswith("//")
        assert "B" not in answer.headers


BAD_TEXTS = [
    "",
    "\x00",
    "a\x00b",
    "\x07\x1b[31m",
    "x" * 10_000,
    "‮renwo",
    "👩‍🧵" * 90,
    "' OR 1=1 --",
]


@pytest.mark.parametrize("text", BAD_TEXTS)
@pytest.mark.parametrize("field", ["username", "password", "next"])
def test_sign_in_with_bad_input_shows_the_form_again(visitor, maker, field, text):
    sent = {"username": "owner", "password": "wrong", "next": "/"} | {field: text}
    answer = visitor.post(reverse("sign_in"), sent, headers={"User-Agent": "u" * 9000})
    assert answer.status_code == 200
    assert visitor.get(reverse("sign_in"), {field: text}).status_code == 200


@pytest.mark.parametrize("body", ["", "username", "username=a&username=b&password", "%%%=%ff"])
def test_sign_in_with_damaged_body_shows_the_form_again(visitor, body):
    answer = visitor.post(
        reverse("sign_in"), body, content_type="application/x-www-form-urlencoded"
    )
    assert answer.status_code == 200


def test_five_wrong_passwords_shut_the_door_for_that_name_and_place(visitor, maker):
    other = User.objects.create_user("helper", password=PASSWORD)
    answers = [sign_in(visitor, f"guess {number}") for number in range(5)]
    assert [answer.status_code for answer in answers] == [200] * 4 + [429]
    locked = sign_in(visitor)
    assert locked.status_code == 429
    assert "Wait 15 minutes" in locked.content.decode()
    assert locked["Retry-After"] == "900"
    assert sign_in(Client(), username=other.username).status_code == 302
    assert sign_in(Client(REMOTE_ADDR="192.0.2.7")).status_code == 302


def test_shut_door_opens_after_fifteen_minutes(visitor, maker):
    for number in range(5):
        sign_in(visitor, f"guess {number}")
    AccessAttempt.objects.update(attempt_time=timezone.now() - timedelta(minutes=14))
    assert sign_in(visitor).status_code == 429
    AccessAttempt.objects.update(attempt_time=timezone.now() - timedelta(minutes=16))
    assert sign_in(visitor).status_code == 302


def test_shut_door_does_not_stop_a_link(visitor, maker):
    for number in range(5):
        sign_in(visitor, f"guess {number}")
    visitor.get(make_link_path("owner"))
    assert is_signed_in(visitor)


def test_sign_out_by_post_only(owner_client):
    assert owner_client.get(reverse("sign_out")).status_code == 405
    assert is_signed_in(owner_client)
    answer = owner_client.post(reverse("sign_out"), follow=True)
    assert "You are signed out." in answer.content.decode()
    assert not is_signed_in(owner_client)


# A password of one's own


def set_password(client: Client, first: str, second: str | None = None, **more):
    second = first if second is None else second
    return client.post(
        reverse("change_password"), {"new_password1": first, "new_password2": second, **more}
    )


def test_first_password_needs_no_old_one_and_keeps_the_session(owner_client, owner):
    assert set_password(owner_client, PASSWORD)["Location"] == reverse("home")
    assert is_signed_in(owner_client)
    assert sign_in(Client()).status_code == 302


def test_password_change_needs_the_old_one_and_ends_other_sessions(maker):
    here, elsewhere = Client(), Client()
    for client in (here, elsewhere):
        sign_in(client)
    new = "nine strands and a loop"
    assert set_password(here, new, old_password="wrong").status_code == 200
    assert set_password(here, new, old_password=PASSWORD).status_code == 302
    assert is_signed_in(here)
    assert not is_signed_in(elsewhere)


@pytest.mark.parametrize("first", [*BAD_TEXTS[:3], "short", "password123", "1234567890", "y" * 501])
def test_bad_password_is_refused_with_words(owner_client, owner, first):
    answer = set_password(owner_client, first)
    assert answer.status_code == 200
    assert 'class="problem"' in answer.content.decode()
    owner.refresh_from_db()
    assert not owner.has_usable_password()


def test_passwords_that_differ_are_refused(owner_client):
    assert set_password(owner_client, PASSWORD, PASSWORD + "s").status_code == 200
