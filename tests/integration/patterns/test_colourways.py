import re
from html import unescape

import pytest
from django.urls import reverse

from inventory.measures import format_length
from inventory.models import Shade, ShelfPiece, Workshop
from patterns.colour_difference import Sight, as_seen, difference, difference_words
from patterns.models import Colourway, Pattern, Size
from patterns.neighbours import neighbouring_slots
from tests.factories import (
    make_batch,
    make_colourway,
    make_grid_pattern,
    make_order,
    make_pattern,
    make_shade,
    put_thread,
)

HTMX = {"HX-Request": "true"}
# Session, sign-in and habits; then pattern, shades, shelf, sizes, ending, gauge, knotted length.
MOST_QUERIES = 20


@pytest.fixture
def pattern(maker) -> Pattern:
    return make_pattern()


@pytest.fixture
def shades(db) -> list[Shade]:
    return [make_shade("M1", "Madder"), make_shade("I1", "Indigo"), make_shade("W1", "Weld")]


def new(pattern: Pattern) -> str:
    return reverse("colourway_new", args=[pattern.pk])


def selected(page: str, name: str) -> str:
    select = page[page.index(f'<select name="{name}"') :]
    return re.search(r'<option value="([^"]*)" selected>', select[: select.index("</select>")])[1]


def typed(shades: list[Shade], **changes) -> dict:
    slots = {f"slot_{slot}": shade.pk for slot, shade in zip("ABC", shades, strict=True)}
    return {"name": "Dusk"} | slots | changes


def test_colourway_new_without_shades_says_to_add_them_first(maker, pattern):
    page = maker.get(new(pattern)).content.decode()
    assert "You have no shades yet" in page
    assert reverse("shade_new") in page
    assert "Save the colourway" not in page


def test_colourway_new_asks_for_every_slot_with_its_strands(maker, pattern, shades):
    page = maker.get(new(pattern)).content.decode()
    assert "A: strands 1, 2" in page
    assert "C: strands 5, 6" in page
    assert "M1 Madder" in page


def test_colourway_new_saves_the_choice_and_shows_it(maker, pattern, shades):
    response = maker.post(new(pattern), typed(shades), follow=True)
    colourway = Colourway.objects.get()
    assert colourway.shades_by_slot() == dict(zip("ABC", shades, strict=True))
    assert response.redirect_chain[-1][0].endswith(f"?colourway={colourway.pk}")
    assert reverse("batch_list") in response.content.decode()


@pytest.mark.parametrize(
    ("change", "words"),
    [
        ({"name": ""}, "Fill this in."),
        ({"name": "n" * 61}, "At most 60 characters"),
        ({"name": "a\0"}, "hidden character"),
        ({"slot_B": ""}, "Choose a shade for B."),
        ({"slot_B": "999999"}, "That shade is not on your list."),
        ({"slot_B": "\0"}, "That shade is not on your list."),
        ({"slot_B": "<script>"}, "That shade is not on your list."),
    ],
)
def test_colourway_new_wrong_says_what_and_keeps_the_rest(maker, pattern, shades, change, words):
    response = maker.post(new(pattern), typed(shades, **change))
    page = response.content.decode()
    assert words in page
    assert f'<option value="{shades[2].pk}" selected>' in page
    assert not Colourway.objects.exists()


def test_colourway_new_with_a_taken_name_says_so(maker, pattern, shades):
    make_colourway(pattern, "Dusk")
    page = maker.post(new(pattern), typed(shades, name="DUSK")).content.decode()
    assert "Ferry stripe has a colourway called DUSK already." in page
    assert Colourway.objects.count() == 1


def test_colourway_preview_draws_and_saves_nothing(maker, pattern, shades):
    red = make_shade("R1", colour="#aa1122")
    data = typed(shades, slot_A=red.pk, slot_C="", preview="yes")
    whole = maker.post(new(pattern), data).content.decode()
    fragment = maker.post(new(pattern), data, headers=HTMX).content.decode()
    assert not Colourway.objects.exists()
    for page in (whole, fragment):
        assert 'fill="#aa1122"' in page
    assert "Choose a shade for C." not in whole
    assert f'<option value="{red.pk}" selected>' in whole
    assert fragment.lstrip().startswith('<div id="colourway-band"')
    assert '<div class="advice" id="advice-A" hx-swap-oob="true">' in fragment
    assert "hx-swap-oob" not in whole


