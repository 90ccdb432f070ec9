"""Settings of a workshop on one machine, as `manage.py start` runs it."""

from django.utils.functional import SimpleLazyObject
from tzlocal import get_localzone_name

from planner.settings.base import *  # noqa: F403
from planner.settings.base import DATA_DIR, env
from planner.settings.databases import database_from_url
from planner.workshop_folder import secret_key

DEBUG = False
# "Today" is the maker's own: the zone of this machine.
TIME_ZONE = env.str("FLOSSWRIGHT_TIME_ZONE", "") or get_localzone_name()
# Read, or made, when something is first signed: `manage.py cut` must not leave a folder behind.
SECRET_KEY = SimpleLazyObject(lambda: secret_key(DATA_DIR))
# Other names are refused, so that a foreign web page cannot reach the workshop by a name of its own.
ALLOWED_HOSTS = ["127.0.0.1", "localhost"]
DATABASE_URL = env.str("DATABASE_URL", "")
DATABASES = {
    "default": database_from_url(DATABASE_URL)
    if DATABASE_URL
    else {**database_from_url("sqlite://"), "NAME": str(DATA_DIR / "workshop.sqlite3")}
}
WHITENOISE_USE_FINDERS = True
