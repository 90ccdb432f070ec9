"""Signing in as a maker does it: with a real browser."""

from urllib.parse import urlsplit

import pytest
from playwright.sync_api import expect

from planner.signin.links import make_link_path
from tests.browser.conftest import DESK, PHONE

LOOKS = [(DESK, "light"), (DESK, "dark"), (PHONE, "light"), (PHONE, "dark")]


@pytest.mark.parametrize(("viewport", "scheme"), LOOKS)
def test_link_used_twice_tells_what_to_do(new_page, maker, axe, viewport, scheme):
    address = make_link_path(maker.username)
    first = new_page(viewport, color_scheme=scheme)
    first.goto(address)
    expect(first.get_by_role("button", name="Sign out")).to_be_visible()
    assert urlsplit(first.url).path == "/"
    second = new_page(viewport, color_scheme=scheme)
    # Chromium itself logs the status 410 of the page, which is meant.
    second.route("**/enter/**", lambda route: answer_as_200(route))
    second.goto(address)
    expect(second.get_by_role("heading", level=1)).to_have_text("This address is used up")
    axe(second)


def answer_as_200(route):
    response = route.fetch()
    assert response.status == 410
    route.fulfill(response=response, status=200)


@pytest.mark.parametrize(("viewport", "scheme"), LOOKS)
def test_password_set_then_used(new_page, maker, axe, viewport, scheme):
    page = new_page(viewport, user=maker, color_scheme=scheme)
    page.goto("/password/")
    axe(page)
    page.get_by_label("New password", exact=True).fill("three skeins of madder")
    page.get_by_label("New password confirmation").fill("three skeins of madder")
    page.get_by_role("button", name="Set the password").click()
    expect(page.get_by_role("status")).to_contain_text("Your password is set")
    page.get_by_role("button", name="Sign out").click()
    expect(page.get_by_role("heading", level=1)).to_have_text("Who is at the bench?")
    axe(page)
    page.get_by_label("Name").fill("owner")
    page.get_by_label("Password").fill("two skeins of woad")
    page.get_by_role("button", name="Sign in").click()
    expect(page.get_by_role("alert")).to_contain_text("do not belong together")
    axe(page)
    page.get_by_label("Password").fill("three skeins of madder")
    page.get_by_role("button", name="Sign in").click()
    expect(page.get_by_role("button", name="Sign out")).to_be_visible()


def test_error_pages_break_no_rule(new_page, maker, axe):
    page = new_page(user=maker)
    page.route("**/nothing-here/", lambda route: answer_404_as_200(route))
    page.goto("/nothing-here/")
    expect(page.get_by_role("heading", level=1)).to_have_text("There is nothing at this address")
    axe(page)


def answer_404_as_200(route):
    response = route.fetch()
    assert response.status == 404
    route.fulfill(response=response, status=200)
