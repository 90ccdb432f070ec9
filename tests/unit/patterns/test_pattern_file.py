import pytest
from hypothesis import given
from hypothesis import strategies as st
from pattern_factories import all_same, make_pattern, patterns

from patterns.knots import DiagonalPattern, Finish, Knot, PatternError
from patterns.pattern_file import MAX_FILE_BYTES, read_pattern, write_pattern

GOOD = '''name = "Harbour stripes"
technique = "diagonal"
strands = "A A B B C C"
rows = """
f f b
fb bf
"""
'''


def changed(old, new):
    assert old in GOOD
    return GOOD.replace(old, new)


def names():
    letters = st.characters(exclude_categories=("Cc", "Cs", "Zl", "Zp"))
    return st.text(letters, min_size=1, max_size=60).filter(is_name)


def is_name(text):
    try:
        named(text)
    except PatternError:
        return False
    return True


def named(text):
    return DiagonalPattern(text, ("A", "B"), ((Knot.F,), ())).name


# --- reads -----------------------------------------------------------------------------------


def test_read_pattern_of_a_good_file():
    pattern = read_pattern(GOOD)
    assert pattern == make_pattern(["f f b", "fb bf"], slots="AABBCC", name="Harbour stripes")
    assert pattern.finish is Finish.EXACT


@pytest.mark.parametrize(
    ("old", "new"),
    [
        ("A A B B C C", "a a b b c c"),
        ("A A B B C C", "A, A, B,B , C C"),
        ("f f b", "F F B"),
        ("f f b", "f, f, b"),
        ("f f b", "  f\tf   b  "),
        ("f f b\n", "\n# the slanted half\nf f b # to the right\n\n"),
        ('"diagonal"', '" Diagonal "'),
        ("\n", "\r\n"),
        ('name = "H', '\ufeffname = "H'),
        ('name = "Harbour stripes"', 'name = "  Harbour stripes "'),
    ],
)
def test_read_pattern_accepts_other_spellings(old, new):
    assert read_pattern(changed(old, new)) == read_pattern(GOOD)


@pytest.mark.parametrize(
    ("text", "finish"),
    [("nearest", Finish.NEAREST), ("At least", Finish.AT_LEAST), ("at-most", Finish.AT_MOST)],
)
def test_read_pattern_finish(text, finish):
    assert read_pattern(GOOD + f'finish = "{text}"\n').finish is finish


def test_read_pattern_two_strands_need_a_mark_for_the_empty_rows():
    text = changed("A A B B C C", "A B").replace("f f b\nfb bf", "f\n-\nb\n-")
    assert read_pattern(text).rows == ((Knot.F,), (), (Knot.B,), ())
    with pytest.raises(PatternError, match=r"Row 2 .*write - for it"):
        read_pattern(text.replace("-\n", ""))


def test_read_pattern_right_to_left_name():
    assert read_pattern(changed("Harbour stripes", "سوار الميناء")).name == "سوار الميناء"


# --- refused, with what, where and what to do ------------------------------------------------


@pytest.mark.parametrize(
    ("old", "new", "message"),
    [
        ("technique", "tehcnique", "There is no setting 'tehcnique'. Did you mean technique?"),
        (
            "technique",
            "zzz",
            "There is no setting 'zzz'. Use name, technique, strands, rows, finish, background or carry.",
        ),
        (
            'technique = "diagonal"\n',
            "",
            "The file has no 'technique'. Add a line: technique = \"diagonal\"",
        ),
        ("diagonal", "diagnal", "There is no technique 'diagnal'. Did you mean diagonal?"),
        ("diagonal", "grids", "There is no technique 'grids'. Did you mean grid?"),
        ("diagonal", "", "There is no technique ''. Use diagonal or grid."),
        (
            "diagonal",
            "Grid",
            "A grid pattern has no 'strands'. Take that line out.",
        ),
        ('"Harbour stripes"', "7", "'name' has to be text in quotes"),
        ('"Harbour stripes"', '""', "The pattern has no name."),
        ('"Harbour stripes"', '"a\\u0000b"', "The name holds a control character."),
        (
            '"Harbour stripes"',
            '"' + "x" * 10_000 + '"',
            "The name has 10000 characters; 80 is the most.",
        ),
        ('"A A B B C C"', "6", "'strands' has to be text in quotes"),
        ('"A A B B C C"', '["A", "B"]', "'strands' has to be text in quotes"),
        ("A A B B C C", "", "A pattern has 2 to 60 strands; this one has 0."),
        ("A A B B C C", "AABBCC", "Strand 1: 'AABBCC' is more than one letter. Put a space"),
        ("A A B B C C", "A A B B C 3", "Strand 6: '3' is not a letter from A to Z."),
        ("A A B B C C", "A A B B C Ä", "Strand 6: 'Ä' is not a letter from A to Z."),
        ("f f b", "f f", "Row 1 has 2 knots; 6 strands need 3 there"),
        ("f f b\nfb bf\n", "", "A repeat has 2 to 400 rows; this one has 0."),
        ("fb bf", "fb bf\nf f b", "A repeat needs an even number of rows"),
        (
            "fb bf",
            "fb",
            "Row 2 has 1 knot; 6 strands need 2 there, because even rows pair strands 2-3, 4-5.",
        ),
        ("fb bf", "fb bff", "Row 2, knot 2: 'bff' is not a knot. Use f, b, fb or bf."),
        ("fb bf", "fb \x7f", "The file is not valid TOML"),
        ("fb bf", "fb \\u0007", "Row 2, knot 2: '?' is not a knot."),
    ],
)
def test_read_pattern_says_what_and_where(old, new, message):
    with pytest.raises(PatternError) as caught:
        read_pattern(changed(old, new))
    assert str(caught.value).startswith(message)
    assert "\n" not in str(caught.value)