@pytest.mark.parametrize("value", ["abc", "-1", "9" * 5_000, "\0"])
def test_colourway_preview_of_anything_is_answered(maker, pattern, shades, value):
    response = maker.post(new(pattern), {"preview": "yes", "slot_A": value, "name": value})
    assert response.status_code == 200


def test_colourway_edit_starts_from_what_is_chosen(maker, pattern, shades):
    maker.post(new(pattern), typed(shades))
    colourway = Colourway.objects.get()
    url = reverse("colourway_edit", args=[colourway.pk])
    page = maker.get(url).content.decode()
    for slot, shade in zip("ABC", shades, strict=True):
        assert selected(page, f"slot_{slot}") == str(shade.pk)
    maker.post(url, typed(shades[::-1], name="Dawn"))
    colourway.refresh_from_db()
    assert colourway.name == "Dawn"
    assert colourway.shades_by_slot()["A"] == shades[2]
    assert Colourway.objects.count() == 1


def test_colourway_edit_completes_what_lacked_a_shade(maker, pattern, shades):
    colourway = make_colourway(pattern, "Dusk")
    colourway.shades.filter(slot="B").delete()
    maker.post(reverse("colourway_edit", args=[colourway.pk]), typed(shades))
    assert set(Colourway.objects.get().shades_by_slot()) == {"A", "B", "C"}


def test_colourway_remove_can_be_undone(maker, pattern, shades):
    maker.post(new(pattern), typed(shades))
    before = Colourway.objects.get()
    was = before.shades_by_slot()
    response = maker.post(reverse("colourway_remove", args=[before.pk]), follow=True)
    assert not Colourway.objects.exists()
    page = response.content.decode()
    assert "Undo" in page
    undo = {"name": "Dusk"} | {f"slot_{slot}": shade.pk for slot, shade in was.items()}
    for name, value in undo.items():
        assert f'name="{name}" value="{value}"' in page
    maker.post(new(pattern), undo)
    assert Colourway.objects.get().shades_by_slot() == was


def test_colourway_remove_in_use_is_refused_with_the_reason(maker, pattern):
    colourway = make_colourway(pattern)
    make_order(make_batch(), colourway)
    response = maker.post(reverse("colourway_remove", args=[colourway.pk]), follow=True)
    assert "Harbour is used by 1 order line." in response.content.decode()
    assert Colourway.objects.exists()


def test_colourway_pages_wrong_method_and_signed_out(maker, client, pattern):
    colourway = make_colourway(pattern)
    assert maker.get(reverse("colourway_remove", args=[colourway.pk])).status_code == 405
    assert maker.put(new(pattern)).status_code == 405
    assert client.get(new(pattern)).status_code == 302
    assert client.post(reverse("colourway_remove", args=[colourway.pk])).status_code == 302
    assert Colourway.objects.exists()


def test_colourway_that_is_not_there_is_not_found(maker):
    assert maker.get(reverse("colourway_new", args=[99])).status_code == 404
    assert maker.get(reverse("colourway_edit", args=[99])).status_code == 404
    assert maker.post(reverse("colourway_remove", args=[99])).status_code == 404


def looked_at(maker, pattern: Pattern, **chosen: Shade) -> str:
    data = {f"slot_{slot}": shade.pk for slot, shade in chosen.items()}
    return words(maker.post(new(pattern), {"preview": "yes", **data}).content.decode())


def words(page: str) -> str:
    """The page without its tags, blanks put together."""
    return re.sub(r" ([.:])", r"\1", " ".join(unescape(re.sub(r"<[^>]*>", " ", page)).split()))


