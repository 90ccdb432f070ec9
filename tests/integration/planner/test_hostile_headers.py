"""Headers that nobody would send in good faith, and those that every answer carries."""

import pytest


@pytest.mark.parametrize("shown", ["http://[::1", "//[", "\x00", "http://a]b/"])
def test_signed_out_htmx_request_from_a_broken_address_goes_to_sign_in(client, db, shown):
    client.raise_request_exception = False
    answer = client.get("/orders/", headers={"hx-request": "true", "hx-current-url": shown})
    assert answer.status_code == 200
    assert answer.headers["HX-Redirect"].startswith("/sign-in/?next=/")


@pytest.mark.parametrize(
    "address", ["/", "/sign-in/", "/no-such/", "/healthz", "/static/flosswright/mark.svg"]
)
def test_every_answer_forbids_frames_and_foreign_content(owner_client, address):
    answer = owner_client.get(address)
    answer.close()  # a static file is open until then
    headers = answer.headers
    assert "frame-ancestors 'none'" in headers["Content-Security-Policy"]
    assert "default-src 'self'" in headers["Content-Security-Policy"]
    assert headers["X-Frame-Options"] == "DENY"
    assert headers["X-Content-Type-Options"] == "nosniff"
    assert "camera=()" in headers["Permissions-Policy"]
