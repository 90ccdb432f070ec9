"""Settings of the test suite."""

from planner.settings.base import *  # noqa: F403
from planner.settings.base import env
from planner.settings.databases import database_from_url

SECRET_KEY = "not secret: for tests only, long enough for its check 0123456789"
DEBUG = False
ALLOWED_HOSTS = ["testserver", "127.0.0.1", "localhost"]
DATABASES = {"default": dict(database_from_url(env.str("DATABASE_URL", "sqlite://:memory:")))}
# Passwords are hashed hundreds of times in the suite, and none of them is worth protecting.
PASSWORD_HASHERS = ["django.contrib.auth.hashers.MD5PasswordHasher"]
WHITENOISE_USE_FINDERS = True
WHITENOISE_AUTOREFRESH = True
# A thread has a connection of its own, which cannot see what a test has not committed.
PLANS_IN_THREADS = False
