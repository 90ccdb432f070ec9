"""Patterns, colourways, sizes, endings and gauges."""

import math
from collections.abc import Mapping
from decimal import Decimal
from functools import lru_cache
from typing import Any

from django.conf import settings
from django.core.validators import MaxValueValidator, MinValueValidator, RegexValidator
from django.db import models
from django.db.models import F, Q, QuerySet
from django.db.models.functions import Lower

from inventory.models import Shade
from patterns import cut_lengths, geometry, pattern_file
from patterns.techniques import Pattern as PatternCore

part_validators = [MaxValueValidator(2_000)]
wrist_validators = [MinValueValidator(50), MaxValueValidator(400)]


class Gauge(models.Model):
    """How one maker knots: the three numbers that turn knots into thread."""

    name = models.CharField(max_length=80, unique=True)
    thread_diameter_mm = models.DecimalField(
        max_digits=5,
        decimal_places=3,
        default=Decimal("0.9"),
        validators=[MinValueValidator(Decimal("0.1")), MaxValueValidator(Decimal(10))],
    )
    loop_ratio = models.DecimalField(
        max_digits=5,
        decimal_places=3,
        default=Decimal("1.5"),
        validators=[MinValueValidator(Decimal("0.5")), MaxValueValidator(Decimal(5))],
    )
    idle_run = models.DecimalField(
        max_digits=5,
        decimal_places=3,
        null=True,
        blank=True,
        validators=[MinValueValidator(Decimal(0)), MaxValueValidator(Decimal(10))],
    )
    is_default = models.BooleanField(default=False)

    class Meta:
        ordering = [F("is_default").desc(), "name"]
        constraints = [
            models.UniqueConstraint(
                fields=["is_default"], condition=Q(is_default=True), name="gauge_one_default"
            ),
            models.CheckConstraint(
                condition=Q(thread_diameter_mm__gt=0, loop_ratio__gt=0), name="gauge_positive"
            ),
        ]

    def __str__(self) -> str:
        return self.name

    def as_core(self) -> geometry.Gauge:
        return geometry.Gauge(
            thread_diameter_mm=float(self.thread_diameter_mm),
            loop_ratio=float(self.loop_ratio),
            idle_run=math.sqrt(2) if self.idle_run is None else float(self.idle_run),
        )


class Size(models.Model):
    name = models.CharField(max_length=40)
    wrist_min_mm = models.PositiveIntegerField(validators=wrist_validators)
    wrist_max_mm = models.PositiveIntegerField(validators=wrist_validators)
    is_child = models.BooleanField(default=False)

    class Meta:
        ordering = ["wrist_min_mm", "name"]
        constraints = [
            models.UniqueConstraint(Lower("name"), name="size_name_once"),
            models.CheckConstraint(
                condition=Q(wrist_max_mm__gt=F("wrist_min_mm")), name="size_wrist_range"
            ),
        ]

    def __str__(self) -> str:
        return self.name


