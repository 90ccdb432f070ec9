"""A workshop with one pattern, and a signed-in maker."""

import pytest
from django.test import Client

from patterns.models import Colourway
from planner.models import Batch
from tests.factories import make_batch, make_colourway, make_pattern, make_ready_workshop


@pytest.fixture
def page(owner_client: Client) -> Client:
    return owner_client


@pytest.fixture
def colourway(db: None) -> Colourway:
    make_ready_workshop()
    return make_colourway(make_pattern("Wave"), "Dawn")


@pytest.fixture
def batch(db: None) -> Batch:
    return make_batch()
