"""A workshop with its usual sizes, endings and gauge, and a signed-in maker."""

from collections.abc import Callable

import pytest
from django.db import connection
from django.test import Client
from django.test.utils import CaptureQueriesContext

from inventory.models import Workshop
from patterns.actions import load_defaults
from tests.factories import make_workshop


@pytest.fixture
def workshop(db: None) -> Workshop:
    workshop = make_workshop()
    load_defaults()
    return workshop


@pytest.fixture
def maker(owner_client: Client, workshop: Workshop) -> Client:
    return owner_client


@pytest.fixture
def query_count(maker: Client) -> Callable[[str], int]:
    """How many queries a page makes."""

    def count(url: str) -> int:
        maker.get(url)
        with CaptureQueriesContext(
            connection,
        ) as queries:
            assert maker.get(url).status_code == 200
        return len(queries)

    return count