class Ending(models.Model):
    """How a bracelet starts and closes, and the thread that this takes."""

    class Start(models.TextChoices):
        STRAIGHT = "straight", "straight: every strand cut alone"
        FOLDED = "folded", "folded: strands of one colour cut in pairs"

    name = models.CharField(max_length=60)
    start = models.CharField(max_length=8, choices=Start.choices, default=Start.STRAIGHT)
    start_tie_mm = models.PositiveIntegerField(default=0, validators=part_validators)
    end_tie_mm = models.PositiveIntegerField(default=0, validators=part_validators)
    take_up = models.DecimalField(
        max_digits=4,
        decimal_places=2,
        default=Decimal(1),
        validators=[MinValueValidator(Decimal(1)), MaxValueValidator(Decimal(3))],
    )
    closing_knot_mm = models.PositiveIntegerField(default=30, validators=part_validators)
    grip_mm = models.PositiveIntegerField(default=90, validators=part_validators)
    fold_loop_mm = models.PositiveIntegerField(default=0, validators=part_validators)
    single_start_mm = models.PositiveIntegerField(default=0, validators=part_validators)
    sliding_piece_mm = models.PositiveIntegerField(default=0, validators=part_validators)
    has_metal_or_button = models.BooleanField(default=False)
    is_default = models.BooleanField(default=False)

    class Meta:
        ordering = ["pk"]
        constraints = [
            models.UniqueConstraint(Lower("name"), name="ending_name_once"),
            models.UniqueConstraint(
                fields=["is_default"], condition=Q(is_default=True), name="ending_one_default"
            ),
            models.CheckConstraint(condition=Q(take_up__gte=1), name="ending_take_up_at_least_one"),
            models.CheckConstraint(
                condition=Q(start__in=["straight", "folded"]), name="ending_start_known"
            ),
        ]

    def __str__(self) -> str:
        return self.name

    def as_core(self) -> cut_lengths.Ending:
        return cut_lengths.Ending(
            name=self.name,
            start="folded" if self.start == self.Start.FOLDED else "straight",
            start_tie_mm=self.start_tie_mm,
            end_tie_mm=self.end_tie_mm,
            take_up=float(self.take_up),
            closing_knot_mm=self.closing_knot_mm,
            grip_mm=self.grip_mm,
            fold_loop_mm=self.fold_loop_mm,
            single_start_mm=self.single_start_mm,
            sliding_piece_mm=self.sliding_piece_mm,
        )


class KnottedLength(models.Model):
    """How long the band is for one size with one ending."""

    size = models.ForeignKey(Size, on_delete=models.CASCADE, related_name="knotted_lengths")
    ending = models.ForeignKey(Ending, on_delete=models.CASCADE, related_name="knotted_lengths")
    knotted_length_mm = models.PositiveIntegerField(
        validators=[MinValueValidator(20), MaxValueValidator(1_000)]
    )

    class Meta:
        ordering = ["size__wrist_min_mm", "ending_id"]
        constraints = [
            models.UniqueConstraint(fields=["size", "ending"], name="knotted_length_once"),
            models.CheckConstraint(
                condition=Q(knotted_length_mm__gte=20, knotted_length_mm__lte=1_000),
                name="knotted_length_in_range",
            ),
        ]

    def __str__(self) -> str:
        return f"{self.size} with {self.ending}"


LIBRARY_ORDER: dict[str, tuple[str | Lower, ...]] = {
    "": (Lower("name"), "pk"),
    "newest": ("-created_at", "-pk"),
    "thread": ("thread_mm", Lower("name")),
    "most-thread": ("-thread_mm", Lower("name")),
}


class PatternQuerySet(QuerySet["Pattern"]):
    def for_library_page(self) -> "PatternQuerySet":
        return self.prefetch_related("colourways__shades__shade")

    def search(self, words: str) -> "PatternQuerySet":
        found = self
        for word in words.split():
            found = found.filter(name__icontains=word)
        return found

    def in_library(self) -> "PatternQuerySet":
        return self.filter(archived_at=None)

    def fitting(self, chosen: Mapping[str, Any]) -> "PatternQuerySet":
        """What the filters of the library leave, in its order; see `LibraryForm.chosen`."""
        found = self.search(chosen.get("q", ""))
        found = found.filter(archived_at__isnull=chosen.get("kept") != "archived")
        if made := chosen.get("made"):
            found = found.filter(last_planned_on__isnull=made == "no")
        limits = {
            "technique": chosen.get("technique"),
            "strand_count__gte": chosen.get("strands_from"),
            "strand_count__lte": chosen.get("strands_to"),
            "thread_mm__gte": getattr(chosen.get("thread"), "from_mm", None),
            "thread_mm__lt": getattr(chosen.get("thread"), "below_mm", None),
        }
        found = found.filter(**{name: value for name, value in limits.items() if value})
        return found.order_by(*LIBRARY_ORDER[chosen.get("sort", "")])


@lru_cache(maxsize=128)
def _read_once(text: str) -> PatternCore:
    """Lists read the same patterns again and again; what is read is frozen, so it can be shared."""
    return pattern_file.read_pattern(text)


