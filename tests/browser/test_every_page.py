"""Every page of the sample workshop: two themes, two widths, no accessibility rule broken."""

from collections.abc import Callable

import pytest
from django.contrib.auth.models import User
from django.urls import reverse
from playwright.sync_api import Page

from inventory.models import PutUp, Shade, ShelfPiece
from patterns.models import Colourway, Ending, Gauge, Pattern, Size
from planner.actions import make_plan
from planner.models import Batch
from planner.sample.load import load_sample
from tests.browser.conftest import DESK, PHONE, OpenPage

pytestmark = pytest.mark.django_db(transaction=True)


def addresses() -> list[str]:
    load_sample()
    batch = Batch.objects.get(name="Saturday's market")
    plan = make_plan(batch=batch, user=None)
    first = {model: model.objects.order_by("pk")[0].pk for model in KEYED.values()}
    pages = [reverse(name) for name in PLAIN]
    pages += [reverse(name, args=[first[model]]) for name, model in KEYED.items()]
    pages += [
        reverse("batch_detail", args=[batch.pk]),
        reverse("list_add", args=[batch.pk]),
        reverse("plan_detail", args=[plan.pk]),
        reverse("plan_bracelets", args=[plan.pk]),
        reverse("plan_shade", args=[plan.pk, plan.shades.all()[0].pk]),
        reverse("bracelet", args=[plan.bracelets.all()[0].pk]),
    ]
    return pages


PLAIN = (
    "home",
    "batch_list",
    "batch_new",
    "workshop",
    "change_password",
    "shelf",
    "shade_new",
    "put_up_list",
    "put_up_new",
    "pattern_list",
    "pattern_new",
    "pattern_draw",
    "pattern_rows",
    "pattern_family",
    "pattern_compare",
    "pattern_import",
    "size_list",
    "size_new",
    "ending_list",
    "ending_new",
    "gauge_list",
    "gauge_new",
)
KEYED = {
    "shade_detail": Shade,
    "shade_edit": Shade,
    "thread_edit": ShelfPiece,
    "put_up_edit": PutUp,
    "pattern_detail": Pattern,
    "pattern_edit": Pattern,
    "pattern_edit_text": Pattern,
    "pattern_versions": Pattern,
    "pattern_variants": Pattern,
    "pattern_remove": Pattern,
    "colourway_new": Pattern,
    "colourway_edit": Colourway,
    "size_edit": Size,
    "ending_edit": Ending,
    "gauge_edit": Gauge,
    "batch_edit": Batch,
}


@pytest.mark.parametrize("theme", ["light", "dark"])
@pytest.mark.parametrize("viewport", [DESK, PHONE], ids=["desk", "phone"])
def test_every_page_is_accessible(
    new_page: OpenPage,
    maker: User,
    axe: Callable[[Page], None],
    viewport: dict[str, int],
    theme: str,
) -> None:
    pages = addresses()
    page = new_page(viewport, user=maker, color_scheme=theme)
    for address in pages:
        response = page.goto(address)
        assert response is not None
        assert response.status == 200, address
        axe(page)
