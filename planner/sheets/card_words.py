"""The words on a knotting card: what is tied, how it is read, what each run needs."""

from math import ceil

from inventory.measures import format_length
from patterns.grid import GridPattern
from patterns.knots import DiagonalPattern, Knot
from patterns.reading import run_words
from planner.sheets.card_contents import CardRun, KnottingCard
from planner.sheets.wording import counted, joined, plain_text

_KNOTS = {
    Knot.F: "f, forward: the left strand ties on the right one, and they change places.",
    Knot.B: "b, backward: the right strand ties on the left one, and they change places.",
    Knot.FB: "fb, forward-backward: the left strand ties and comes back to the left.",
    Knot.BF: "bf, backward-forward: the right strand ties and comes back to the right.",
}


def answer_words(card: KnottingCard) -> str:
    """Say what is tied, and what it measures then."""
    length = format_length(card.band_length_mm, card.unit)
    width = format_length(card.band_width_mm, card.unit)
    return f"Tie {counted(card.rows, 'row')}: the band is {length} long, {width} wide."


def choice_words(card: KnottingCard) -> str:
    """Name colourway, size and ending."""
    colourway = plain_text(card.colourway) or "no colourway chosen"
    return joined((colourway, plain_text(card.size), plain_text(card.ending)))


def start_words(card: KnottingCard) -> str:
    """Say how the strands lie at the start."""
    pattern = card.pattern
    if isinstance(pattern, DiagonalPattern):
        return (
            f"Lay {pattern.strands} strands side by side, left to right: {' '.join(pattern.slots)}."
        )
    return (
        f"Hang {pattern.columns} base strands of {pattern.background} side by side, one a column; "
        f"the leading strand of {pattern.background} begins at the left."
    )


def free_words(card: KnottingCard) -> str:
    """Say how much of each strand is left free before the first row, and after the last."""
    ends, unit = card.ends, card.unit

    def parts(tie_mm: int) -> str:
        each = {"tie": ceil(tie_mm * ends.take_up), "closing knot": ends.closing_knot_mm}
        each["to hold"] = ends.grip_mm
        return ", ".join(f"{name} {format_length(mm, unit)}" for name, mm in each.items() if mm)

    end = f"After the last row {format_length(ends.end_allowance_mm, unit)} are left"
    if ends.start == "folded":
        loop = format_length(ends.fold_loop_mm, unit)
        before = f"The loop of a fold takes {loop}; row 1 is tied below it."
        if any(piece.fold_mm is None for piece in card.pieces):
            alone = format_length(ends.single_start_mm, unit)
            before += f" A strand that is not folded: leave {alone} free before row 1."
    else:
        start = format_length(ends.single_start_allowance_mm, unit)
        before = f"Leave {start} of every strand free before row 1: {parts(ends.start_tie_mm)}."
    return f"{before} {end}: {parts(ends.end_tie_mm)}."


def reading_words(card: KnottingCard) -> list[str]:
    """Explain the knots and the chart to somebody who has only this card."""
    pattern = card.pattern
    if isinstance(pattern, GridPattern):
        return _grid_words(pattern, has_runs=bool(card.runs))
    used = {knot for row in pattern.rows for knot in row}
    return [
        "Every knot ties one strand round its neighbour twice; the colour of the strand that ties shows. "
        "Odd rows pair strands 1-2, 3-4 and so on; even rows leave the first out and pair 2-3, 4-5 "
        "and so on.",
        *(words for knot, words in _KNOTS.items() if knot in used),
        "In the chart the line through a square is the way of the strand that ties, and the letter its "
        "colour. Letters and numbers at head and foot are the strands, where they begin and end.",
    ]


def _grid_words(pattern: GridPattern, *, has_runs: bool) -> list[str]:
    background = pattern.background
    words = [
        "Every knot goes round a base strand twice. Odd rows are tied from the left, even rows from the "
        f"right: 3{background} is three cells of {background}, one after the other.",
        f"The leading strand ties the cells of {background}. At a cell of another letter, thread of that "
        "letter ties, and the leading strand passes behind the base strand.",
    ]
    if has_runs:
        words.append(
            "A bar in a cell: there a run comes in or is cut off. B1 would be the first cell of run 1 of B. "
            "Between its cells a run is carried along behind; leave a tail at both its ends."
        )
    return words


def scrap_words(run: CardRun, unit: str) -> str:
    """Say which scrap a run needs, what it ties, and where."""
    scrap = format_length(run.scrap_mm, unit)
    return (
        f"run {run.run.number} of {run.run.slot}: any scrap of {scrap} does; {run_words(run.run)}"
    )
