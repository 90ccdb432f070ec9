"""Settings of a workshop on one machine."""

from planner.settings.base import *  # noqa: F403
from planner.settings.base import BASE_DIR

SECRET_KEY = "interim"
DEBUG = False
ALLOWED_HOSTS = ["127.0.0.1", "localhost", "testserver"]
DATABASES = {"default": {"ENGINE": "django.db.backends.sqlite3", "NAME": BASE_DIR / ".workshop" / "workshop.sqlite3"}}