def test_each_shade_says_what_lies_on_the_shelf(maker, pattern, shades):
    put_thread(shades[0], 8_000, 8_000, kind=ShelfPiece.Kind.WHOLE)
    put_thread(shades[0], 7_040)
    page = maker.get(new(pattern)).content.decode()
    assert ">M1 Madder: 23 m on the shelf, 2 whole skeins</option>" in page
    assert ">I1 Indigo: none on the shelf</option>" in page


def test_each_slot_says_what_one_usual_bracelet_takes(maker, pattern, shades):
    # The numbers of the pattern's page: the middle size with the default ending and gauge.
    answer = maker.get(reverse("pattern_detail", args=[pattern.pk])).context["answer"]
    page = maker.get(new(pattern)).content.decode()
    [line] = [line for line in answer.slots if line.slot == "B"]
    assert f"B takes {format_length(line.total_mm)} in 2 pieces." in words(page)


def test_lengths_are_those_of_the_workshop(maker, pattern, shades):
    Workshop.objects.update(length_unit="in")
    put_thread(shades[0], 9_144)
    assert "10 yd on the shelf" in looked_at(maker, pattern, A=shades[0])


def test_shade_without_enough_names_the_nearest_that_has_it(maker, pattern):
    wanted = make_shade("R1", "Rose", "#aa1122")
    near = make_shade("R2", "Rust", "#b01a22")
    nearer_but_short = make_shade("R3", "Ruby", "#aa1123")
    far = make_shade("B1", "Blue", "#1122aa")
    put_thread(nearer_but_short, 300)
    put_thread(far, 8_000)
    put_thread(near, 8_000)
    page = looked_at(maker, pattern, A=wanted)
    assert "No lot on the shelf holds enough. Nearest on the shelf:" in page
    # Sharma, Wu & Dalal (2005) as in tests/unit/patterns/test_colour_difference.py.
    amount = difference(wanted.colour, near.colour)
    assert (
        f"Take R2 Rust for A {difference_words(amount)} (difference {amount:.1f}), 8 m on the shelf"
        in page
    )
    assert page.index("Take R2") < page.index("Take B1")
    assert "Take R3" not in page
    assert "Take R1" not in page


def test_shade_with_enough_names_no_other(maker, pattern, shades):
    for shade in shades:
        put_thread(shade, 8_000)
    page = looked_at(maker, pattern, A=shades[0], B=shades[1])
    assert "Nearest on" not in page
    assert "Take" not in page


def test_one_shade_in_two_slots_needs_thread_for_both(maker, pattern, shades):
    # Two pieces of about 1 m each: enough for one slot, not for two.
    put_thread(shades[0], 3_000)
    assert "No lot" not in looked_at(maker, pattern, A=shades[0])
    page = looked_at(maker, pattern, A=shades[0], B=shades[0])
    assert "No lot on the shelf holds enough for A and B together." in page
    assert "A and B lie beside each other" in page
    assert "in the same colour." in page


def test_shade_of_another_slot_is_not_offered(maker, pattern, shades):
    put_thread(shades[1], 20_000)
    page = looked_at(maker, pattern, A=shades[0], B=shades[1])
    assert "No other shade on the shelf holds enough." in page


def test_taking_a_shade_shows_it_and_saves_nothing(maker, pattern, shades):
    put_thread(shades[1], 20_000)
    data = typed(shades, slot_B=shades[2].pk, name="Dusk")
    offered = maker.post(new(pattern), data | {"preview": "yes"}).content.decode()
    take = f"A:{shades[1].pk}"
    assert f'<button name="take" value="{take}"' in offered
    taken = maker.post(new(pattern), data | {"take": take})
    assert taken.context["form"].chosen["A"] == shades[1]
    assert taken.context["form"].chosen["B"] == shades[2]
    assert 'value="Dusk"' in taken.content.decode()
    assert not Colourway.objects.exists()


@pytest.mark.parametrize(
    "take", ["", ":", "A", "A:", "Q:1", "A:999999", "A:\0", "<script>:<script>", "9" * 5_000]
)
def test_taking_anything_else_is_answered(maker, pattern, shades, take):
    response = maker.post(new(pattern), typed(shades) | {"take": take})
    assert response.status_code == 200
    assert "<script>:" not in response.content.decode()
    assert not Colourway.objects.exists()


