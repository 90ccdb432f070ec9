"""Ways to make a batch, each worked out for one row of the page that compares them."""

import hashlib
import json
from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from decimal import Decimal
from urllib.parse import urlencode

from django.core.cache import cache

from inventory.models import Shade, Supplier, Workshop
from patterns.colour_difference import difference, difference_words
from planner.models import Batch, OrderLine
from planner.planning.choices import Choice, ChoiceSum, sum_up
from planner.plans.choose import Substitute, substitutes_for
from planner.plans.posted_choice import choice_to_post
from planner.plans.work_out import Prepared, prepare

TIME_LIMIT_S = 3.0
KEPT_S = 600


@dataclass(frozen=True)
class Way:
    """A row before it is worked out."""

    choice: Choice
    title: str

    @property
    def query(self) -> str:
        return urlencode(choice_to_post(self.choice))


@dataclass(frozen=True)
class Exchange:
    """A shade and the one that stands in for it."""

    old: Shade
    new: Shade
    words: str


@dataclass(frozen=True)
class WorkedOut:
    """A row that is worked out; `cost_more` is against the batch as it stands."""

    way: Way
    sums: ChoiceSum
    cost_more: Decimal
    words: tuple[str, ...]
    problems: tuple[str, ...]
    missing: tuple[Shade, ...]
    exchanges: tuple[Exchange, ...]

    @property
    def words_beside_title(self) -> tuple[str, ...]:
        """What the title of a usual way does not say already: which endings it takes."""
        if self.way.choice.start or self.way not in usual_ways():
            return self.words
        return ()

    @property
    def saves(self) -> Decimal:
        return -self.cost_more

    @property
    def posted(self) -> Mapping[str, str]:
        return choice_to_post(self.way.choice)


def usual_ways() -> list[Way]:
    """What is compared for every batch; suppliers only where there are several."""
    ways = [
        Way(Choice(), "As it stands"),
        Way(Choice(remnants=False), "Whole skeins only, remnants left alone"),
        Way(Choice(start="folded"), "Folded start"),
        Way(Choice(start="straight"), "Straight start"),
        Way(Choice(lengths="own"), "Each piece its own length"),
        *(
            Way(Choice(lengths=str(k)), f"At most {k} length{'' if k == 1 else 's'} a bracelet")
            for k in range(1, 4)
        ),
    ]
    suppliers = list(Supplier.objects.filter(put_ups__isnull=False).distinct().order_by("name"))
    if len(suppliers) > 1:
        ways += [Way(Choice(supplier=one.name), f"All from {one.name}") for one in suppliers]
    return ways


def work_out_way(batch: Batch, workshop: Workshop, way: Way) -> WorkedOut:
    """PlanError where the batch cannot be planned so."""
    lines = list(batch.lines.for_grid())
    plain = _summed(lines, workshop, Choice())[1]
    prepared, sums = _summed(lines, workshop, way.choice)
    missing = Shade.objects.filter(pk__in=sums.missing)
    return WorkedOut(
        way=way,
        sums=sums,
        cost_more=sums.cost - plain.cost,
        words=prepared.words,
        problems=prepared.problems,
        missing=tuple(missing),
        exchanges=_exchanges(way.choice),
    )


def substitutes_of(batch: Batch, workshop: Workshop) -> list[Way]:
    """For each shade to buy, the shades of the shelf that might stand in for it."""
    prepared = prepare(lines=list(batch.lines.for_grid()), workshop=workshop)
    netted = prepared.net(workshop, time_limit_s=TIME_LIMIT_S)
    return [Way(one.choice, _title(one)) for one in substitutes_for(netted, workshop)]


def _title(one: Substitute) -> str:
    return f"{one.instead} instead of {one.shade}"


def _summed(
    lines: Sequence[OrderLine], workshop: Workshop, choice: Choice
) -> tuple[Prepared, ChoiceSum]:
    """Kept for a while: each row is compared with the batch as it stands."""
    prepared = prepare(lines=lines, workshop=workshop, choice=choice)
    content = [prepared.chosen_stamp, prepared.shelf.stamp, choice.as_json()]
    key = "way-" + hashlib.sha256(json.dumps(content).encode()).hexdigest()
    sums = cache.get(key)
    if sums is None:
        netted = prepared.net(workshop, time_limit_s=TIME_LIMIT_S)
        sums = sum_up(netted, prepared.shelf.threads, workshop.keep_length_mm)
        cache.set(key, sums, KEPT_S)
    return prepared, sums


def _exchanges(choice: Choice) -> tuple[Exchange, ...]:
    shades = Shade.objects.in_bulk({key for pair in choice.substitutes for key in pair})
    return tuple(
        Exchange(
            shades[old],
            shades[new],
            difference_words(difference(shades[old].colour, shades[new].colour)),
        )
        for old, new in choice.substitutes
    )
