"""What can be ordered now, and how a batch's orders are read."""

from datetime import date
from typing import TypedDict

from django.db.models import Exists, OuterRef
from django.utils import timezone

from inventory.models import Workshop
from patterns.models import Ending, Pattern, Size
from planner.models import Batch, OrderLine
from planner.order_list.catalogue import Catalogue, Choice, PatternChoice, SizeChoice


class HowToRead(TypedDict):
    """What dates are read by."""

    today: date
    market_date: date | None
    day_first: bool


def how_to_read(market_date: date | None) -> HowToRead:
    workshop = Workshop.current() or Workshop()
    return {
        "today": timezone.localdate(),
        "market_date": market_date,
        "day_first": workshop.date_order == Workshop.DateOrder.DAY_FIRST,
    }


def load_catalogue(batch: Batch | None = None, *, archived_too: bool = False) -> Catalogue:
    """Four queries, however much there is.

    Archived patterns cannot be ordered, except where the batch has ordered them already: its rows
    are read again with every saving of the grid. `archived_too` is for rows that come back.
    """
    patterns = Pattern.objects.prefetch_related("colourways").order_by("name")
    ordered = Exists(OrderLine.objects.filter(batch=batch, pattern=OuterRef("pk")))
    patterns = patterns.annotate(is_ordered=ordered)
    endings = list(Ending.objects.all())
    default = next((ending.pk for ending in endings if ending.is_default), None)
    return Catalogue(
        patterns=tuple(
            PatternChoice(
                pattern.pk,
                pattern.name,
                tuple(
                    Choice(colourway.pk, colourway.name) for colourway in pattern.colourways.all()
                ),
                is_archived=pattern.archived_at is not None
                and not (pattern.is_ordered or archived_too),
                is_suggested=pattern.archived_at is None,
            )
            for pattern in patterns
        ),
        sizes=tuple(
            SizeChoice(size.pk, size.name, size.wrist_min_mm, size.wrist_max_mm)
            for size in Size.objects.all()
        ),
        endings=tuple(Choice(ending.pk, ending.name) for ending in endings),
        default_ending_key=default,
    )
