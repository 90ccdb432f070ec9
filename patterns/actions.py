"""Every write to the pattern library that touches more than one row."""

from collections.abc import Iterable, Mapping
from dataclasses import asdict, replace
from datetime import date, datetime
from decimal import Decimal
from fractions import Fraction
from itertools import chain, count
from typing import Any

from django.db import IntegrityError, models, transaction
from django.db.models.deletion import ProtectedError

from inventory.models import Shade, Workshop
from patterns.cut_lengths import CutRule
from patterns.defaults import BUTTONED_ENDINGS, DEFAULT_ENDINGS, DEFAULT_SIZES, SizeDefault
from patterns.knots import MAX_NAME_LENGTH
from patterns.models import (
    Colourway,
    ColourwayShade,
    Ending,
    Gauge,
    KnottedLength,
    Pattern,
    PatternVersion,
    Size,
)
from patterns.pattern_file import read_pattern, write_pattern
from patterns.techniques import Pattern as PatternCore
from patterns.techniques import usual_thread_mm


class LibraryError(ValueError):
    """The library cannot be changed so; the text says why and what to do."""


class VersionConflict(LibraryError):
    """Somebody saved the pattern in the meantime; the text says which version stands now."""


def cut_rule(workshop: Workshop | None) -> CutRule:
    """The workshop's habits as the core takes them; those of a new workshop where there is none."""
    habits = workshop or Workshop()
    return CutRule(
        safety_share=float(habits.safety_share),
        rounding_step_mm=Fraction(habits.rounding_step_mm),
        join_tail_mm=habits.join_tail_mm,
    )


@transaction.atomic
def add_pattern(*, text: str, by: Any = None) -> Pattern:
    """Raises PatternError where the text is no pattern, LibraryError where its name is taken."""
    pattern = Pattern()
    _fill(pattern, text)
    _keep_version(pattern, by)
    return pattern


@transaction.atomic
def change_pattern(
    *, pattern: Pattern, text: str, by: Any = None, expected_version: int | None = None
) -> Pattern:
    """Make a new version, unless the text is the same.

    New slots wait for their shades, see `missing_slots`; the shades of slots that are gone stay, out
    of sight, so that going back to an earlier version finds them again. Raises VersionConflict where the pattern is not at the expected version any more.
    """
    stored = Pattern.objects.select_for_update().filter(pk=pattern.pk).first()
    if stored is None:
        raise LibraryError(f"{pattern} was removed in another window.")
    if expected_version not in (None, stored.version):
        raise VersionConflict(
            f"{stored} was saved in another window since you opened it: it is at version "
            f"{stored.version} now, and yours began at version {expected_version}."
        )
    pattern.version = stored.version + (text != stored.text)
    _fill(pattern, text)
    if text != stored.text:
        _keep_version(pattern, by)
    return pattern


@transaction.atomic
def keep_variant(*, pattern: Pattern, text: str, by: Any = None) -> Pattern:
    """Add a variant of a pattern, under a free name, with the colourways that fit it.

    Raises PatternError where the text is no pattern.
    """
    definition = read_pattern(text)
    named = replace(definition, name=_free_name(definition.name))
    kept = add_pattern(text=write_pattern(named), by=by)
    for colourway in pattern.colourways.prefetch_related("shades__shade"):
        shades = colourway.shades_by_slot()
        if set(definition.used_slots) == shades.keys():
            set_colourway(pattern=kept, name=colourway.name, shades=shades)
    return kept


def _free_name(name: str) -> str:
    """Number a name that is taken: "Harbour stripes, even 2"."""
    taken = {other.lower() for other in Pattern.objects.values_list("name", flat=True)}
    tries = (f"{name[: MAX_NAME_LENGTH - 6]} {number}" for number in count(2))
    return next(free for free in chain([name], tries) if free.lower() not in taken)


def _keep_version(pattern: Pattern, by: Any) -> None:
    PatternVersion.objects.create(
        pattern=pattern, number=pattern.version, text=pattern.text, created_by=by
    )


