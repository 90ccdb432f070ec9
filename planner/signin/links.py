"""One-time sign-in links.

A link carries a signed, dated nonce. The nonce's hash names a file in the data folder while the
link is unused, and removing that file is what uses the link: of two requests at once only one can.
"""

import hashlib
import logging
import re
import secrets
import time
from datetime import timedelta
from pathlib import Path

from django.conf import settings
from django.core.signing import BadSignature, TimestampSigner
from django.urls import reverse

LIFETIME = timedelta(minutes=15)
_LINK_PATTERN = re.compile(r"/enter/[^/\s'\"]+")


class HideLinks(logging.Filter):
    """A refused request is logged with its path, and such a path may still open the workshop."""

    def filter(self, record: logging.LogRecord) -> bool:
        message = record.getMessage()
        if "/enter/" in message:
            record.msg, record.args = _LINK_PATTERN.sub("/enter/...", message), ()
        return True


def make_link_path(username: str) -> str:
    folder = _folder()
    folder.mkdir(mode=0o700, parents=True, exist_ok=True)
    _remove_expired(folder)
    nonce = secrets.token_urlsafe(24)
    _unused(nonce).write_text(username, encoding="utf-8")
    return reverse("enter", kwargs={"token": _signer().sign(nonce)})


def use_link(token: str) -> str | None:
    """The user that the link is for, or None for a link that is used, expired or not ours."""
    try:
        unused = _unused(_signer().unsign(token, max_age=LIFETIME))
        username = unused.read_text(encoding="utf-8")
        unused.unlink()
    except (BadSignature, OSError):
        return None
    return username


def _signer() -> TimestampSigner:
    return TimestampSigner(salt="planner.signin.links", sep=".")


def _folder() -> Path:
    return Path(settings.DATA_DIR) / "sign-in-links"


def _unused(nonce: str) -> Path:
    return _folder() / hashlib.sha256(nonce.encode()).hexdigest()


def _remove_expired(folder: Path) -> None:
    oldest = time.time() - LIFETIME.total_seconds()
    for unused in folder.iterdir():
        if unused.stat().st_mtime < oldest:
            unused.unlink(missing_ok=True)
