"""The working chart: where the knotting strand goes is derived here from the four knots."""

from collections import Counter
from xml.etree import ElementTree

import pytest
from hypothesis import given
from hypothesis import strategies as st
from pattern_factories import all_same, grid_patterns, make_pattern, patterns
from test_drawing import COLOURS

from patterns.chart import draw_chart
from patterns.colours import contrast_ratio, ink_on
from patterns.geometry import Gauge
from patterns.grid import GridPattern, band_rows
from patterns.grid_lengths import find_runs
from patterns.shapes import DrawingError
from patterns.svg import chart_to_svg

SVG = "{http://www.w3.org/2000/svg}"
SLANT = make_pattern(["f f f", "f f"], slots="AABBCC")
# The four knots by definition (common practice, no source): from which side the strand that
# ties comes, and on which side it is afterwards.
COMES_AND_GOES = {
    "f": ("left", "right"),
    "b": ("right", "left"),
    "fb": ("left", "left"),
    "bf": ("right", "right"),
}


def chart_of(pattern, rows=None, first=1, **options):
    rows = rows or len(pattern.rows)
    return draw_chart(pattern, COLOURS, range(first, rows + 1), rows, **options)


def side(x, centre):
    return "left" if x < centre else "right"


def texts(chart):
    return [label.text for label in chart.labels]


# --- diagonal -----------------------------------------------------------------------------------


@given(patterns(), st.integers(1, 30))
def test_way_comes_and_goes_at_the_sides_where_the_strand_stands(pattern, rows):
    """Tied here by hand on a list of strands, with nothing but the definition of the knots."""
    chart = chart_of(pattern, rows)
    order = list(range(pattern.strands))
    drawn = iter(zip(chart.knots, chart.ways, strict=True))
    for row in range(rows):
        places = range(row % 2, pattern.strands - 1, 2)
        for place, knot in zip(places, pattern.rows[row % len(pattern.rows)], strict=True):
            square, way = next(drawn)
            comes, goes = COMES_AND_GOES[knot.value]
            tying = order[place] if comes == "left" else order[place + 1]
            if comes != goes:
                order[place], order[place + 1] = order[place + 1], order[place]
            assert order[place if goes == "left" else place + 1] == tying
            assert square.slot == pattern.slots[tying]
            assert square.colour == COLOURS[square.slot]
            assert (square.cx, square.cy) == (
                pytest.approx(chart.knots[0].cx + place),
                pytest.approx(chart.knots[0].cy + row),
            )
            (first_x, first_y), (last_x, last_y) = way.points[0], way.points[-1]
            assert first_y < square.cy < last_y
            assert side(first_x, square.cx) == comes
            assert side(last_x, square.cx) == goes
    assert next(drawn, None) is None, "more knots are drawn than are tied"


@given(patterns(), st.integers(1, 20))
def test_way_stays_in_its_square_and_begins_and_ends_on_its_edges(pattern, rows):
    chart = chart_of(pattern, rows)
    for square, way in zip(chart.knots, chart.ways, strict=True):
        reach = [abs(x - square.cx) + abs(y - square.cy) for x, y in way.points]
        assert (reach[0], reach[-1]) == (pytest.approx(square.half), pytest.approx(square.half))
        assert max(reach) <= square.half + 1e-9
        assert (len(way.points) > 2) == (
            side(way.points[0][0], square.cx) == side(way.points[-1][0], square.cx)
        )


@given(patterns(), st.integers(1, 20))
def test_threads_lead_from_edge_to_edge_in_the_colour_of_their_strand(pattern, rows):
    """Every knot has two strands coming in and two going out; each runs on from where one ended."""
    chart = chart_of(pattern, rows)
    ends = Counter()
    for square in chart.knots:
        for dx in (-0.5, 0.5):
            for dy in (-0.5, 0.5):
                ends[_at(square.cx + dx * square.half, square.cy + dy * square.half)] += 1
    touched = Counter(_at(*thread.points[place]) for thread in chart.threads for place in (0, -1))
    # Besides the knots' edges, every strand has one loose end above and one below.
    loose = touched - ends
    assert sum(loose.values()) == 2 * pattern.strands
    assert not ends - touched
    # Thread by thread the colours are those of the strands: as many runs of each as it has knots + 1.
    runs = Counter(thread.colour for thread in chart.threads)
    assert sum(runs.values()) == 2 * len(chart.knots) + pattern.strands


def _at(x, y):
    return round(x, 6), round(y, 6)


