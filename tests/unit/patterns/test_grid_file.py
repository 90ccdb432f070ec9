import pytest
from hypothesis import given
from pattern_factories import grid_patterns
from test_grid import make_grid
from test_pattern_file import names

from patterns.grid import Carry
from patterns.knots import Finish, PatternError
from patterns.pattern_file import read_pattern, write_pattern

GOOD = '''name = "Heart"
technique = "grid"
background = "A"
rows = """
A B A B A
B B B B B
A B B B A
A A B A A
"""
'''


def test_read_grid_of_a_good_file():
    assert read_pattern(GOOD) == make_grid()
    assert write_pattern(make_grid()) == GOOD


@pytest.mark.parametrize(
    ("old", "new"),
    [
        ("A B A B A", "ababa"),
        ("A B A B A", "A,B,A,B,A  # the two humps"),
        ("A B A B A", "\n  AB ABA\n\n"),
        ('"grid"', '"Grid "'),
        ('"A"', '" a "'),
        ("\n", "\r\n"),
    ],
)
def test_read_grid_accepts_other_spellings(old, new):
    assert read_pattern(GOOD.replace(old, new)) == make_grid()


@pytest.mark.parametrize(
    ("added", "changes"),
    [
        ('finish = "centred"', {"finish": Finish.CENTRED}),
        ('finish = "at most"', {"finish": Finish.AT_MOST}),
        ('carry = "cut"', {"carry": Carry.CUT}),
        ('carry = "Carried"', {"carry": Carry.CARRIED}),
    ],
)
def test_read_grid_choices(added, changes):
    assert read_pattern(GOOD + added) == make_grid(**changes)


@pytest.mark.parametrize(
    ("old", "new", "message"),
    [
        ("A B B B A", "A B B A", "Row 3 has 4 cells; row 1 has 5, and every row needs as many."),
        ("A B B B A", "A B ? B A", r"Row 3, column 3: '\?' is not a letter from A to Z."),
        ("A B B B A", "A B B B A A", "Row 3 has 6 cells; row 1 has 5"),
        ('background = "A"\n', "", "The file has no 'background'. Add a line: background = \"A\""),
        ('background = "A"', 'background = "AB"', "The background 'AB' is not a letter"),
        ('background = "A"', "background = 7", "'background' has to be text in quotes"),
        ('"A"\n', '"A"\nstrands = "A A"\n', "A grid pattern has no 'strands'. Take that line out."),
        (
            '"A"\n',
            '"A"\ncarry = "never"\n',
            "There is no carry 'never'. Use least, carried or cut.",
        ),
        ('"A"\n', '"A"\nfinish = "centre"\n', "There is no finish 'centre'. Did you mean centred?"),
    ],
)
def test_read_grid_says_what_and_where(old, new, message):
    with pytest.raises(PatternError, match=message):
        read_pattern(GOOD.replace(old, new, 1))


def test_diagonal_file_has_no_background_and_is_not_centred():
    diagonal = 'name = "S"\ntechnique = "diagonal"\nstrands = "AB"\nrows = "f\\n-"\n'
    diagonal = diagonal.replace('"AB"', '"A B"')
    with pytest.raises(PatternError, match="A diagonal pattern has no 'background'"):
        read_pattern(diagonal + 'background = "A"\n')
    with pytest.raises(PatternError, match="Only grid patterns can be centred"):
        read_pattern(diagonal + 'finish = "centred"\n')


@given(grid_patterns(names=names()))
def test_write_grid_reads_back_the_same(pattern):
    assert read_pattern(write_pattern(pattern)) == pattern


def test_largest_grid_can_be_read():
    pattern = make_grid(*["AB" * 30] * 400)
    assert read_pattern(write_pattern(pattern)) == pattern
