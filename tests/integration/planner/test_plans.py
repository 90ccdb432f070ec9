"""Plans: right sums, a snapshot that stays, and pages that say what changed."""

import re
from collections import Counter
from decimal import Decimal
from itertools import groupby

import pytest
from django.db import connection
from django.test import Client
from django.test.utils import CaptureQueriesContext
from django.urls import reverse

from inventory.actions import ChangeThread, RemoveThread, change_shelf
from inventory.measures import format_length
from inventory.models import PutUp, Shade
from patterns.actions import add_pattern, change_pattern
from patterns.models import Colourway, KnottedLength
from planner.actions import make_plan
from planner.models import Batch, Plan, PlanPiece
from planner.plans import cut_pages
from planner.plans.store import read_snapshot
from planner.plans.work_out import PlanError
from tests.factories import (
    make_batch,
    make_colourway,
    make_order,
    make_pattern,
    pattern_text,
    put_thread,
)


def plan_of(batch: Batch) -> Plan:
    return make_plan(batch=batch, user=None)


def shade_of(colourway: Colourway, slot: str) -> Shade:
    return colourway.shades_by_slot()[slot]


def test_plan_of_one_bracelet_worked_by_hand(colourway: Colourway, batch: Batch) -> None:
    """6 strands all forward, Medium with the default ties: worked example.

    Medium is 140 mm; ceil(140 / (sqrt 2 * 0.9)) = ceil(109.99) = 110 rows. At d = 0.9 mm a knot
    takes (2 + 3 pi) d = 10.2823 mm of the strand that ties and 2 d = 1.8 mm of its base, an idle
    row sqrt 2 d = 1.2728 mm. Two loose ties take 2 x (90 x 1.0 + 30 + 80) = 400 mm. A piece is
    knotted x 1.1 + 400, up to the next 10 mm:

    strand  tied  base  idle   knotted    x 1.1   + 400     cut
    1 (A)     47    45    18   587.178  645.896  1045.896  1050
    2 (A)     45    46    19   569.687  626.655  1026.655  1030
    3 (B)     47    45    18   587.178  645.896  1045.896  1050
    4 (B)     45    47    18   570.214  627.235  1027.235  1030
    5 (C)     46    45    19   578.169  635.986  1035.986  1040
    6 (C)     45    47    18   570.214  627.235  1027.235  1030

    One skein of 8 m x 0.98 = 7840 mm holds both pieces of a shade and costs 1.20.
    """
    assert _tied_base_idle(strands=6, rows=110) == [
        (47, 45, 18),
        (45, 46, 19),
        (47, 45, 18),
        (45, 47, 18),
        (46, 45, 19),
        (45, 47, 18),
    ]
    make_order(batch, colourway)
    plan = plan_of(batch)
    assert plan.bracelet_count == 1
    assert plan.piece_count == 6
    assert plan.kinds.get().rows == 110
    pieces = plan.bracelets.get().pieces.order_by("index")
    assert [piece.cut_mm for piece in pieces] == [1_050, 1_030, 1_050, 1_030, 1_040, 1_030]
    by_slot = [plan.shades.get(code=shade_of(colourway, slot).code) for slot in "ABC"]
    assert [shade.need_mm for shade in by_slot] == [2_080, 2_080, 2_070]
    assert [shade.left_mm for shade in by_slot] == [5_760, 5_760, 5_770]
    for shade in by_slot:
        assert (shade.shelf_mm, shade.usable_mm, shade.bought) == (0, 0, 1)
        assert shade.bought_lower_bound == 1
    assert plan.cost == Decimal("3.60")
    assert plan.status == "optimal"


def _tied_base_idle(*, strands: int, rows: int) -> list[tuple[int, int, int]]:
    """Walk forward knots: each left strand ties on its right neighbour, and they change places."""
    order = list(range(strands))
    tied, base = [0] * strands, [0] * strands
    for row in range(rows):
        for left in range(row % 2, strands - 1, 2):
            tied[order[left]] += 1
            base[order[left + 1]] += 1
            order[left : left + 2] = order[left + 1], order[left]
    return [(ties, bases, rows - ties - bases) for ties, bases in zip(tied, base, strict=True)]


def test_plan_takes_the_shelf_first(colourway: Colourway, batch: Batch) -> None:
    put_thread(shade_of(colourway, "A"), 7_000)
    make_order(batch, colourway)
    plan = plan_of(batch)
    shade = plan.shades.get(code=shade_of(colourway, "A").code)
    assert shade.bought == 0
    assert shade.usable_mm == shade.need_mm
    assert shade.left_mm == 7_000 - shade.need_mm


