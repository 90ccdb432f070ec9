"""`manage.py start`: a workshop on this machine, from nothing to an open page."""

import argparse
import os
import signal
import socket
import threading
import webbrowser
from typing import Any

from django.conf import settings
from django.core.management.base import BaseCommand, CommandParser
from django.core.wsgi import get_wsgi_application

from planner.bootstrap import CannotRun
from planner.signin.links import LIFETIME, make_link_path
from planner.workshop_folder import prepare

HOST = "127.0.0.1"
USUAL_PORT = 8765
PORTS_TRIED = 51


def port_number(text: str) -> int:
    if not (text.isascii() and text.isdecimal() and 1 <= int(text[:6]) <= 65535):
        raise argparse.ArgumentTypeError(f"'{text[:20]}' is not a port from 1 to 65535")
    return int(text)


class Command(BaseCommand):
    help = "Serve the workshop on this machine and print the address that signs its owner in."
    # They need the database, which may not be there yet.
    requires_system_checks: list[str] = []
    requires_migrations_checks = False

    def add_arguments(self, parser: CommandParser) -> None:
        parser.add_argument("--port", type=port_number, default=USUAL_PORT)
        parser.add_argument("--no-browser", dest="browser", action="store_false")
        # Listed for --help only: planner.bootstrap takes it out, since settings need it earlier.
        parser.add_argument(
            "--data", metavar="DIR", help=f"the workshop's folder (now {settings.DATA_DIR})"
        )

    def handle(self, *, port: int, browser: bool, **options: Any) -> None:
        if options["data"] is not None:
            raise CannotRun("Give --data once, and in full: --data DIR.")
        owner = prepare(settings.DATA_DIR)
        listener = listen(port)
        server = make_server(listener)
        taken = listener.getsockname()[1]
        if taken != port:
            self.stderr.write(f"Port {port} is taken; using {taken}.")
        signal.signal(signal.SIGTERM, signal.default_int_handler)
        try:
            self.announce(f"http://{HOST}:{taken}{make_link_path(owner.get_username())}", browser)
            # Returns on Ctrl-C, after the requests at hand are answered.
            server.run()
        except KeyboardInterrupt:
            pass
        self.stderr.write("The workshop is closed.")

    def announce(self, address: str, browser: bool) -> None:
        self.stdout.write(f"Your workshop is open: {address}")
        self.stdout.flush()
        self.stderr.write(
            f"The address works once, within {LIFETIME.total_seconds() / 60:.0f} minutes. "
            "Leave this window open; Ctrl-C closes the workshop."
        )
        if browser:
            threading.Thread(target=open_browser, args=[address], daemon=True).start()


def listen(port: int) -> socket.socket:
    """The first free port from this one on."""
    for candidate in range(port, min(port + PORTS_TRIED, 65536)):
        listener = socket.socket()
        # On Windows the same option would let two programs share a port; there it has another name.
        option = (
            socket.SO_REUSEADDR if os.name != "nt" else socket.SO_EXCLUSIVEADDRUSE  # type: ignore[attr-defined]
        )
        listener.setsockopt(socket.SOL_SOCKET, option, 1)
        try:
            listener.bind((HOST, candidate))
            # Bound is not enough: where another program listens, only this call fails.
            listener.listen(128)
        except OSError:
            listener.close()
        else:
            return listener
    raise CannotRun(
        f"No free port from {port} on: close another program, or choose one with --port N."
    )


def open_browser(address: str) -> None:
    """A browser that fails to open, or lives inside the terminal, is no reason to stop."""
    try:
        browser = webbrowser.get()
        if type(browser) is not webbrowser.GenericBrowser or "BROWSER" in os.environ:
            browser.open(address)
    except (webbrowser.Error, OSError):
        pass


def make_server(listener: socket.socket) -> Any:
    from waitress import create_server

    return create_server(
        get_wsgi_application(),
        sockets=[listener],
        threads=8,
        ident=None,
        # Well above what the pages allow, so that those can answer with words.
        max_request_body_size=10 * settings.LARGEST_REQUEST_BYTES,
        clear_untrusted_proxy_headers=True,
    )