def test_thread_of_every_strand_by_hand():
    # Two strands, f in row 1, no knot in row 2: A ends at the right. Each strand: in, and out.
    chart = chart_of(make_pattern(["f", ""], slots="AB"))
    x = chart.knots[0].cx
    runs = [(thread.colour, side(thread.points[-1][0], x)) for thread in chart.threads]
    assert sorted(runs) == sorted(
        [
            (COLOURS["A"], "left"),
            (COLOURS["B"], "right"),
            (COLOURS["A"], "right"),
            (COLOURS["B"], "left"),
        ]
    )


@given(st.integers(0, 0xFFFFFF).map(lambda number: f"#{number:06x}"))
def test_ways_stand_out_from_any_thread(colour):
    # WCAG 2.2, success criterion 1.4.11: graphics need 3 : 1; contrast_ratio is held against
    # the published values in test_drawing_colours.
    chart = draw_chart(SLANT, {"A": colour, "B": colour, "C": colour}, range(1, 3), 2)
    assert all(contrast_ratio(colour, way.colour) >= 3 for way in chart.ways)


@pytest.mark.parametrize(
    ("colour", "ink", "ratio"),
    # Computed apart from the code from WCAG 2.2's definitions: #0000ff is 8.592471 : 1 on white
    # and so 21 / 8.592471 = 2.444000 on black; #008000 5.137403 and 4.087669.
    [
        ("#0000ff", "#ffffff", 8.592471),
        ("#008000", "#ffffff", 5.137403),
        ("#ffcc00", "#000000", None),
    ],
)
def test_ink_on_a_thread(colour, ink, ratio):
    assert ink_on(colour) == ink
    if ratio:
        assert contrast_ratio(colour, ink) == pytest.approx(ratio, abs=1e-6)


def test_labels_name_strands_rows_and_words():
    chart = chart_of(SLANT, 4)
    head = sorted((label for label in chart.labels if label.y < 2), key=lambda label: label.x)
    assert [label.text for label in head if label.text.isalpha()] == list("AABBCC")
    assert [label.text for label in head if label.text.isdigit()] == list("123456")
    for row, words in enumerate(["f f f", "f f", "f f f", "f f"], start=1):
        centre = chart.knots[0].cy + row - 1
        beside = [label for label in chart.labels if abs(label.y - centre - 0.23) < 0.01]
        assert [label.text for label in sorted(beside, key=lambda label: label.x)] == [
            str(row),
            words,
        ]


def test_labels_at_the_foot_name_where_the_strands_end():
    # Row 1 f f f: 2 1 4 3 6 5; row 2 f f on places 2-3 and 4-5: 2 4 1 6 3 5.
    chart = chart_of(SLANT, 2)
    foot = sorted(
        (label for label in chart.labels if label.y > chart.height - 1.2), key=lambda label: label.x
    )
    assert [label.text for label in foot if label.text.isdigit()] == list("241635")
    assert [label.text for label in foot if label.text.isalpha()] == list("ABACBC")


def test_part_of_a_chart_begins_with_the_strands_as_they_stand_then():
    chart = chart_of(SLANT, 6, first=3)
    head = sorted((label for label in chart.labels if label.y < 2), key=lambda label: label.x)
    assert [label.text for label in head if label.text.isdigit()] == list("241635")
    assert len(chart.knots) == 3 + 2 + 3 + 2
    whole = chart_of(SLANT, 6)
    assert [knot.slot for knot in chart.knots] == [knot.slot for knot in whole.knots[5:]]


def test_every_square_has_its_slot_letter_in_a_tone_that_reads():
    chart = chart_of(SLANT, 2)
    in_squares = [label for label in chart.labels if label.colour is not None]
    assert [label.text for label in in_squares] == [knot.slot for knot in chart.knots]
    for label, knot in zip(in_squares, chart.knots, strict=True):
        assert abs(label.x - knot.cx) + abs(label.y - label.size / 3 - knot.cy) < knot.half
        assert contrast_ratio(label.colour, knot.colour) >= 4.5


def test_words_may_be_counted_or_left_out():
    assert "3f" in texts(chart_of(SLANT, counted=True))
    without = chart_of(SLANT, with_words=False)
    assert not any("f" in text for text in texts(without))
    # Then the number of each row stands on both sides.
    assert Counter(texts(without))["2"] == 2 + 2  # twice for the row, twice for strand 2
    assert without.width < chart_of(all_same(6)).width + 3


# --- grid ---------------------------------------------------------------------------------------