def test_look_alikes_warn_draw_and_never_block(maker, pattern):
    red, green, white = (
        make_shade("R1", "Madder", "#aa1122"),
        make_shade("G1", "Moss", "#2e7d32"),
        make_shade("W1", "Chalk", "#f4f1e8"),
    )
    data = typed([red, green, white])
    page = maker.post(new(pattern), data | {"preview": "yes"}).content.decode()
    sides = neighbouring_slots(pattern.definition, page_rows(page))["A", "B"]
    assert (
        f"A and B lie beside each other {sides} times and look alike to people with red-green "
        "colour blindness."
    ) in words(page)
    assert "As eyes without green cones (deutan) see it" in page
    assert f'fill="{as_seen(red.colour, Sight.DEUTAN)}"' in page
    maker.post(new(pattern), data)
    assert Colourway.objects.get().shades_by_slot()["B"] == green


def page_rows(page: str) -> int:
    return int(re.search(r"(\d+) rows", words(page))[1])


def test_pattern_page_warns_in_short_beside_the_colourway(maker, pattern):
    red, green = make_shade(colour="#aa1122"), make_shade(colour="#2e7d32")
    make_colourway(pattern, "Hedge", A=red, B=green, C=make_shade(colour="#f4f1e8"))
    make_colourway(pattern, "Twin", A=red, B=make_shade(colour="#aa1122"), C=green)
    page = words(maker.get(reverse("pattern_detail", args=[pattern.pk])).content.decode())
    hedge, twin = page[page.index("Its colourways") :].split("Remove Hedge")[:2]
    assert "A and B look alike to people with red-green colour blindness." in hedge
    assert "A and C look alike" not in hedge
    assert "A and B have the same colour." in twin


def test_pattern_page_makes_as_many_queries_for_twice_the_colourways(maker, pattern, query_count):
    page = reverse("pattern_detail", args=[pattern.pk])
    make_colourway(pattern, "One")
    few = query_count(page)
    make_colourway(pattern, "Other")
    assert query_count(page) == few


def test_shades_well_apart_give_no_warning(maker, pattern):
    shades = [make_shade(colour=colour) for colour in ("#101010", "#f4f1e8", "#3050c0")]
    page = looked_at(maker, pattern, **dict(zip("ABC", shades, strict=True)))
    assert "look alike" not in page
    assert "As eyes" not in page


def test_propose_fills_the_slots_from_the_shelf(maker, pattern, shades):
    on_shelf = [make_shade(colour=colour) for colour in ("#f4f1e8", "#101010", "#3050c0")]
    for shade in on_shelf:
        put_thread(shade, 8_000)
    put_thread(shades[0], 500)
    response = maker.post(new(pattern), typed(shades) | {"propose": "yes"})
    chosen = response.context["form"].chosen
    assert set(chosen.values()) == set(on_shelf)
    page = response.content.decode()
    assert 'value="Dusk"' in page
    assert "No lot on the shelf" not in page
    assert "look alike" not in page
    assert not Colourway.objects.exists()


def test_propose_says_which_slots_the_shelf_leaves_open(maker, pattern, shades):
    put_thread(shades[1], 8_000)
    response = maker.post(new(pattern), typed(shades) | {"propose": "yes"})
    assert list(response.context["form"].chosen.values()) == [shades[1]]
    [left_open] = re.findall(
        r"no further shade with enough thread for (\w, \w)\. Choose one to buy\.",
        words(response.content.decode()),
    )
    assert left_open.split(", ") == sorted(set("ABC") - set(response.context["form"].chosen))


def test_copy_starts_from_a_colourway_and_changes_nothing_of_it(maker, pattern, shades):
    maker.post(new(pattern), typed(shades, name="d" * 60))
    dusk = Colourway.objects.get()
    link = f"{new(pattern)}?copy={dusk.pk}"
    assert link in maker.get(reverse("pattern_detail", args=[pattern.pk])).content.decode()
    response = maker.get(link)
    assert response.context["form"].chosen == dusk.shades_by_slot()
    name = response.context["form"]["name"].value()
    assert name == "d" * 54 + ", copy"
    maker.post(link, typed(shades[::-1], name=name))
    assert Colourway.objects.count() == 2
    assert dusk.shades_by_slot()["A"] == shades[0]


