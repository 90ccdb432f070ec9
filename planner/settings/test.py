"""Settings of the test suite."""

from planner.settings.local import *  # noqa: F403

SECRET_KEY = "test"
PASSWORD_HASHERS = ["django.contrib.auth.hashers.MD5PasswordHasher"]
