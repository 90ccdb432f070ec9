"""How a pattern is read while it is tied: its rows as written."""

from patterns.techniques import Pattern


def written_rows(pattern: Pattern) -> list[str]:
    """Return the rows of the repeat as written: "Row 7: f f b", of a grid "Row 7: A B B A"."""
    return [
        f"Row {number}: {' '.join(row) or 'no knots'}"
        for number, row in enumerate(pattern.rows, start=1)
    ]
