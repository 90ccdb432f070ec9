import itertools

import pytest

from patterns.actions import (
    LibraryError,
    add_pattern,
    change_pattern,
    check_removable,
    cut_rule,
    load_defaults,
    missing_slots,
    remove,
    restore_version,
    set_colourway,
    set_default_ending,
    set_default_gauge,
    set_ending,
    set_gauge,
    set_size,
)
from patterns.cut_lengths import CutRule
from patterns.knots import PatternError
from patterns.models import Colourway, Ending, Gauge, KnottedLength, Pattern, Size
from tests.factories import (
    make_batch,
    make_colourway,
    make_order,
    make_pattern,
    make_shade,
    make_workshop,
    pattern_text,
)

pytestmark = pytest.mark.django_db


def test_add_pattern_keeps_the_text_and_counts():
    text = "# drawn on the quay\n" + pattern_text("Quay", strands="A B C D", rows=("f b", "fb"))
    pattern = add_pattern(text=text)
    pattern.refresh_from_db()
    assert (pattern.name, pattern.text) == ("Quay", text)
    assert (pattern.strand_count, pattern.repeat_rows, pattern.technique) == (4, 2, "diagonal")


@pytest.mark.parametrize("name", ["Ferry stripe", "FERRY STRIPE"])
def test_add_pattern_with_a_taken_name_is_refused(name):
    make_pattern("Ferry stripe")
    with pytest.raises(LibraryError, match="is there already"):
        add_pattern(text=pattern_text(name))
    assert Pattern.objects.count() == 1


def test_add_pattern_that_is_none_saves_nothing():
    with pytest.raises(PatternError):
        add_pattern(text="name = 1")
    assert not Pattern.objects.exists()


def test_change_pattern_keeps_shades_of_slots_that_are_gone_out_of_sight():
    pattern = make_pattern(strands="A A B B C C")
    colourway = make_colourway(pattern)
    change_pattern(pattern=pattern, text=pattern_text(strands="A A B B D D"))
    colourway.refresh_from_db()
    colourway = Colourway.objects.get()
    shade = colourway.shades.get(slot="C").shade
    assert list(colourway.shades_by_slot()) == ["A", "B"]
    assert missing_slots(colourway) == ["D"]
    restore_version(version=pattern.versions.get(number=1))
    colourway = Colourway.objects.get()
    assert colourway.shades_by_slot()["C"] == shade
    assert missing_slots(colourway) == []


def test_change_pattern_to_a_taken_name_changes_nothing():
    make_pattern("One")
    two = make_pattern("Two")
    make_colourway(two)
    with pytest.raises(LibraryError):
        change_pattern(pattern=two, text=pattern_text("one", strands="A A B B D D"))
    two.refresh_from_db()
    assert two.name == "Two"
    assert two.colourways.get().shades.count() == 3


def test_set_colourway_needs_every_slot():
    pattern = make_pattern()
    with pytest.raises(LibraryError, match="Choose a shade for B and C"):
        set_colourway(pattern=pattern, name="Half", shades={"A": make_shade()})
    assert not Colourway.objects.exists()


def test_set_colourway_refuses_a_slot_that_the_pattern_has_not():
    pattern = make_pattern(strands="A A A A B B")
    shades = {slot: make_shade() for slot in "ABZ"}
    with pytest.raises(LibraryError, match="has no slot Z"):
        set_colourway(pattern=pattern, name="More", shades=shades)


def test_set_colourway_with_a_taken_name_is_refused():
    pattern = make_pattern()
    make_colourway(pattern, "Dusk")
    with pytest.raises(LibraryError, match="a colourway called dusk"):
        make_colourway(pattern, "dusk")
    assert Colourway.objects.count() == 1


def test_set_colourway_again_replaces_its_shades():
    pattern = make_pattern()
    colourway = make_colourway(pattern)
    shades = {slot: make_shade() for slot in "ABC"}
    set_colourway(pattern=pattern, name="Dawn", shades=shades, colourway=colourway)
    assert Colourway.objects.get().name == "Dawn"
    assert Colourway.objects.get().shades_by_slot() == shades


def test_load_defaults_twice_adds_nothing_and_keeps_changes():
    load_defaults()
    Ending.objects.filter(name="Plaited ties").update(grip_mm=77)
    counts = [model.objects.count() for model in (Gauge, Ending, Size, KnottedLength)]
    load_defaults()
    assert counts == [1, 5, 6, 30]
    assert counts == [model.objects.count() for model in (Gauge, Ending, Size, KnottedLength)]
    assert Ending.objects.get(name="Plaited ties").grip_mm == 77
    assert Ending.objects.filter(is_default=True).count() == 1
    assert Gauge.objects.filter(is_default=True).count() == 1