def _fill(pattern: Pattern, text: str) -> PatternCore:
    definition = read_pattern(text)
    pattern.name = definition.name
    pattern.technique = definition.technique
    pattern.text = text
    pattern.strand_count = definition.strands
    pattern.repeat_rows = len(definition.rows)
    pattern.thread_mm = round(usual_thread_mm(definition))
    _save_once(pattern, f"A pattern called {pattern.name} is there already. Choose another name.")
    return definition


def _save_once(thing: models.Model, taken: str) -> None:
    """Two requests may both find the name free, so the constraint has the last word."""
    try:
        with transaction.atomic():
            thing.save()
    except IntegrityError:
        raise LibraryError(taken) from None


@transaction.atomic
def set_colourway(
    *,
    pattern: Pattern,
    name: str,
    shades: Mapping[str, Shade],
    colourway: Colourway | None = None,
) -> Colourway:
    """Give every slot of the pattern its shade, in a new colourway or in this one."""
    slots = set(pattern.definition.used_slots)
    missing, extra = sorted(slots - shades.keys()), sorted(shades.keys() - slots)
    if missing:
        raise LibraryError(f"Choose a shade for {_listed(missing)}.")
    if extra:
        raise LibraryError(f"{pattern.name} has no slot {_listed(extra)}.")
    colourway = colourway or Colourway(pattern=pattern)
    colourway.name = name
    _save_once(colourway, f"{pattern.name} has a colourway called {name} already.")
    colourway.shades.all().delete()
    ColourwayShade.objects.bulk_create(
        ColourwayShade(colourway=colourway, slot=slot, shade=shade)
        for slot, shade in sorted(shades.items())
    )
    return colourway


def missing_slots(colourway: Colourway, definition: PatternCore | None = None) -> list[str]:
    """Slots that wait for a shade; give the definition where it has been read already."""
    slots = set((definition or colourway.pattern.definition).used_slots)
    return sorted(slots - colourway.shades_by_slot().keys())


def _listed(words: list[str]) -> str:
    return f"{', '.join(words[:-1])} and {words[-1]}" if len(words) > 1 else words[0]


def set_gauge(*, gauge: Gauge) -> Gauge:
    """The first one becomes the default."""
    gauge.is_default = gauge.is_default or not Gauge.objects.filter(is_default=True).exists()
    _save_once(gauge, f"A gauge called {gauge.name} is there already. Choose another name.")
    return gauge


@transaction.atomic
def set_ending(*, ending: Ending, lengths_like: Ending | None = None) -> Ending:
    """The first one becomes the default; a new one may take its knotted lengths from another."""
    ending.is_default = ending.is_default or not Ending.objects.filter(is_default=True).exists()
    _save_once(ending, f"An ending called {ending.name} is there already. Choose another name.")
    if lengths_like is not None:
        for row in lengths_like.knotted_lengths.all():
            KnottedLength.objects.get_or_create(
                size_id=row.size_id,
                ending=ending,
                defaults={"knotted_length_mm": row.knotted_length_mm},
            )
    return ending


@transaction.atomic
def set_size(*, size: Size, knotted_lengths_mm: Mapping[Ending, int | None]) -> Size:
    """An ending without a length is one that this size is never made with."""
    _save_once(size, f"A size called {size.name} is there already. Choose another name.")
    for ending, length_mm in knotted_lengths_mm.items():
        if length_mm is None:
            KnottedLength.objects.filter(size=size, ending=ending).delete()
        else:
            KnottedLength.objects.update_or_create(
                size=size, ending=ending, defaults={"knotted_length_mm": length_mm}
            )
    return size


def set_default_gauge(*, gauge: Gauge) -> Gauge:
    _set_default(gauge)
    return gauge


def set_default_ending(*, ending: Ending) -> Ending:
    _set_default(ending)
    return ending


