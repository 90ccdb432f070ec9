"""Settings that every way of running shares."""

from datetime import timedelta
from pathlib import Path
from typing import Any

from csp.constants import NONE, SELF
from environs import Env

BASE_DIR = Path(__file__).resolve().parents[2]
env = Env()

# The workshop's own files: database, secret key, unused sign-in links.
DATA_DIR = Path(env.str("FLOSSWRIGHT_DATA", "") or BASE_DIR / ".workshop").absolute()

INSTALLED_APPS = [
    "planner",
    "patterns",
    "inventory",
    "django_htmx",
    "axes",
    "csp",
    "django.contrib.auth",
    "django.contrib.contenttypes",
    "django.contrib.sessions",
    "django.contrib.messages",
    "whitenoise.runserver_nostatic",
    "django.contrib.staticfiles",
]
MIDDLEWARE = [
    "django.middleware.security.SecurityMiddleware",
    # Before the static files: a drawing opened by itself is a page too.
    "csp.middleware.CSPMiddleware",
    "django.middleware.clickjacking.XFrameOptionsMiddleware",
    "planner.middleware.permissions_policy",
    "whitenoise.middleware.WhiteNoiseMiddleware",
    "planner.middleware.limit_request_size",
    "django.contrib.sessions.middleware.SessionMiddleware",
    "django.middleware.common.CommonMiddleware",
    "django.middleware.csrf.CsrfViewMiddleware",
    "django.contrib.auth.middleware.AuthenticationMiddleware",
    "django_htmx.middleware.HtmxMiddleware",
    "planner.signin.middleware.SignInRequiredMiddleware",
    "django.contrib.messages.middleware.MessageMiddleware",
    "axes.middleware.AxesMiddleware",
    "planner.middleware.ChangedMeanwhile",
]
ROOT_URLCONF = "planner.urls"
WSGI_APPLICATION = "planner.wsgi.application"
TEMPLATES = [
    {
        "BACKEND": "django.template.backends.django.DjangoTemplates",
        "DIRS": [BASE_DIR / "templates"],
        "APP_DIRS": False,
        "OPTIONS": {
            "loaders": [
                (
                    "django.template.loaders.cached.Loader",
                    ["django.template.loaders.filesystem.Loader"],
                )
            ],
            "context_processors": [
                "django.template.context_processors.request",
                "django.contrib.auth.context_processors.auth",
                "django.contrib.messages.context_processors.messages",
                "planner.context.workshop",
            ],
            "builtins": ["inventory.templatetags.measures"],
        },
    }
]
DEFAULT_AUTO_FIELD = "django.db.models.BigAutoField"
LANGUAGE_CODE = "en-gb"
TIME_ZONE = "UTC"
USE_TZ = True
USE_I18N = True
STATIC_URL = "static/"
WHITENOISE_ALLOW_ALL_ORIGINS = False

# Sign-in
LOGIN_URL = "sign_in"
LOGIN_REDIRECT_URL = "home"
AUTHENTICATION_BACKENDS = [
    "axes.backends.AxesStandaloneBackend",
    "django.contrib.auth.backends.ModelBackend",
]
PASSWORD_HASHERS = [
    "django.contrib.auth.hashers.Argon2PasswordHasher",
    "django.contrib.auth.hashers.PBKDF2PasswordHasher",
]
AUTH_PASSWORD_VALIDATORS: list[dict[str, Any]] = [
    {"NAME": "django.contrib.auth.password_validation.UserAttributeSimilarityValidator"},
    {
        "NAME": "django.contrib.auth.password_validation.MinimumLengthValidator",
        "OPTIONS": {"min_length": 10},
    },
    {"NAME": "django.contrib.auth.password_validation.CommonPasswordValidator"},
]
AXES_FAILURE_LIMIT = 5
AXES_COOLOFF_TIME = timedelta(minutes=15)
AXES_LOCKOUT_PARAMETERS = [["username", "ip_address"]]
AXES_LOCKOUT_CALLABLE = "planner.error_pages.locked_out"
AXES_RESET_ON_SUCCESS = True
# The page says "wait 15 minutes"; a try in the meantime must not quietly make it longer.
AXES_RESET_COOL_OFF_ON_FAILURE_DURING_LOCKOUT = False
AXES_ENABLE_ADMIN = False
AXES_VERBOSE = False

# What the browser may do
CONTENT_SECURITY_POLICY = {
    "DIRECTIVES": {
        "default-src": [SELF],
        "script-src": [SELF],
        "style-src": [SELF],
        "img-src": [SELF],
        "object-src": [NONE],
        "base-uri": [NONE],
        "form-action": [SELF],
        "frame-ancestors": [NONE],
    }
}
PERMISSIONS_POLICY = "camera=(), geolocation=(), microphone=(), payment=(), usb=()"
SECURE_REFERRER_POLICY = "same-origin"
SECURE_CROSS_ORIGIN_OPENER_POLICY = "same-origin"
X_FRAME_OPTIONS = "DENY"
# Cookies know no ports: names of our own keep other programs on 127.0.0.1 from clobbering them.
SESSION_COOKIE_NAME = "flosswright_session"
SESSION_COOKIE_SAMESITE = "Lax"
CSRF_COOKIE_NAME = "flosswright_csrf"
CSRF_COOKIE_SAMESITE = "Lax"
CSRF_COOKIE_HTTPONLY = True
CSRF_FAILURE_VIEW = "planner.error_pages.csrf_failure"

# How much a page may send: fields and pasted text, files, and the whole request
DATA_UPLOAD_MAX_MEMORY_SIZE = 5_000_000
DATA_UPLOAD_MAX_NUMBER_FIELDS = 20_000
DATA_UPLOAD_MAX_NUMBER_FILES = 500
FILE_UPLOAD_MAX_MEMORY_SIZE = 2_500_000
LARGEST_REQUEST_BYTES = 12_000_000

# Plans are worked out in threads of the server, so that a page can show how far they are.
PLANS_IN_THREADS = True

LOGGING: dict[str, Any] = {
    "version": 1,
    "disable_existing_loggers": False,
    "filters": {"no_links": {"()": "planner.signin.links.HideLinks"}},
    "formatters": {"plain": {"format": "{asctime} {levelname} {name}: {message}", "style": "{"}},
    "handlers": {
        "stderr": {
            "class": "logging.StreamHandler",
            "filters": ["no_links"],
            "formatter": "plain",
        }
    },
    "root": {"handlers": ["stderr"], "level": "WARNING"},
    # Django hangs a handler of its own on this logger; the root's is enough.
    "loggers": {
        "django": {"handlers": [], "level": "WARNING", "propagate": True},
        # Pages not found are no news to a maker; failures (5xx) are.
        "django.request": {"level": "ERROR"},
        # Anybody can send these; the page says what was wrong, and no traceback is needed.
        "django.security.DisallowedHost": {"level": "CRITICAL"},
        "django.security.RequestDataTooBig": {"level": "CRITICAL"},
        "django.security.TooManyFieldsSent": {"level": "CRITICAL"},
        "django.security.TooManyFilesSent": {"level": "CRITICAL"},
    },
}