def test_read_pattern_counts_knot_rows_not_lines():
    with pytest.raises(PatternError) as caught:
        read_pattern(changed("f f b\nfb bf", "\n# one\n\nf f b\n\n# two\nfb x"))
    assert (caught.value.row, caught.value.knot) == (2, 2)


def test_read_pattern_finish_misspelt():
    with pytest.raises(PatternError, match=r"no finish 'neerest'\. Did you mean nearest\?"):
        read_pattern(GOOD + 'finish = "neerest"\n')


@pytest.mark.parametrize(
    "text",
    [
        "",
        "\x00",
        "= = =",
        "\ud800",
        "PK\x03\x04" + "\x00" * 500,
        "x" * (MAX_FILE_BYTES + 1),
        "é" * (MAX_FILE_BYTES // 2 + 1),
        "a = " + "[" * 30_000,
        "a = " + "[" * 30_000 + "]" * 30_000,
        "a = " + "{a=" * 15_000,
        "a" + ".a" * 30_000 + " = 1",
        "[" + "a." * 30_000 + "a]",
        "a = 1\n" * 5000,
        "n = " + "9" * 60_000,
        "n = 1e" + "9" * 60_000,
        "d = 2026-02-30",
        "d = 0001-01-01T00:00:00-23:59",
        GOOD.replace("A A B B C C", "A " * 30_000),
        GOOD.replace("f f b\n", "f f b\n" * 8000),
        GOOD.replace("f f b\n", "f " * 30_000 + "\n"),
        GOOD + GOOD,
        None,
        b"name = 1",
        7,
    ],
    ids=range(24),
)
def test_read_pattern_hostile_text(text):
    with pytest.raises(PatternError) as caught:
        read_pattern(text)
    assert len(str(caught.value)) < 400


@pytest.mark.parametrize("filler", ["x", "é"])
def test_read_pattern_at_most_64_kb(filler):
    room = MAX_FILE_BYTES - len(f"{GOOD}# \n".encode())
    full = GOOD + "# " + filler * (room // len(filler.encode())) + "\n"
    assert read_pattern(full) == read_pattern(GOOD)
    with pytest.raises(PatternError, match="The file is larger than 64 KB"):
        read_pattern(full + "# more\n")


def test_read_pattern_long_dotted_keys_are_refused_before_they_are_parsed():
    # Parsed, this key would keep the TOML reader busy for a minute.
    with pytest.raises(PatternError, match="Line 2 is not part of a pattern: too many dots"):
        read_pattern("# " + "." * 200 + "\na" + ".a" * 30_000 + " = 1")


@given(st.text(max_size=300))
def test_read_pattern_any_text(text):
    with pytest.raises(PatternError):
        read_pattern(text)


@given(
    st.text(max_size=60), st.sampled_from(["Harbour stripes", "A A B B C C", "f f b", "diagonal"])
)
def test_read_pattern_any_text_in_a_good_file(text, place):
    try:
        pattern = read_pattern(GOOD.replace(place, text))
    except PatternError:
        return
    assert read_pattern(write_pattern(pattern)) == pattern


# --- writes ----------------------------------------------------------------------------------


@given(patterns(max_strands=26, names=names()))
def test_write_pattern_reads_back_the_same(pattern):
    assert read_pattern(write_pattern(pattern)) == pattern


@pytest.mark.parametrize(
    "name", ['"quoted"', "back\\slash", '"""', "\\", "\\u0041", "a # b", "שלום"]
)
def test_write_pattern_escapes_the_name(name):
    pattern = make_pattern(["f", "f"], name=name)
    assert read_pattern(write_pattern(pattern)).name == name


def test_write_pattern_largest_pattern_can_be_read():
    pattern = all_same(60, "fb", rows=400)
    assert read_pattern(write_pattern(pattern)) == pattern


def test_write_pattern_as_documented():
    assert (
        write_pattern(read_pattern(GOOD + 'finish = "nearest"\n')) == GOOD + 'finish = "nearest"\n'
    )
