import unicodedata

import pytest
from hypothesis import given
from hypothesis import strategies as st

from patterns.alphabet import (
    HEIGHTS,
    MAX_LETTERS,
    SAME_MARKS,
    LetteringError,
    lettering,
    letters,
    stack_words,
    turn_along,
    write_words,
)
from patterns.drawing import draw_band
from patterns.grid import GridPattern
from patterns.shapes import Block, Drawing

EVERY_HEIGHT = pytest.mark.parametrize("height", HEIGHTS)
PLAIN = "ABCDEFGHIJKLMNOPQRSTUVWXYZ0123456789&!?.-'+♥"
COLOURS = {"A": "#ffffff", "B": "#000000"}

words = st.text(st.sampled_from(PLAIN + " "), min_size=1, max_size=12).filter(str.strip)


def shown(picture: tuple[tuple[bool, ...], ...]) -> list[str]:
    return ["".join("#" if cell else "." for cell in row) for row in picture]


@EVERY_HEIGHT
def test_alphabet_has_letters_digits_and_marks(height):
    assert set(PLAIN) <= set(letters(height))
    assert set("ÄÖÜÇÅØÑ") <= set(letters(height))


def test_taller_alphabet_has_the_letters_of_neighbouring_languages():
    # German, French, Spanish, Italian, Portuguese and Danish, from memory.
    wanted = "ÄÖÜ ÀÂÇÈÉÊËÎÏÔÙÛ ÁÍÑÓÚ ÌÒ ÃÕ ÅÆØ".replace(" ", "")
    assert set(wanted) <= set(letters(7))


@EVERY_HEIGHT
def test_every_letter_is_a_full_box_of_its_height(height):
    for name, picture in letters(height).items():
        assert len(picture) == height, name
        assert {len(row) for row in picture} == {len(picture[0])}, name
        assert 1 <= len(picture[0]) <= 7, name
        # Proportional: no empty column at either side, else gaps would differ.
        assert any(row[0] for row in picture), name
        assert any(row[-1] for row in picture), name


@EVERY_HEIGHT
def test_every_letter_looks_different(height):
    drawn = [tuple(shown(picture)) for picture in letters(height).values()]
    assert len(set(drawn)) == len(drawn)
    # One wrong cell must not turn a letter or digit into another.
    capitals = [tuple(shown(letters(height)[name])) for name in PLAIN[:36]]
    for number, first in enumerate(capitals):
        for second in capitals[number + 1 :]:
            if len(first[0]) == len(second[0]):
                apart = sum(a != b for a, b in zip("".join(first), "".join(second), strict=True))
                assert apart >= 2, "\n".join([*first, "", *second])


@EVERY_HEIGHT
def test_letters_stand_on_the_lowest_row(height):
    for name in PLAIN[:36]:
        assert any(letters(height)[name][0]), name
        assert any(letters(height)[name][-1]), name


def test_a_word_is_written_with_one_cell_between_letters():
    assert shown(write_words("Ida", 5)) == [
        "###.###...##.",
        ".#..#..#.#..#",
        ".#..#..#.####",
        ".#..#..#.#..#",
        "###.###..#..#",
    ]


@EVERY_HEIGHT
@given(text=words)
def test_a_word_is_as_wide_as_its_letters_and_gaps(height, text):
    clean = " ".join(text.split())
    widths = [2 if name == " " else len(letters(height)[name][0]) for name in clean]
    picture = write_words(text, height)
    assert {len(row) for row in picture} == {sum(widths) + len(widths) - 1}
    assert len(picture) == height


@EVERY_HEIGHT
@given(text=words)
def test_letters_can_be_found_back_in_the_word(height, text):
    picture = write_words(text, height)
    left = 0
    for name in " ".join(text.split()):
        letter = ((False, False),) * height if name == " " else letters(height)[name]
        width = len(letter[0])
        assert tuple(row[left : left + width] for row in picture) == letter
        assert not any(row[left + width] for row in picture if left + width < len(row))
        left += width + 1