def test_plan_keeps_each_bracelets_shade_in_one_lot(colourway: Colourway, batch: Batch) -> None:
    shade = shade_of(colourway, "A")
    for number in range(6):
        put_thread(shade, 1_300, lot=f"L{number}")
    make_order(batch, colourway, quantity=3)
    plan = plan_of(batch)
    lots: dict[int, set[tuple[bool, str]]] = {}
    for piece in PlanPiece.objects.filter(shade__plan=plan).select_related("stock"):
        assert piece.stock is not None
        place = (piece.stock.is_new, piece.stock.lot_name)
        lots.setdefault(piece.bracelet_id * 1_000 + piece.shade_id, set()).add(place)
    assert all(len(found) == 1 for found in lots.values())


def test_plan_stored_reads_back_the_same(colourway: Colourway, batch: Batch) -> None:
    put_thread(shade_of(colourway, "B"), 900, 2_000, 5_000)
    make_order(batch, colourway, quantity=4, for_whom="the choir")
    make_order(batch, colourway, quantity=2, ending="Folded start, plaited end")
    plan = plan_of(batch)
    snapshot = read_snapshot(plan)
    pieces = Counter(
        (cut.tag_number, cut.piece_index)
        for shade in snapshot.shades
        for stock in shade.stock
        for cut in stock.cuts
    )
    wanted = Counter(
        (bracelet.number, index)
        for bracelet in snapshot.bracelets
        for index in range(len(snapshot.kinds[bracelet.kind_index].pieces))
    )
    assert pieces == wanted
    for shade in snapshot.shades:
        for stock in shade.stock:
            assert sum(cut.cut_mm for cut in stock.cuts) + stock.left_mm == stock.reckoned_mm
    assert snapshot.cost == plan.cost


def test_plan_stays_when_everything_behind_it_changes(
    page: Client, colourway: Colourway, batch: Batch
) -> None:
    (thread,) = put_thread(shade_of(colourway, "A"), 7_000)
    line = make_order(batch, colourway, quantity=2, for_whom="the choir")
    plan = plan_of(batch)
    before = read_snapshot(plan)
    change_pattern(
        pattern=colourway.pattern,
        text=pattern_text("Wave", strands="A A B B C C", rows=("b b b", "b b")),
    )
    KnottedLength.objects.update(knotted_length_mm=500)
    Shade.objects.update(name="renamed", colour="#000000")
    PutUp.objects.update(price=Decimal(9))
    change_shelf(changes=[ChangeThread(thread.pk, "L9", "remnant", 400)])
    line.delete()
    assert read_snapshot(Plan.objects.get(pk=plan.pk)) == before
    assert page.get(reverse("plan_detail", args=[plan.pk])).status_code == 200
    for bracelet in plan.bracelets.all():
        assert page.get(reverse("bracelet", args=[bracelet.pk])).status_code == 200


def test_plan_page_says_that_the_shelf_has_changed(
    page: Client, colourway: Colourway, batch: Batch
) -> None:
    (thread,) = put_thread(shade_of(colourway, "A"), 7_000)
    make_order(batch, colourway)
    address = reverse("plan_detail", args=[plan_of(batch).pk])
    assert "changed since" not in page.get(address).content.decode()
    change_shelf(changes=[RemoveThread(thread.pk)])
    assert "The shelf has changed since" in page.get(address).content.decode()


def test_plan_page_says_that_the_orders_have_changed(
    page: Client, colourway: Colourway, batch: Batch
) -> None:
    make_order(batch, colourway)
    address = reverse("plan_detail", args=[plan_of(batch).pk])
    make_order(batch, colourway)
    text = page.get(address).content.decode()
    assert "have changed since" in text
    assert "Make a new plan" in text


def test_plan_without_put_ups_names_the_tags_left_out(
    page: Client, colourway: Colourway, batch: Batch
) -> None:
    PutUp.objects.all().delete()
    make_order(batch, colourway, quantity=2)
    plan = plan_of(batch)
    assert plan.status == "feasible"
    text = page.get(reverse("plan_detail", args=[plan.pk])).content.decode()
    assert "tags 1, 2" in text


def test_plan_leaves_out_a_line_without_knotted_length_and_says_so(
    page: Client, colourway: Colourway, batch: Batch
) -> None:
    make_order(batch, colourway)
    lost = make_order(batch, colourway, size="Large")
    KnottedLength.objects.filter(size=lost.size, ending=lost.ending).delete()
    plan = plan_of(batch)
    assert plan.bracelet_count == 1
    assert plan.problems == [
        f"Row 2: Large has no knotted length for {lost.ending}. Give it one under Sizes."
    ]