@transaction.atomic
def _set_default(thing: Gauge | Ending) -> None:
    """One that was removed meanwhile must not leave the others without a default."""
    rows = type(thing)._default_manager
    if not rows.select_for_update().filter(pk=thing.pk):
        raise LibraryError(f"{thing} was removed in another window.")
    rows.filter(is_default=True).update(is_default=False)
    rows.filter(pk=thing.pk).update(is_default=True)
    thing.is_default = True


def check_removable(thing: models.Model) -> None:
    """Looks along the relations, because the orders that use a pattern are not ours to name."""
    if getattr(thing, "is_default", False):
        raise LibraryError(f"{thing} is the default. Make another one the default first.")
    uses = [
        f"{count} {_one_or_more(relation.related_model, count)}"
        for relation in thing._meta.related_objects
        if relation.on_delete is models.PROTECT
        and (
            count := relation.related_model._base_manager.filter(
                **{relation.field.name: thing}
            ).count()
        )
    ]
    if uses:
        raise LibraryError(f"{thing} is used by {_listed(uses)}. Take it out there first.")


def _one_or_more(model: Any, count: int) -> str:
    return str(model._meta.verbose_name if count == 1 else model._meta.verbose_name_plural)


@transaction.atomic
def remove(*, thing: models.Model) -> None:
    """Look at it as it is now: another window may just have made it the default."""
    locked = type(thing)._default_manager.select_for_update().filter(pk=thing.pk).first()
    if locked is None:
        raise LibraryError(f"{thing} was removed in another window.")
    check_removable(locked)
    try:
        locked.delete()
    except ProtectedError:
        raise LibraryError(f"{thing} is in use. Take it out of the orders first.") from None


@transaction.atomic
def load_defaults() -> None:
    """What is there already, by name, stays as the maker left it; so a second run adds nothing."""
    if not Gauge.objects.exists():
        Gauge.objects.create(name="Six-strand floss", is_default=True)
    endings = {core.name: _default_ending(asdict(core)) for core in DEFAULT_ENDINGS}
    if not Ending.objects.filter(is_default=True).exists():
        set_default_ending(ending=next(iter(endings.values())))
    sizes = {default: _default_size(default) for default in DEFAULT_SIZES}
    KnottedLength.objects.bulk_create(
        [
            KnottedLength(size=size, ending=endings[name], knotted_length_mm=length_mm)
            for default, size in sizes.items()
            for name, length_mm in default.knotted_length_mm
        ],
        ignore_conflicts=True,
    )


def _default_size(default: SizeDefault) -> Size:
    return Size.objects.filter(name__iexact=default.name).first() or Size.objects.create(
        name=default.name,
        wrist_min_mm=default.wrist_min_mm,
        wrist_max_mm=default.wrist_max_mm,
        is_child=default.is_child,
    )


def _default_ending(values: dict[str, Any]) -> Ending:
    """A missing one is added; the take-up goes by its text, since 1.2 is no binary number."""
    found = Ending.objects.filter(name__iexact=values["name"]).first()
    return found or Ending.objects.create(
        **values | {"take_up": Decimal(str(values["take_up"]))},
        has_metal_or_button=values["name"] in BUTTONED_ENDINGS,
    )


def archive_pattern(*, pattern: Pattern, at: datetime) -> Pattern:
    """Out of the library and of new orders; what uses it keeps it."""
    pattern.archived_at = at
    pattern.save(update_fields=["archived_at"])
    return pattern


def bring_back_pattern(*, pattern: Pattern) -> Pattern:
    pattern.archived_at = None
    pattern.save(update_fields=["archived_at"])
    return pattern


@transaction.atomic
def restore_version(*, version: PatternVersion, by: Any = None) -> Pattern:
    """The old text becomes the newest version, so that going back can itself be taken back."""
    return change_pattern(pattern=version.pattern, text=version.text, by=by)


def note_planned(*, patterns: Iterable[int], on: date) -> None:
    """Remember when patterns were last in a plan; the library can show what was made before."""
    Pattern.objects.filter(pk__in=set(patterns)).update(last_planned_on=on)