def test_load_defaults_sizes_cover_children_of_six_to_men():
    # Outside: Oeztuerk et al., J. Clin. Res. Pediatr. Endocrinol. 9 (2017), girls of six
    # 124.8 +- 9.3 mm, so p5 is about 124.8 - 1.645 x 9.3 = 109.5; men's p95 191 mm, ANSUR II.
    load_defaults()
    sizes = list(Size.objects.all())
    assert min(size.wrist_min_mm for size in sizes) <= 109
    assert max(size.wrist_max_mm for size in sizes) >= 191
    for earlier, later in itertools.pairwise(sizes):
        assert later.wrist_min_mm <= earlier.wrist_max_mm


def test_set_default_gauge_leaves_one_default():
    load_defaults()
    second = set_gauge(gauge=Gauge(name="Second"))
    set_default_gauge(gauge=second)
    assert Gauge.objects.get(is_default=True) == second


def test_set_default_ending_leaves_one_default():
    load_defaults()
    ending = Ending.objects.get(name="Loop and button")
    set_default_ending(ending=ending)
    assert Ending.objects.get(is_default=True) == ending


def test_set_default_of_a_gauge_removed_meanwhile_keeps_the_old_default():
    load_defaults()
    second = set_gauge(gauge=Gauge(name="Second"))
    Gauge.objects.filter(pk=second.pk).delete()
    with pytest.raises(LibraryError, match="Second was removed in another window"):
        set_default_gauge(gauge=second)
    assert Gauge.objects.get().is_default


def test_remove_a_gauge_made_the_default_meanwhile_is_refused():
    load_defaults()
    seen_before = set_gauge(gauge=Gauge(name="Second"))
    set_default_gauge(gauge=Gauge.objects.get(pk=seen_before.pk))
    with pytest.raises(LibraryError, match="is the default"):
        remove(thing=seen_before)


def test_set_gauge_makes_the_first_one_the_default():
    assert set_gauge(gauge=Gauge(name="First")).is_default
    assert not set_gauge(gauge=Gauge(name="Second")).is_default


def test_set_gauge_with_a_taken_name_is_refused():
    set_gauge(gauge=Gauge(name="Loose"))
    with pytest.raises(LibraryError, match="A gauge called Loose"):
        set_gauge(gauge=Gauge(name="Loose"))


def test_set_ending_takes_the_knotted_lengths_of_another():
    load_defaults()
    like = Ending.objects.get(name="Loop and button")
    ending = set_ending(ending=Ending(name="Bead"), lengths_like=like)
    lengths = dict(ending.knotted_lengths.values_list("size__name", "knotted_length_mm"))
    assert lengths == dict(like.knotted_lengths.values_list("size__name", "knotted_length_mm"))
    assert len(lengths) == 6


def test_set_size_changes_adds_and_drops_knotted_lengths():
    load_defaults()
    size = Size.objects.get(name="Medium")
    loose, plaited = Ending.objects.get(name="Loose ties"), Ending.objects.get(name="Plaited ties")
    set_size(size=size, knotted_lengths_mm={loose: 131, plaited: None})
    lengths = dict(size.knotted_lengths.values_list("ending__name", "knotted_length_mm"))
    assert lengths["Loose ties"] == 131
    assert "Plaited ties" not in lengths
    assert len(lengths) == 4


def test_remove_what_an_order_uses_is_refused_with_the_count():
    load_defaults()
    colourway = make_colourway(make_pattern())
    batch = make_batch()
    lines = [make_order(batch, colourway) for _ in range(2)]
    things = [colourway.pattern, colourway, lines[0].size]
    for thing in things:
        with pytest.raises(LibraryError, match="is used by 2 order lines"):
            remove(thing=thing)
        thing.refresh_from_db()


def test_remove_a_default_is_refused():
    load_defaults()
    for thing in (Gauge.objects.get(), Ending.objects.get(is_default=True)):
        with pytest.raises(LibraryError, match="is the default"):
            check_removable(thing)


def test_cut_rule_is_exact_for_an_inch_ruler():
    workshop = make_workshop(safety_share="0.125", rounding_step_mm="12.7")
    workshop.refresh_from_db()
    rule = cut_rule(workshop)
    assert rule.round_up_mm(1) == CutRule(0.1, 10).round_up_mm(1) + 3  # 12.7 up to 13
    assert (rule.safety_share, rule.rounding_step_mm * 10) == (0.125, 127)


def test_cut_rule_without_a_workshop_is_that_of_a_new_one():
    assert cut_rule(None) == CutRule(0.1, 10)
