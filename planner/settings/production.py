"""Settings of a workshop on a server, behind HTTPS.

FLOSSWRIGHT_SECRET_KEY  at least 50 characters, kept secret
FLOSSWRIGHT_HOSTS       the names it answers to, separated by commas
DATABASE_URL            for example postgres://flosswright@localhost/flosswright
FLOSSWRIGHT_BEHIND_PROXY  true where a proxy in front ends HTTPS and sets X-Forwarded-Proto itself
FLOSSWRIGHT_STATIC      where `manage.py collectstatic` puts the static files
"""

from environs import EnvError, validate

from planner.settings.base import *  # noqa: F403
from planner.settings.base import BASE_DIR, env
from planner.settings.databases import database_from_url

DEBUG = False
SECRET_KEY = env.str("FLOSSWRIGHT_SECRET_KEY", validate=validate.Length(min=50))
TIME_ZONE = env.str("FLOSSWRIGHT_TIME_ZONE", "UTC")
ALLOWED_HOSTS: list[str] = env.list("FLOSSWRIGHT_HOSTS", validate=validate.Length(min=1))
try:
    DATABASES = {"default": database_from_url(env.str("DATABASE_URL"))}
except ValueError as error:
    raise EnvError(f'Environment variable "DATABASE_URL" invalid: {error}') from error
CSRF_TRUSTED_ORIGINS = [
    f"https://{'*' + host if host.startswith('.') else host}" for host in ALLOWED_HOSTS
]

STATIC_ROOT = env.str("FLOSSWRIGHT_STATIC", str(BASE_DIR / "staticfiles"))
STORAGES = {
    "default": {"BACKEND": "django.core.files.storage.FileSystemStorage"},
    "staticfiles": {"BACKEND": "planner.static_files.StaticFilesStorage"},
}

SESSION_COOKIE_SECURE = True
CSRF_COOKIE_SECURE = True
SECURE_SSL_REDIRECT = True
# A load balancer asks over plain HTTP whether the server lives.
SECURE_REDIRECT_EXEMPT = [r"^healthz$"]
SECURE_HSTS_SECONDS = 365 * 24 * 60 * 60
SECURE_HSTS_INCLUDE_SUBDOMAINS = True
SECURE_HSTS_PRELOAD = True
if env.bool("FLOSSWRIGHT_BEHIND_PROXY", False):
    SECURE_PROXY_SSL_HEADER = ("HTTP_X_FORWARDED_PROTO", "https")
