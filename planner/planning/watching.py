"""Who looks on while a plan is worked out, and may ask it to stop."""

from typing import Protocol


class Watcher(Protocol):
    """Told how far a plan is; asked, often, whether it should stop."""

    def shade_begins(self, position: int, total: int, shade: int) -> None:
        """Hear that the `position`-th of `total` shades, counted from 1, is begun."""

    def stop_wanted(self) -> bool:
        """Say whether what is done so far is enough; once true, it stays true."""


class Unwatched:
    """Nobody looks on: the plan is worked out to its end."""

    def shade_begins(self, position: int, total: int, shade: int) -> None:
        """Tell nobody."""

    def stop_wanted(self) -> bool:
        """Never stop."""
        return False
