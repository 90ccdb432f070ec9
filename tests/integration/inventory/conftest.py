import pytest
from django.contrib.auth import get_user_model
from django.test import Client

from inventory.models import Workshop
from tests.factories import make_workshop


@pytest.fixture
def workshop(db: None) -> Workshop:
    return make_workshop()


@pytest.fixture
def maker(client: Client, workshop: Workshop) -> Client:
    """A browser in which the owner is signed in."""
    client.force_login(get_user_model().objects.create_user("owner"))
    return client