def test_plan_of_nothing_is_refused(page: Client, colourway: Colourway, batch: Batch) -> None:
    with pytest.raises(PlanError, match="no orders"):
        plan_of(batch)
    response = page.post(reverse("plan_new", args=[batch.pk]), follow=True)
    assert "no orders to plan yet" in response.content.decode()


def test_plan_new_by_get_is_refused(page: Client, batch: Batch) -> None:
    assert page.get(reverse("plan_new", args=[batch.pk])).status_code == 405


def test_plan_numbers_count_up_within_the_batch(colourway: Colourway, batch: Batch) -> None:
    other = make_batch("Other")
    for owner in (batch, other):
        make_order(owner, colourway)
    assert [plan_of(batch).number, plan_of(batch).number, plan_of(other).number] == [1, 2, 1]


def test_shade_page_full_and_fragment(page: Client, colourway: Colourway, batch: Batch) -> None:
    make_order(batch, colourway)
    plan = plan_of(batch)
    shade = plan.shades.all()[0]
    address = reverse("plan_shade", args=[plan.pk, shade.pk])
    whole = page.get(address)
    part = page.get(address, headers={"HX-Request": "true"})
    assert "<html" in whole.content.decode()
    assert "<html" not in part.content.decode()
    assert "HX-Request" in part["Vary"]
    assert page.get(reverse("plan_shade", args=[plan.pk + 1, shade.pk])).status_code == 404


def test_shade_page_shows_its_skeins_page_by_page(
    page: Client, colourway: Colourway, batch: Batch, monkeypatch: pytest.MonkeyPatch
) -> None:
    """18 bracelets of two pieces of about 1 m: 36 pieces, 7 of 7.84 m, so 6 skeins."""
    monkeypatch.setattr(cut_pages, "STACKS_A_PAGE", 1)
    make_order(batch, colourway, quantity=18)
    shade = plan_of(batch).shades.all()[0]
    address = reverse("plan_shade", args=[shade.plan_id, shade.pk])
    assert shade.stock.count() == 6
    left = format_length(shade.left_mm, "cm")
    shown: Counter[int] = Counter()
    text = page.get(address).content.decode()
    stacks = int(re.findall(r"Skeins and stacks 1 to 1 of (\d+)", text)[0])
    assert 1 < stacks < 6
    for number in range(1, stacks + 1):
        text = page.get(f"{address}?page={number}").content.decode()
        assert text.count('<svg class="thread-bar"') == 1
        assert f"− pieces cut = <strong>{left}</strong>" in text
        shown += tags_shown(text)
    assert shown == dict.fromkeys(range(1, 19), 2)
    for nonsense in ("0", "99", "x", "-1", "%00"):
        assert page.get(f"{address}?page={nonsense}").status_code == 200


def tags_shown(html: str) -> Counter[int]:
    """How many pieces each tag has on a page; strands are counted where they stand."""
    shown: Counter[int] = Counter()
    rows = re.findall(
        r"tags? ((?:<a [^>]*>\d+</a>(?:, )?)+|[\d, –]+): strands? ([\d, ]+)  ?[A-Z]", html
    )
    for tags, strands in rows:
        for part in re.sub("<[^>]*>", "", tags).split(", "):
            first, _, last = part.partition("–")
            for tag in range(int(first), int(last or first) + 1):
                shown[tag] += len(strands.split(", "))
    return shown


def test_shade_page_takes_the_cuts_length_by_length(
    page: Client, colourway: Colourway, batch: Batch, monkeypatch: pytest.MonkeyPatch
) -> None:
    monkeypatch.setattr(cut_pages, "SETTINGS_A_PAGE", 1)
    put_thread(shade_of(colourway, "A"), 2_500)
    make_order(batch, colourway, quantity=18)
    shade = plan_of(batch).shades.all()[0]
    address = reverse("plan_shade", args=[shade.plan_id, shade.pk])
    wanted = Counter(shade.pieces.values_list("cut_mm", flat=True))
    assert len(wanted) > 1
    shown: Counter[int] = Counter()
    for number, (cut_mm, count) in enumerate(sorted(wanted.items(), reverse=True), start=1):
        text = page.get(f"{address}?by=length&page={number}").content.decode()
        assert f"Set the board to {format_length(cut_mm, 'cm')}: {count} pieces" in text
        turns = re.findall(
            r"<strong>(\d+) turns?</strong> (?:each )?from (pieces?|new thread) ([^<\n]+)", text
        )
        pieces = 0
        for turn_count, _, names in turns:
            first, _, last = names.split(", lot ")[0].partition(" to ")
            numbers = names.split(", lot ")[0].split(", ")
            pieces += int(turn_count) * (int(last) - int(first) + 1 if last else len(numbers))
        assert pieces == count
        shown += tags_shown(text)
    assert shown == dict.fromkeys(range(1, 19), 2)
    assert f"it is set <strong>{len(wanted)}</strong> times" in text
    assert f"{address}?by=length&amp;page=1" in text