@given(grid_patterns(), st.integers(1, 20))
def test_every_cell_stands_in_its_place_with_its_letter(pattern, rows):
    runs = find_runs(pattern, rows, Gauge())
    chart = draw_chart(pattern, COLOURS | {"Z": "#00aa55"}, range(1, rows + 1), rows, runs=runs)
    cells = [slot for row in band_rows(pattern, rows) for slot in row]
    assert [block.slot for block in chart.knots] == cells
    letters = [label.text[0] for label in chart.labels if label.colour is not None]
    assert letters == cells
    numbers = [label.text for label in chart.labels if label.y < 1.2]
    assert numbers == [str(column) for column in range(1, pattern.columns + 1)]


def make_grid(*rows, **options):
    return GridPattern("Grid", "A", tuple(tuple(row) for row in rows), **options)


def test_rows_of_a_grid_say_their_side_and_their_cells():
    chart = chart_of(make_grid("AABBBA", "ABAAAA"))
    assert {"1, from the left", "2, from the right", "2A 3B 1A", "4A 1B 1A"} <= set(texts(chart))


def test_rows_of_a_grid_without_words_are_numbered_where_they_begin():
    chart = chart_of(make_grid("AABBBA", "ABAAAA"), with_words=False)
    left = chart.knots[0].x
    right = left + 6 * chart.knots[0].width
    sides = {
        label.text: side(label.x, (left + right) / 2)
        for label in chart.labels
        if label.y > 2 and label.colour is None
    }
    assert sides == {"1": "left", "2": "right"}


def test_runs_are_marked_where_they_come_in_and_are_cut_off():
    # By hand: B begins in row 1 at column 3, tied from the left: the bar stands at the cell's
    # left. It goes on in row 2, tied from the right, columns 4 and 3, and is cut off at the left
    # of column 3. The cell of C is a run of one: a bar on either side.
    pattern = make_grid("AABB", "CABB")
    runs = find_runs(pattern, 2, Gauge())
    chart = chart_of(pattern, runs=runs)
    left, width = chart.knots[0].x, chart.knots[0].width
    top, height = chart.knots[0].y, chart.knots[0].height
    bars = sorted(
        (
            int((bar.points[0][1] - top) // height) + 1,
            int((bar.points[0][0] - left) // width) + 1,
            "left" if (bar.points[0][0] - left) % width < width / 2 else "right",
        )
        for bar in chart.ways
    )
    assert bars == [(1, 3, "left"), (2, 1, "left"), (2, 1, "right"), (2, 3, "left")]
    assert {"B1", "C1"} <= set(texts(chart))


# --- both ---------------------------------------------------------------------------------------


@pytest.mark.parametrize(
    ("numbers", "rows"), [(range(1, 1), 4), (range(0, 2), 4), (range(3, 6), 4), (range(1, 5, 2), 4)]
)
def test_chart_of_rows_that_are_not_there(numbers, rows):
    with pytest.raises(DrawingError, match="has no rows"):
        draw_chart(SLANT, COLOURS, numbers, rows)


def test_chart_of_too_many_rows():
    with pytest.raises(DrawingError, match="at most 2000"):
        draw_chart(SLANT, COLOURS, range(1, 2002), 2001)


def test_chart_needs_every_colour():
    with pytest.raises(DrawingError, match="Slot C has no colour"):
        draw_chart(SLANT, {"A": "#ffffff", "B": "#000000"}, range(1, 3), 2)


@given(st.one_of(patterns(), grid_patterns()), st.booleans())
def test_everything_lies_on_the_ground(pattern, with_words):
    chart = chart_of(pattern, len(pattern.rows), with_words=with_words)
    points = [point for stroke in (*chart.threads, *chart.ways) for point in stroke.points]
    points += [corner for knot in chart.knots for corner in knot.corners]
    points += [(label.x, label.y) for label in chart.labels]
    assert all(0 < x < chart.width and 0 < y < chart.height for x, y in points)


def test_chart_as_svg_reads_back():
    chart = chart_of(SLANT, 4)
    root = ElementTree.fromstring(chart_to_svg(chart, title="Slant & <more>", unit_px=20))
    assert root.find(f"{SVG}title").text == "Slant & <more>"
    assert float(root.get("width")) == pytest.approx(chart.width * 20, abs=0.01)
    assert [text.text for text in root.iter(f"{SVG}text")] == texts(chart)
    allowed = {"d", "fill", "stroke", "stroke-width", "stroke-linejoin", "stroke-linecap"}
    assert all(set(path.attrib) <= allowed for path in root.iter(f"{SVG}path"))


def test_words_of_a_chart_on_a_page_take_the_colour_of_its_text():
    root = ElementTree.fromstring(chart_to_svg(chart_of(SLANT), title="Slant", unit_px=20))
    fills = {text.get("fill") for text in root.iter(f"{SVG}text") if text.text == "f f f"}
    assert fills == {"currentColor"}
