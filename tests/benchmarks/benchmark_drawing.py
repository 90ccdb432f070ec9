"""How long it takes to draw bands and working charts as SVG; prints milliseconds, asserts nothing.

Run with the project's own Python: tests/benchmarks/benchmark_drawing.py
"""

import sys
import time
from collections.abc import Callable
from pathlib import Path

sys.path.insert(0, str(Path(__file__).parents[2]))

from patterns.chart import draw_chart
from patterns.drawing import draw_band
from patterns.grid import GridPattern
from patterns.knots import DiagonalPattern, Knot, knots_in_row
from patterns.svg import chart_to_svg, to_svg
from patterns.techniques import Pattern

COLOURS = {
    "A": "#2b2622",
    "B": "#7a9b58",
    "C": "#e2a23b",
    "D": "#35476b",
    "E": "#f4f1e6",
    "F": "#b23a34",
}
RUNS = 7


def diagonal(strands: int, rows: int) -> DiagonalPattern:
    """All four knots in turn, six colours side by side."""
    knots = list(Knot)
    return DiagonalPattern(
        name=f"{strands} strands, {rows} rows",
        slots=tuple("ABCDEF"[strand * 6 // strands] for strand in range(strands)),
        rows=tuple(
            tuple(knots[(place + row // 4) % 4] for place in range(knots_in_row(strands, row)))
            for row in range(1, rows + 1)
        ),
    )


def grid(columns: int, rows: int) -> GridPattern:
    cells = tuple(
        tuple("ABCDEF"[(row * column) % 6] for column in range(columns)) for row in range(rows)
    )
    return GridPattern(f"grid of {columns} columns, {rows} rows", "A", cells)


def milliseconds(work: Callable[[], str]) -> tuple[float, float]:
    """The middle and the least of several runs."""
    taken = []
    for _ in range(RUNS):
        start = time.perf_counter()
        work()
        taken.append((time.perf_counter() - start) * 1000)
    return sorted(taken)[RUNS // 2], min(taken)


def band(pattern: Pattern) -> str:
    return to_svg(draw_band(pattern, len(pattern.rows), COLOURS), title=pattern.name)


def chart(pattern: Pattern) -> str:
    rows = len(pattern.rows)
    drawn = draw_chart(pattern, COLOURS, range(1, rows + 1), rows)
    return chart_to_svg(drawn, title=pattern.name, unit_px=22)


def main() -> None:
    print(f"{'':32}{'band':>18}{'working chart':>22}")
    print(
        f"{'milliseconds of ' + str(RUNS) + ' runs':32}{'middle   least':>18}{'middle   least':>22}"
    )
    for pattern in (diagonal(12, 100), diagonal(24, 200), diagonal(60, 400), grid(24, 200)):
        figures = [milliseconds(lambda draw=draw, p=pattern: draw(p)) for draw in (band, chart)]
        columns = "".join(f"{middle:14.1f}{least:8.1f}" for middle, least in figures)
        print(f"{pattern.name:28}{columns}")


if __name__ == "__main__":
    main()