def test_plan_keeps_the_order_of_the_cuts(colourway: Colourway, batch: Batch) -> None:
    """Longest first, shelf before new thread, and skeins cut alike side by side."""
    put_thread(shade_of(colourway, "A"), 2_500, 1_200)
    make_order(batch, colourway, quantity=40)
    for shade in read_snapshot(plan_of(batch)).shades:
        patterns = [tuple(cut.cut_mm for cut in stock.cuts) for stock in shade.stock]
        assert all(pattern == tuple(sorted(pattern, reverse=True)) for pattern in patterns)
        new = [stock.is_new for stock in shade.stock]
        assert new == sorted(new)
        bought = [pattern for pattern, is_new in zip(patterns, new, strict=True) if is_new]
        assert len(list(groupby(bought))) == len(set(bought)) < len(bought)


def test_alike_skeins_are_named_together(page: Client, colourway: Colourway, batch: Batch) -> None:
    make_order(batch, colourway, quantity=40)
    shade = plan_of(batch).shades.all()[0]
    text = page.get(reverse("plan_shade", args=[shade.plan_id, shade.pk])).content.decode()
    assert re.search(r"New thread \d+ to \d+: ", text)
    assert re.search(
        r"\d+ together, from each: <span class=\"nowrap\">[\d.]+ cm × \d+</span>", text
    )
    assert "as your shears cut cleanly" in text


def test_plan_pages_query_count_is_flat(page: Client, colourway: Colourway) -> None:
    def queries(kinds: int, quantity: int) -> list[int]:
        batch = make_batch()
        for number in range(kinds):
            pattern = make_pattern(f"Pattern {kinds} {number}")
            make_order(batch, make_colourway(pattern), quantity=quantity)
        plan = plan_of(batch)
        bracelet = plan.bracelets.all()[0]
        shade = plan.shades.all()[0]
        counts = []
        for address in (
            reverse("plan_detail", args=[plan.pk]),
            reverse("plan_shade", args=[plan.pk, shade.pk]),
            reverse("plan_bracelets", args=[plan.pk]),
            reverse("bracelet", args=[bracelet.pk]),
            reverse("plan_sheet", args=[plan.pk, "tags", "pdf"]),
        ):
            with CaptureQueriesContext(connection) as captured:
                assert page.get(address).status_code == 200
            counts.append(len(captured))
        return counts

    assert queries(2, 3) == queries(4, 6)


def test_make_plan_query_count_is_flat(colourway: Colourway) -> None:
    def queries(kinds: int) -> int:
        batch = make_batch()
        for number in range(kinds):
            make_order(batch, make_colourway(make_pattern(f"Kind {kinds} {number}")), quantity=2)
        with CaptureQueriesContext(connection) as captured:
            plan_of(batch)
        return len(captured)

    assert queries(3) == queries(6)


def test_plan_page_warns_of_thread_that_another_batch_cuts_too(
    page: Client, colourway: Colourway, batch: Batch
) -> None:
    put_thread(shade_of(colourway, "A"), 7_000)
    other = make_batch("Winter fair")
    for owner in (batch, other):
        make_order(owner, colourway)
    plan_of(other)
    plan = plan_of(batch)
    text = page.get(reverse("plan_detail", args=[plan.pk])).content.decode()
    assert "1 piece on the shelf is cut from" in text
    assert "Winter fair" in text


def test_bracelet_page_of_an_older_plan_names_the_newer(
    page: Client, colourway: Colourway, batch: Batch
) -> None:
    make_order(batch, colourway)
    bracelet = plan_of(batch).bracelets.get()
    address = reverse("bracelet", args=[bracelet.pk])
    assert "is newer" not in page.get(address).content.decode()
    plan_of(batch)
    assert "is newer" in page.get(address).content.decode()


def test_tag_gives_the_length_that_its_rows_measure(colourway: Colourway, batch: Batch) -> None:
    """Whole repeats, nearest: 12 rows a repeat, 110 rows asked for, so 108 are tied.

    108 x sqrt(2) x 0.9 mm = 137.5 mm, not the 140 mm of the size.
    """
    text = pattern_text("Twelve rows", rows=("f f f", "f f") * 6, finish="nearest")
    make_order(batch, make_colourway(add_pattern(text=text)))
    kind = read_snapshot(plan_of(batch)).kinds[0]
    assert (kind.rows, kind.knotted_length_mm, kind.band_length_mm) == (108, 140, 137)