@pytest.mark.parametrize("key", ["", "0", "-1", "abc", "9" * 400, "\0", "1.0"])
def test_copy_of_what_is_not_there_starts_empty(maker, pattern, shades, key):
    make_colourway(make_pattern("Other"))
    for of_other in (key, str(Colourway.objects.get().pk)):
        response = maker.get(new(pattern), {"copy": of_other})
        assert response.status_code == 200
        assert response.context["form"].chosen == {}


def test_lots_stand_beside_the_thread(maker, pattern, shades):
    put_thread(shades[0], 8_000, kind=ShelfPiece.Kind.WHOLE, lot="204")
    put_thread(shades[0], 1_900, lot="<b>7")
    page = looked_at(maker, pattern, A=shades[0])
    assert "9.9 m on the shelf, 1 whole skein, lots 204, <b>7." in page
    raw = maker.post(new(pattern), {"preview": "yes", "slot_A": shades[0].pk}).content.decode()
    assert "<b>7" not in raw


def test_need_is_that_of_the_size_chosen(maker, pattern, shades):
    needs = {}
    for size in Size.objects.all():
        address = reverse("pattern_detail", args=[pattern.pk])
        answer = maker.get(address, {"size": size.pk}).context["answer"]
        needs[size] = next(line.total_mm for line in answer.slots if line.slot == "B")
        page = maker.post(new(pattern), {"preview": "yes", "size": size.pk}).content.decode()
        assert f"B takes {format_length(needs[size])} in 2 pieces." in words(page)
        assert f"for one bracelet in {size} with" in words(page)
        assert selected(page, "size") == str(size.pk)
    assert len(set(needs.values())) > 1


@pytest.mark.parametrize("size", ["", "0", "-1", "abc", "9" * 400, "9" * 5_000, "\0", "<script>"])
def test_size_that_is_not_there_is_the_usual_one(maker, pattern, shades, size):
    usual = maker.get(new(pattern)).context["bracelet"]
    response = maker.post(new(pattern), {"preview": "yes", "size": size})
    assert response.context["bracelet"] == usual
    assert maker.post(new(pattern), typed(shades, size=size)).status_code == 302


@pytest.mark.parametrize("find", ["mad", "M1", "DDE m1", "lot-9"])
def test_search_lists_the_shades_found_and_the_one_chosen(maker, pattern, shades, find):
    put_thread(shades[0], 500, lot="Lot-9")
    put_thread(shades[2], 500, lot="Lot-8")
    page = maker.post(new(pattern), typed(shades, find=find)).content.decode()
    assert "1 shade found." in page
    assert "M1 Madder: 50 cm on the shelf, lot Lot-9" in words(page)
    offered = {
        slot: re.findall(
            r'value="(\d+)"', page.split(f'<select name="slot_{slot}"')[1].split("</s")[0]
        )
        for slot in "ABC"
    }
    found, other, third = (str(shade.pk) for shade in shades)
    assert offered == {"A": [found], "B": [other, found], "C": [found, third]}, "by code"
    assert not Colourway.objects.exists(), "Enter searches, it does not save"


def test_search_that_finds_nothing_lists_them_all(maker, pattern, shades):
    page = maker.post(new(pattern), typed(shades, find="<i>zinc")).content.decode()
    assert "No shade has that" in page
    assert "<i>zinc" not in page
    assert page.count("M1 Madder: none on the shelf</option>") == 3


def test_shade_outside_the_search_is_saved_all_the_same(maker, pattern, shades):
    maker.post(new(pattern), typed(shades, find="mad", save="yes"))
    assert Colourway.objects.get().shades_by_slot() == dict(zip("ABC", shades, strict=True))


