from decimal import Decimal

import pytest
from django.urls import reverse

from patterns.models import Gauge

LIST = "/patterns/gauges/"
NEW = "/patterns/gauges/new/"
HTMX = {"HX-Request": "true"}
GAUGE = {"name": "Thick", "thread_diameter_mm": "1,2", "loop_ratio": "1.5", "idle_run": ""}


def test_gauge_list_shows_what_a_knot_takes(maker):
    page = maker.get(LIST).content.decode()
    # 11.424778 x 0.9 = 10.28 mm; common practice, no source: 118 rows for 150 mm.
    assert "10.28 mm a knot" in page
    assert "118 rows" in page
    assert page.count(">default</small>") == 1


def test_gauge_list_empty_says_what_goes_there(maker):
    Gauge.objects.all().delete()
    assert "Your gauges go here" in maker.get(LIST).content.decode()


def test_gauge_new_reads_a_decimal_comma(maker):
    maker.post(NEW, GAUGE)
    gauge = Gauge.objects.get(name="Thick")
    assert (gauge.thread_diameter_mm, gauge.idle_run) == (Decimal("1.2"), None)
    assert not gauge.is_default


def test_gauge_new_in_an_empty_list_is_the_default(maker):
    Gauge.objects.all().delete()
    maker.post(NEW, GAUGE)
    assert Gauge.objects.get().is_default


@pytest.mark.parametrize(
    ("change", "words"),
    [
        ({"name": "SIX-STRAND FLOSS"}, "is taken"),
        ({"name": ""}, "Fill this in."),
        ({"thread_diameter_mm": "0"}, "must be from 0.1 to 10"),
        ({"thread_diameter_mm": "nan"}, "is not a number"),
        ({"thread_diameter_mm": "1e1"}, "is not a number"),
        ({"loop_ratio": "0.4"}, "must be from 0.5 to 5"),
        ({"loop_ratio": "1.2345"}, "at most 3 decimal places"),
        ({"idle_run": "11"}, "must be from 0 to 10"),
        ({"idle_run": "\0"}, "hidden character"),
        ({"idle_run": "9" * 10_000}, "too long"),
    ],
)
def test_gauge_new_wrong_says_what(maker, change, words):
    assert words in maker.post(NEW, GAUGE | change).content.decode()
    assert Gauge.objects.count() == 1


def test_gauge_preview_shows_the_numbers_and_saves_nothing(maker):
    data = GAUGE | {"preview": "yes"}
    whole = maker.post(NEW, data).content.decode()
    fragment = maker.post(NEW, data, headers=HTMX).content.decode()
    for page in (whole, fragment):
        assert "13.71 mm a knot" in page  # 11.424778 x 1.2
    assert fragment.lstrip().startswith('<section id="gauge-example"')
    assert Gauge.objects.count() == 1


def test_gauge_edit_left_as_shown_changes_nothing(maker):
    gauge = Gauge.objects.get()
    url = reverse("gauge_edit", args=[gauge.pk])
    form = maker.get(url).context["form"]
    shown = {name: form.fields[name].prepare_value(form[name].value()) for name in form.fields}
    maker.post(url, {name: value or "" for name, value in shown.items()})
    gauge.refresh_from_db()
    assert (gauge.thread_diameter_mm, gauge.idle_run) == (Decimal("0.9"), None)
    assert gauge.is_default


def test_gauge_edit_wrong_keeps_its_old_name_in_the_heading(maker):
    gauge = Gauge.objects.get()
    url = reverse("gauge_edit", args=[gauge.pk])
    page = maker.post(url, GAUGE | {"loop_ratio": "x"}).content.decode()
    assert "<bdi>Six-strand floss</bdi>" in page


def test_gauge_default_moves(maker):
    maker.post(NEW, GAUGE)
    thick = Gauge.objects.get(name="Thick")
    maker.post(reverse("gauge_default", args=[thick.pk]))
    assert Gauge.objects.get(is_default=True) == thick


def test_gauge_remove_can_be_undone(maker):
    maker.post(NEW, GAUGE)
    thick = Gauge.objects.get(name="Thick")
    page = maker.post(reverse("gauge_remove", args=[thick.pk]), follow=True).content.decode()
    assert not Gauge.objects.filter(name="Thick").exists()
    undo = {"name": "Thick", "thread_diameter_mm": "1.200", "loop_ratio": "1.500", "idle_run": ""}
    for name, value in undo.items():
        assert f'name="{name}" value="{value}"' in page
    maker.post(NEW, undo)
    assert Gauge.objects.get(name="Thick").thread_diameter_mm == Decimal("1.2")


def test_gauge_remove_the_default_is_refused_with_the_reason(maker):
    url = reverse("gauge_remove", args=[Gauge.objects.get().pk])
    assert "is the default" in maker.post(url, follow=True).content.decode()
    assert Gauge.objects.exists()


def test_gauge_pages_wrong_method_signed_out_and_not_there(maker, client):
    gauge = Gauge.objects.get()
    for name in ("gauge_default", "gauge_remove"):
        assert maker.get(reverse(name, args=[gauge.pk])).status_code == 405
        assert maker.post(reverse(name, args=[9_999])).status_code == 404
        assert client.post(reverse(name, args=[gauge.pk])).status_code == 302
    assert maker.get(reverse("gauge_edit", args=[9_999])).status_code == 404
    assert client.get(LIST).status_code == 302
    assert maker.post(NEW, {}).context["form"].errors


def test_gauge_list_makes_as_many_queries_for_twice_the_gauges(maker, query_count):
    few = query_count(LIST)
    maker.post(NEW, GAUGE)
    assert query_count(LIST) == few
