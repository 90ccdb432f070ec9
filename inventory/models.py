"""Shades, put-ups to buy, lots, and thread on the shelf."""

from collections import Counter, defaultdict
from decimal import Decimal

from django.core.validators import MaxValueValidator, MinValueValidator, RegexValidator
from django.db import models
from django.db.models import Count, Exists, OuterRef, Prefetch, Q, QuerySet, Sum
from django.db.models.functions import Lower

from inventory.on_shelf import OnShelf, reckoned_length

LONGEST_LENGTH_MM = 10_000_000
colour_validator = RegexValidator(r"^#[0-9a-f]{6}\Z", "Choose a colour.")
length_validators = [MinValueValidator(1), MaxValueValidator(LONGEST_LENGTH_MM)]
pack_validators = [MinValueValidator(1), MaxValueValidator(1_000)]
share_validators = [MinValueValidator(Decimal(0)), MaxValueValidator(Decimal("0.5"))]


class Workshop(models.Model):
    """The workshop's habits: one row, kept in the lowest layer because every layer reads it."""

    class LengthUnit(models.TextChoices):
        CENTIMETRES = "cm", "centimetres"
        INCHES = "in", "inches"

    class Paper(models.TextChoices):
        A4 = "A4", "A4"
        LETTER = "Letter", "US Letter"

    class DateOrder(models.TextChoices):
        DAY_FIRST = "day", "5/12 is 5 December"
        MONTH_FIRST = "month", "5/12 is May 12"

    name = models.CharField(max_length=80)
    date_order = models.CharField(
        max_length=5, choices=DateOrder.choices, default=DateOrder.DAY_FIRST
    )
    length_unit = models.CharField(
        max_length=2, choices=LengthUnit.choices, default=LengthUnit.CENTIMETRES
    )
    currency = models.CharField(
        max_length=3, default="EUR", validators=[RegexValidator(r"^[A-Z]{3}\Z")]
    )
    paper = models.CharField(max_length=6, choices=Paper.choices, default=Paper.A4)
    safety_share = models.DecimalField(
        max_digits=4, decimal_places=3, default=Decimal("0.1"), validators=share_validators
    )
    rounding_step_mm = models.DecimalField(
        max_digits=5,
        decimal_places=2,
        default=Decimal(10),
        validators=[MinValueValidator(Decimal(1)), MaxValueValidator(Decimal(100))],
    )
    keep_length_mm = models.PositiveIntegerField(default=300, validators=length_validators)
    join_tail_mm = models.PositiveIntegerField(default=50, validators=[MaxValueValidator(500)])
    short_measure_share = models.DecimalField(
        max_digits=4, decimal_places=3, default=Decimal("0.02"), validators=share_validators
    )

    class Meta:
        constraints = [
            models.CheckConstraint(condition=Q(pk=1), name="workshop_is_one"),
            models.CheckConstraint(
                condition=Q(safety_share__gte=0, safety_share__lte=Decimal("0.5")),
                name="workshop_safety_share_in_range",
            ),
            models.CheckConstraint(
                condition=Q(short_measure_share__gte=0, short_measure_share__lte=Decimal("0.5")),
                name="workshop_short_measure_share_in_range",
            ),
            models.CheckConstraint(
                condition=Q(rounding_step_mm__gte=1), name="workshop_rounding_step_positive"
            ),
        ]

    def __str__(self) -> str:
        return self.name

    @classmethod
    def current(cls) -> "Workshop | None":
        return cls.objects.filter(pk=1).first()


class Supplier(models.Model):
    name = models.CharField(max_length=80, unique=True)
    note = models.CharField(max_length=500, blank=True)

    class Meta:
        ordering = ["name"]

    def __str__(self) -> str:
        return self.name


class ShadeQuerySet(QuerySet["Shade"]):
    def for_shelf_page(self) -> "ShadeQuerySet":
        """Adds `shelf_mm`, counts of each kind of thread, and `lots_on_shelf`."""
        on_shelf = Q(lots__pieces__removed_at__isnull=True)
        counts = {
            f"{kind}_count": Count("lots__pieces", filter=on_shelf & Q(lots__pieces__kind=kind))
            for kind in ShelfPiece.Kind.values
        }
        lots = Lot.objects.filter(
            Exists(ShelfPiece.objects.on_shelf().filter(lot=OuterRef("pk")))
        ).order_by("name")
        return (
            self.annotate(
                shelf_mm=Sum("lots__pieces__length_mm", filter=on_shelf, default=0), **counts
            )
            .prefetch_related(Prefetch("lots", queryset=lots, to_attr="lots_on_shelf"))
            .order_by(Lower("code"))
        )

    def search(self, words: str) -> "ShadeQuerySet":
        """Every word in the code, the name or a lot on the shelf.

        Lots are searched in a subquery: a join would count a shade's thread once per lot found.
        """
        found = self
        for word in words.split():
            in_lot = ShelfPiece.objects.on_shelf().filter(
                lot__shade=OuterRef("pk"), lot__name__icontains=word
            )
            found = found.filter(Q(code__icontains=word) | Q(name__icontains=word) | Exists(in_lot))
        return found


class Shade(models.Model):
    """A colour of thread with the workshop's own code."""

    code = models.CharField(max_length=20)
    name = models.CharField(max_length=80)
    colour = models.CharField(max_length=7, validators=[colour_validator])

    objects = ShadeQuerySet.as_manager()

    class Meta:
        ordering = [Lower("code")]
        constraints = [
            models.UniqueConstraint(
                Lower("code"), name="shade_code_once", violation_error_message="This code is taken."
            ),
        ]

    def __str__(self) -> str:
        return f"{self.code} {self.name}"