def test_search_answers_htmx_with_new_lists_and_a_choice_without(maker, pattern, shades):
    data = typed(shades, find="mad", preview="yes")
    search = maker.post(new(pattern), data, headers=HTMX | {"HX-Trigger-Name": "find"})
    choice = maker.post(new(pattern), data, headers=HTMX | {"HX-Trigger-Name": "slot_A"})
    assert search.content.decode().count("<select") == 3
    assert choice.content.decode().count("<select") == 0


def test_long_search_shows_some_and_counts_all(maker, pattern):
    for number in range(20):
        make_shade(f"Z{number}", "Zinc")
    page = words(maker.post(new(pattern), {"preview": "yes", "find": "zinc"}).content.decode())
    assert "20 shades found." in page
    assert "and others" in page
    assert page.count("Zinc: none on the shelf") == 12 + 3 * 20


def test_swapping_two_shades_shows_it_and_saves_nothing(maker, pattern, shades):
    data = typed(shades, swap="yes", swap_one="A", swap_other="C")
    response = maker.post(new(pattern), data)
    chosen = response.context["form"].chosen
    assert [chosen[slot] for slot in "ABC"] == shades[::-1]
    assert 'value="Dusk"' in response.content.decode()
    assert not Colourway.objects.exists()


@pytest.mark.parametrize("other", ["", "A", "Q", "\0", "<script>", "9" * 5_000])
def test_swapping_with_anything_else_changes_nothing(maker, pattern, shades, other):
    data = typed(shades, swap="yes", swap_one="A", swap_other=other)
    response = maker.post(new(pattern), data)
    assert list(response.context["form"].chosen.values()) == shades
    assert "<script>" not in response.content.decode().replace("<script>\n", "")


def test_proposals_go_on_to_others(maker, pattern):
    for colour in ("#f4f1e8", "#101010", "#3050c0", "#aa1122"):
        put_thread(make_shade(colour=colour), 8_000)
    proposals = []
    for number in range(3):
        response = maker.post(new(pattern), {"propose": number})
        proposals.append(response.context["form"].chosen)
        assert f'name="propose" value="{number + 1}"' in response.content.decode()
    assert len({str(proposal) for proposal in proposals}) == 3


@pytest.mark.parametrize("number", ["", "-1", "abc", "9" * 5_000, "\0", "²"])
def test_proposal_of_any_other_number_is_the_first(maker, pattern, shades, number):
    put_thread(shades[1], 8_000)
    first = maker.post(new(pattern), {"propose": "0"}).context["form"].chosen
    assert maker.post(new(pattern), {"propose": number}).context["form"].chosen == first


def test_grid_pattern_is_chosen_for_in_the_same_way(maker):
    grid = make_grid_pattern()
    one, other = make_shade(colour="#aa1122"), make_shade(colour="#aa1122")
    put_thread(other, 300)
    page = looked_at(maker, grid, A=one, B=other)
    assert "A: base and leading strands, 14 cells of one repeat" in page
    assert re.search(r"A takes [\d.]+ m in 6 pieces", page)
    assert "A and B lie beside each other" in page


def test_without_a_size_the_page_still_chooses(maker, pattern, shades):
    Size.objects.all().delete()
    page = looked_at(maker, pattern, A=shades[0], B=shades[0])
    assert "Set a usual size, ending and gauge" in page
    assert "You have to buy it." in page
    assert "A and B lie beside each other" in page
    assert maker.post(new(pattern), typed(shades)).status_code == 302


def test_enter_in_the_name_saves(maker, pattern, shades):
    # The first button of a form is the one that Enter presses (HTML, implicit submission).
    put_thread(shades[1], 20_000)
    page = maker.post(new(pattern), {"preview": "yes", "slot_A": shades[0].pk}).content.decode()
    form = page[page.index('<form method="post" class="leaf colourway"') :]
    assert 'name="take"' in form
    assert "name=" not in re.search(r"<button[^>]*>", form)[0]


def test_colourway_form_makes_as_many_queries_for_twice_the_shades(maker, pattern, query_count):
    for _ in range(3):
        put_thread(make_shade(), 500, 900)
    few = query_count(new(pattern))
    for _ in range(3):
        put_thread(make_shade(), 500, 900)
    assert query_count(new(pattern)) == few
    assert few <= MOST_QUERIES