def test_words_run_down_the_band_with_the_narrow_letter_in_the_middle():
    assert shown(stack_words("m i", 5)) == [
        "#...#",
        "##.##",
        "#.#.#",
        "#...#",
        "#...#",
        ".....",
        ".....",
        ".....",
        ".....",
        ".###.",
        "..#..",
        "..#..",
        "..#..",
        ".###.",
    ]


@given(text=words)
def test_a_stack_has_each_letter_in_turn(text):
    clean = " ".join(text.split())
    picture = stack_words(text, 5)
    assert len(picture) == sum(2 if name == " " else 5 for name in clean) + len(clean) - 1
    cells = sum(sum(row) for row in picture)
    assert cells == sum(sum(map(sum, letters(5)[name])) for name in clean if name != " ")


def test_every_spelling_of_a_letter_is_the_same():
    composed = write_words("ÅÖ", 7)
    assert write_words(unicodedata.normalize("NFD", "åö"), 7) == composed
    assert write_words("  nora   ida ", 5) == write_words("NORA IDA", 5)
    assert write_words("weiß", 5) == write_words("WEISS", 5)
    assert write_words("o’d–❤️", 5) == write_words("O'D-♥", 5)


@EVERY_HEIGHT
def test_marks_a_keyboard_puts_in_place_are_there(height):
    assert all(same == "" or same == " " or same in letters(height) for same in SAME_MARKS.values())


@pytest.mark.parametrize(
    ("text", "height", "message"),
    [
        ("", 5, "Write a word first."),
        (" \t ", 7, "Write a word first."),
        ("ab字", 7, "There is no '字' (letter 3) 7 cells high. Use A to Z"),
        ("Zoé", 5, "There is no 'É' (letter 3) 5 cells high. Take the letters of 7 cells"),
        ("Šárka", 7, "There is no 'Š' (letter 1) 7 cells high. Write S instead."),
        ("a\x00", 5, "There is no '?' (letter 2) 5 cells high."),
        ("a\u202eb", 5, "There is no '?' (letter 2) 5 cells high."),
        ("a" * (MAX_LETTERS + 1), 5, "Write at most 60 letters; these are 61."),
        ("Ida", 6, "Letters are 5 or 7 cells high, not 6."),
    ],
)
def test_words_that_cannot_be_shown_say_why(text, height, message):
    for write in (write_words, stack_words):
        with pytest.raises(LetteringError) as raised:
            write(text, height)
        assert str(raised.value).startswith(message)


def test_words_run_in_two_directions_only():
    with pytest.raises(LetteringError, match="along the band or down the band"):
        lettering("Ida", 5, "up")  # type: ignore[arg-type]


def lit_cells(drawing: Drawing) -> list[str]:
    """Sample a drawing at the middle of every cell, from its upper left corner."""
    blocks = [shape for shape in drawing.shapes if isinstance(shape, Block)]
    lefts = sorted({round(block.x, 6) for block in blocks})
    tops = sorted({round(block.y, 6) for block in blocks})
    slots = {(round(block.x, 6), round(block.y, 6)): block.slot for block in blocks}
    return ["".join("#" if slots[x, y] == "B" else "." for x in lefts) for y in tops]


@pytest.mark.parametrize(("direction", "layout"), [("along", "horizontal"), ("down", "vertical")])
@EVERY_HEIGHT
def test_letters_stand_upright_in_the_drawn_band(height, direction, layout):
    rows = lettering("Rf2", height, direction)
    slots = tuple(tuple("B" if cell else "A" for cell in row) for row in rows)
    drawing = draw_band(GridPattern("R", "A", slots), len(rows), COLOURS, layout=layout)
    upright = write_words("Rf2", height) if direction == "along" else rows
    assert lit_cells(drawing) == shown(upright)


def test_the_lowest_row_of_a_letter_is_in_column_1():
    # An L lies on its long foot: all of column 1 is lit, of the last column only its stem.
    rows = turn_along(write_words("L", 7))
    assert [row[0] for row in rows] == [True] * 4
    assert [row[-1] for row in rows] == [True, False, False, False]