class PutUpQuerySet(QuerySet["PutUp"]):
    def for_put_up_page(self) -> "PutUpQuerySet":
        return self.select_related("supplier").prefetch_related("shades")


class PutUp(models.Model):
    """A way in which thread is sold, from one supplier: `price` is that of a pack.

    Packs are taken in multiples of `pack_step`, and no fewer than `minimum_packs` of one shade.
    """

    name = models.CharField(max_length=80)
    supplier = models.ForeignKey(Supplier, on_delete=models.PROTECT, related_name="put_ups")
    length_mm = models.PositiveIntegerField(validators=length_validators)
    price = models.DecimalField(
        max_digits=9,
        decimal_places=2,
        validators=[MinValueValidator(Decimal(0)), MaxValueValidator(Decimal(100_000))],
    )
    pack_size = models.PositiveSmallIntegerField(default=1, validators=pack_validators)
    minimum_packs = models.PositiveSmallIntegerField(default=1, validators=pack_validators)
    pack_step = models.PositiveSmallIntegerField(default=1, validators=pack_validators)
    for_every_shade = models.BooleanField(default=True)
    shades = models.ManyToManyField(Shade, blank=True, related_name="own_put_ups")

    objects = PutUpQuerySet.as_manager()

    class Meta:
        ordering = ["supplier__name", "length_mm", "name"]
        constraints = [
            models.UniqueConstraint(
                fields=["supplier", "name"], name="put_up_name_once_a_supplier"
            ),
            models.CheckConstraint(condition=Q(length_mm__gte=1), name="put_up_length_positive"),
            models.CheckConstraint(condition=Q(price__gte=0), name="put_up_price_not_negative"),
            models.CheckConstraint(
                condition=Q(pack_size__gte=1, minimum_packs__gte=1, pack_step__gte=1),
                name="put_up_packs_positive",
            ),
        ]

    def __str__(self) -> str:
        return f"{self.name}, {self.supplier}"

    @property
    def pack_words(self) -> str:
        """How many at once; empty where they are sold one by one."""
        words = [f"pack of {self.pack_size}"] if self.pack_size > 1 else []
        if self.minimum_packs > 1:
            words.append(f"at least {self.minimum_packs}")
        if self.pack_step > 1:
            words.append(f"in steps of {self.pack_step}")
        return ", ".join(words)


class Lot(models.Model):
    """A dye lot of one shade; thread of different lots may differ in colour."""

    shade = models.ForeignKey(Shade, on_delete=models.PROTECT, related_name="lots")
    name = models.CharField(max_length=40)

    class Meta:
        ordering = ["name"]
        constraints = [
            models.UniqueConstraint(fields=["shade", "name"], name="lot_name_once_a_shade"),
        ]

    def __str__(self) -> str:
        return f"{self.shade.code} lot {self.name}"


class ShelfPieceQuerySet(QuerySet["ShelfPiece"]):
    def on_shelf(self) -> "ShelfPieceQuerySet":
        return self.filter(removed_at__isnull=True)

    def by_shade(self, short_measure_share: Decimal) -> dict[int, OnShelf]:
        """The thread on the shelf by the shade's key: one query, however many shades there are."""
        lots: dict[int, dict[str, list[int]]] = defaultdict(lambda: defaultdict(list))
        totals: Counter[int] = Counter()
        whole: Counter[int] = Counter()
        rows = self.on_shelf().values_list("lot__shade_id", "lot__name", "kind", "length_mm")
        for shade, lot, kind, length_mm in rows.order_by("pk"):
            is_whole = kind == ShelfPiece.Kind.WHOLE
            trusted = reckoned_length(length_mm, short_measure_share) if is_whole else length_mm
            lots[shade][lot].append(trusted)
            totals[shade] += length_mm
            whole[shade] += is_whole
        return {
            shade: OnShelf(
                totals[shade], whole[shade], tuple(map(tuple, of_shade.values())), tuple(of_shade)
            )
            for shade, of_shade in lots.items()
        }

    def for_shade_page(self) -> "ShelfPieceQuerySet":
        return self.on_shelf().select_related("lot").order_by("lot__name", "-length_mm", "pk")


class ShelfPiece(models.Model):
    """One length of thread that lies on the shelf; its number is its key and is never reused.

    `length_mm` changes only in `inventory.actions.change_shelf`.
    """

    class Kind(models.TextChoices):
        WHOLE = "whole", "whole skein"
        STARTED = "started", "started skein"
        REMNANT = "remnant", "remnant"

    lot = models.ForeignKey(Lot, on_delete=models.PROTECT, related_name="pieces")
    kind = models.CharField(max_length=7, choices=Kind.choices)
    length_mm = models.PositiveIntegerField(validators=length_validators)
    note = models.CharField(max_length=200, blank=True)
    added_at = models.DateTimeField(auto_now_add=True)
    removed_at = models.DateTimeField(null=True, blank=True)

    objects = ShelfPieceQuerySet.as_manager()

    class Meta:
        ordering = ["pk"]
        indexes = [models.Index(fields=["lot", "removed_at"])]
        constraints = [
            models.CheckConstraint(
                condition=Q(length_mm__gte=1), name="shelf_piece_length_positive"
            ),
            models.CheckConstraint(
                condition=Q(kind__in=["whole", "started", "remnant"]), name="shelf_piece_kind_known"
            ),
        ]

    def __str__(self) -> str:
        return f"piece {self.pk}"

    @property
    def is_measured(self) -> bool:
        """A whole skein is trusted only less the short-measure allowance; the rest was measured."""
        return self.kind != self.Kind.WHOLE
