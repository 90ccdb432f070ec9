"""What tests of every kind share."""

import os
from pathlib import Path

import pytest
from django.contrib.auth.models import User
from django.test import Client
from hypothesis import settings as hypothesis_settings

# A busy machine is no failure, and the same input everywhere makes a red build repeatable.
hypothesis_settings.register_profile("default", deadline=None)
hypothesis_settings.register_profile("ci", deadline=None, derandomize=True)
hypothesis_settings.load_profile("ci" if os.environ.get("CI") else "default")


@pytest.fixture(autouse=True)
def data_folder(settings, tmp_path: Path) -> Path:
    """A folder of the test's own: none may write into a developer's workshop."""
    settings.DATA_DIR = tmp_path / "workshop"
    return settings.DATA_DIR


@pytest.fixture
def owner(db) -> User:
    owner = User.objects.create(username="owner")
    owner.set_unusable_password()
    owner.save()
    return owner


@pytest.fixture
def owner_client(owner: User) -> Client:
    """A signed-in browser; a failure in a view becomes a 500 page, as it would for a maker."""
    client = Client(raise_request_exception=False)
    client.force_login(owner, backend="django.contrib.auth.backends.ModelBackend")
    return client
