"""A plan watched from a terminal: how far it is, and Ctrl-C to stop with the shades that are done."""

import signal
import threading
from collections.abc import Iterator
from contextlib import contextmanager
from types import FrameType
from typing import Any

from inventory.models import Shade

CLEAR_LINE = "\r\x1b[K"


class ShellWatcher:
    """Tells `stream` which shade is begun, each on the place of the one before."""

    def __init__(self, stream: Any) -> None:
        self._stream = stream if stream.isatty() else None
        self._stop = False

    def shade_begins(self, position: int, total: int, shade: int) -> None:
        name = Shade.objects.filter(pk=shade).first() if self._stream else ""
        self._tell(f"Shade {position} of {total}: {name}")

    def stop_wanted(self) -> bool:
        return self._stop

    def stop(self) -> None:
        self._stop = True
        self._tell("Stopping with the shades that are done. Ctrl-C once more gives up all.")

    def _tell(self, words: str) -> None:
        if self._stream:
            self._stream.write(CLEAR_LINE + words, ending="")
            self._stream.flush()

    @contextmanager
    def listening(self) -> Iterator["ShellWatcher"]:
        """Take the first Ctrl-C as the wish to stop; the second ends the program, as always."""
        if threading.current_thread() is not threading.main_thread():
            yield self  # signals reach the main thread only
            return
        usual = signal.getsignal(signal.SIGINT)

        def on_interrupt(number: int, frame: FrameType | None) -> None:
            signal.signal(signal.SIGINT, usual)
            self.stop()

        signal.signal(signal.SIGINT, on_interrupt)
        try:
            yield self
        finally:
            signal.signal(signal.SIGINT, usual)
            self._tell("")
