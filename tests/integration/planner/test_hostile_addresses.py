"""Addresses that nobody was given."""

import re
from collections.abc import Iterator

import pytest
from django.urls import get_resolver

KEY = re.compile(r"<key:\w+>")


def addresses_with_keys(resolver, before: str = "/") -> Iterator[str]:
    for entry in resolver.url_patterns:
        address = before + str(entry.pattern)
        if hasattr(entry, "url_patterns"):
            yield from addresses_with_keys(entry, address)
        elif KEY.search(address):
            yield address.replace("<slug:sheet>.<slug:ending>", "tags.pdf")


@pytest.mark.parametrize("method", ["get", "post"])
@pytest.mark.parametrize("key", ["9223372036854775808", "9" * 40, "9" * 5_000, "9" * 18])
def test_key_that_no_row_can_have_is_no_failure(owner_client, method, key):
    addresses = list(addresses_with_keys(get_resolver()))
    assert len(addresses) > 30
    for address in addresses:
        for places in ((key, key), (key, "1"), ("1", key)):
            keys = iter(places)
            filled = KEY.sub(lambda _, keys=keys: next(keys), address)
            answer = getattr(owner_client, method)(filled)
            # Removing what is not there sends the maker back to the list.
            assert answer.status_code in (302, 404, 405), (filled[:80], answer.status_code)