class Pattern(models.Model):
    """A pattern as its own text; `definition` reads it for the cores."""

    class Technique(models.TextChoices):
        DIAGONAL = "diagonal", "diagonal"
        GRID = "grid", "grid"

    name = models.CharField(max_length=80)
    technique = models.CharField(
        max_length=8, choices=Technique.choices, default=Technique.DIAGONAL
    )
    text = models.TextField(max_length=65_536)
    strand_count = models.PositiveIntegerField()
    repeat_rows = models.PositiveIntegerField()
    thread_mm = models.PositiveIntegerField(default=0)
    version = models.PositiveIntegerField(default=1)
    archived_at = models.DateTimeField(null=True, blank=True)
    last_planned_on = models.DateField(null=True, blank=True)
    created_at = models.DateTimeField(auto_now_add=True)
    updated_at = models.DateTimeField(auto_now=True)

    objects = PatternQuerySet.as_manager()

    class Meta:
        ordering = [Lower("name")]
        constraints = [
            models.UniqueConstraint(
                Lower("name"),
                name="pattern_name_once",
                violation_error_message="A pattern of this name is there already.",
            ),
        ]

    def __str__(self) -> str:
        return self.name

    @property
    def definition(self) -> PatternCore:
        return _read_once(self.text)


class PatternVersion(models.Model):
    """The text of a pattern as it was saved; the newest one is the pattern's own text."""

    pattern = models.ForeignKey(Pattern, on_delete=models.CASCADE, related_name="versions")
    number = models.PositiveIntegerField()
    text = models.TextField(max_length=65_536)
    created_at = models.DateTimeField(auto_now_add=True)
    created_by = models.ForeignKey(
        settings.AUTH_USER_MODEL, on_delete=models.SET_NULL, null=True, related_name="+"
    )

    class Meta:
        ordering = ["-number"]
        constraints = [
            models.UniqueConstraint(
                fields=["pattern", "number"], name="pattern_version_number_once"
            ),
        ]

    def __str__(self) -> str:
        return f"{self.pattern}, version {self.number}"


class PatternImport(models.Model):
    """Pattern files that were uploaded together and wait for the maker's word."""

    created_by = models.ForeignKey(
        settings.AUTH_USER_MODEL, on_delete=models.CASCADE, related_name="+"
    )
    created_at = models.DateTimeField(auto_now_add=True)
    source_name = models.CharField(max_length=200, blank=True)
    files = models.JSONField()

    class Meta:
        ordering = ["-pk"]

    def __str__(self) -> str:
        return self.source_name or "pattern files"


class Colourway(models.Model):
    """One choice of shades for a pattern's slots."""

    pattern = models.ForeignKey(Pattern, on_delete=models.CASCADE, related_name="colourways")
    name = models.CharField(max_length=60)

    class Meta:
        ordering = ["pk"]
        constraints = [
            models.UniqueConstraint(
                "pattern",
                Lower("name"),
                name="colourway_name_once_a_pattern",
                violation_error_message="This pattern has a colourway of that name.",
            ),
        ]

    def __str__(self) -> str:
        return self.name

    def shades_by_slot(self) -> dict[str, Shade]:
        """Uses prefetched rows where `shades__shade` was prefetched."""
        used = self.pattern.definition.used_slots
        return {choice.slot: choice.shade for choice in self.shades.all() if choice.slot in used}


class ColourwayShade(models.Model):
    colourway = models.ForeignKey(Colourway, on_delete=models.CASCADE, related_name="shades")
    slot = models.CharField(max_length=1, validators=[RegexValidator(r"^[A-Z]\Z")])
    shade = models.ForeignKey(Shade, on_delete=models.PROTECT, related_name="colourway_slots")

    class Meta:
        verbose_name = "colourway slot"
        ordering = ["slot"]
        constraints = [
            models.UniqueConstraint(fields=["colourway", "slot"], name="colourway_slot_once"),
        ]

    def __str__(self) -> str:
        return f"{self.slot}: {self.shade}"
