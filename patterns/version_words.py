"""What changed from one version of a pattern to the next, in a few words."""

from patterns.grid import GridPattern
from patterns.knots import DiagonalPattern
from patterns.techniques import Pattern

NOTHING_CHANGED = "only the way its text is written"


def change_words(before: Pattern, after: Pattern) -> str:
    """Say in a few words what is different.

    Parameters
    ----------
    before, after
        Two versions of a pattern.

    Returns
    -------
    Such as "8 strands instead of 6, 12 rows instead of 10"; `NOTHING_CHANGED` where the two are equal.
    """
    words = []
    if after.name != before.name:
        words.append(f"called {after.name} instead of {before.name}")
    if isinstance(before, DiagonalPattern) and isinstance(after, DiagonalPattern):
        words += _diagonal(before, after)
    elif isinstance(before, GridPattern) and isinstance(after, GridPattern):
        words += _grid(before, after)
    else:
        words.append(f"a {after.technique} pattern instead of a {before.technique} one")
    if after.finish != before.finish:
        words.append("another rule for where the band ends")
    return ", ".join(words) or NOTHING_CHANGED


def _diagonal(before: DiagonalPattern, after: DiagonalPattern) -> list[str]:
    words = _instead("strand", len(before.slots), len(after.slots))
    if not words:
        moved = _differing(before.slots, after.slots)
        words += [f"other letters for {_counted(moved, 'strand')}"] if moved else []
    rows = _instead("row", len(before.rows), len(after.rows))
    if rows or len(before.slots) != len(after.slots):
        return words + rows
    changed = sum(_differing(old, new) for old, new in zip(before.rows, after.rows, strict=True))
    return words + ([f"{_counted(changed, 'knot')} changed"] if changed else [])


def _grid(before: GridPattern, after: GridPattern) -> list[str]:
    words = _instead("column", before.columns, after.columns)
    words += _instead("row", len(before.rows), len(after.rows))
    if not words:
        painted = sum(
            _differing(old, new) for old, new in zip(before.rows, after.rows, strict=True)
        )
        words += [f"{_counted(painted, 'cell')} painted anew"] if painted else []
    if after.background != before.background:
        words.append(f"background {after.background} instead of {before.background}")
    if after.carry != before.carry:
        words.append("colours carried by another rule")
    return words


def _differing(before: tuple[object, ...], after: tuple[object, ...]) -> int:
    return sum(old != new for old, new in zip(before, after, strict=True))


def _instead(thing: str, before: int, after: int) -> list[str]:
    return [] if before == after else [f"{_counted(after, thing)} instead of {before}"]


def _counted(number: int, thing: str) -> str:
    return f"{number} {thing}{'' if number == 1 else 's'}"
