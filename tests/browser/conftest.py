"""A real browser against a real server; any message in its console fails the test."""

from collections.abc import Callable, Iterator
from typing import Any

import pytest
from axe_playwright_python.sync_playwright import Axe
from django.conf import settings
from django.contrib.auth.models import User
from django.test import Client
from playwright.sync_api import Browser, BrowserContext, Page, sync_playwright
from playwright.sync_api import Error as PlaywrightError

from planner.management.commands.test import find_chromium, must_have_chromium

CHROMIUM_FLAGS = [
    "--no-sandbox",
    "--disable-gpu",
    "--disable-quic",
    "--no-first-run",
    "--disable-background-networking",
    "--disable-component-update",
    "--disable-sync",
]
DESK = {"width": 1280, "height": 900}
PHONE = {"width": 360, "height": 740}
PAGE_CHANGE_MS = 500
WCAG_2_2_AA = ["wcag2a", "wcag2aa", "wcag21a", "wcag21aa", "wcag22aa", "best-practice"]

OpenPage = Callable[..., Page]


@pytest.fixture(scope="session")
def django_db_modify_db_settings(tmp_path_factory) -> None:
    """The server answers in threads of its own, which cannot share a database in memory."""
    database = settings.DATABASES["default"]
    if database["ENGINE"] == "django.db.backends.sqlite3":
        file = tmp_path_factory.mktemp("database") / "workshop.sqlite3"
        database.setdefault("TEST", {})["NAME"] = str(file)


@pytest.fixture(scope="session")
def live_server(django_db_setup, live_server):
    """In this order: the server decides by the database's name whether to share a connection."""
    return live_server


@pytest.fixture(scope="session")
def browser() -> Iterator[Browser]:
    chromium = find_chromium()
    if chromium is None:
        said = pytest.fail if must_have_chromium() else pytest.skip
        said("No Chromium was found: put one on the PATH, or name it in FLOSSWRIGHT_CHROMIUM.")
    with sync_playwright() as playwright:
        browser = playwright.chromium.launch(executable_path=chromium, args=CHROMIUM_FLAGS)
        yield browser
        browser.close()


@pytest.fixture
def new_page(browser: Browser, live_server) -> Iterator[OpenPage]:
    """Opens a page of a given size; signed in where a user is given.

    At the end no page may have logged an error or a refusal of the Content-Security-Policy, and
    none may have asked any other machine for anything.
    """
    contexts: list[BrowserContext] = []
    complaints: list[str] = []

    def open_page(
        viewport: dict[str, int] = DESK, user: User | None = None, **options: Any
    ) -> Page:
        context = browser.new_context(
            base_url=live_server.url, viewport=viewport, reduced_motion="reduce", **options
        )
        context.set_default_timeout(10_000)
        contexts.append(context)
        if user is not None:
            sign_in(context, user, live_server.url)
        page = context.new_page()
        watch(page, live_server.url, complaints)
        return page

    yield open_page
    for context in contexts:
        context.close()
    assert complaints == []


def sign_in(context: BrowserContext, user: User, address: str) -> None:
    client = Client()
    client.force_login(user, backend="django.contrib.auth.backends.ModelBackend")
    cookie = client.cookies[settings.SESSION_COOKIE_NAME]
    context.add_cookies([{"name": cookie.key, "value": cookie.value, "url": address}])


def watch(page: Page, address: str, complaints: list[str]) -> None:
    def note_console(message: Any) -> None:
        # What is refused comes back with 422, a conflict with 409; Chromium notes both as errors.
        is_refusal = any(f"status of {status}" in message.text for status in (409, 422))
        if message.type in ("error", "warning") and not is_refusal:
            complaints.append(f"{page.url}: {message.text}")

    def note_request(request: Any) -> None:
        if not request.url.startswith((address, "data:", "blob:")):
            complaints.append(f"{page.url} asked for {request.url}")

    page.on("console", note_console)
    page.on("pageerror", lambda error: complaints.append(f"{page.url}: {error}"))
    page.on("request", note_request)


@pytest.fixture
def page(new_page: OpenPage) -> Page:
    return new_page()


@pytest.fixture
def maker(transactional_db) -> User:
    """The owner, seen by the server's threads too."""
    owner = User(username="owner")
    owner.set_unusable_password()
    owner.save()
    return owner


@pytest.fixture
def signed_in_page(new_page: OpenPage, maker: User) -> Page:
    return new_page(user=maker)


@pytest.fixture
def signed_in_phone(new_page: OpenPage, maker: User) -> Page:
    return new_page(PHONE, user=maker)


@pytest.fixture(scope="session")
def axe() -> Callable[[Page], None]:
    """Asserts that a page breaks no accessibility rule, and needs no scrolling sideways."""
    checker = Axe()

    def look(page: Page) -> Any:
        """A click may return before its form is answered; then the page goes from under axe."""
        page.wait_for_load_state()
        options = {"runOnly": {"type": "tag", "values": WCAG_2_2_AA}}
        try:
            return checker.run(page, options=options)
        except PlaywrightError:
            page.wait_for_timeout(PAGE_CHANGE_MS)
            page.wait_for_load_state()
            return checker.run(page, options=options)

    def check(page: Page) -> None:
        results = look(page)
        assert results.response["passes"], "axe looked at nothing"
        assert not results.response["violations"], f"{page.url}\n{results.generate_report()}"
        sideways = page.evaluate(
            "document.documentElement.scrollWidth - document.documentElement.clientWidth"
        )
        assert sideways <= 0, f"{page.url} is {sideways} px wider than the window"

    return check
