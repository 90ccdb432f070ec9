from pattern_factories import make_pattern

from patterns.reading import written_rows


def test_written_rows():
    pattern = make_pattern(["f f b", "fb bf"], slots="AABBCC")
    assert written_rows(pattern) == ["Row 1: f f b", "Row 2: fb bf"]
    assert written_rows(make_pattern(["f", ""], slots="AB"))[1] == "Row 2: no knots"
