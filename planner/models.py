"""Batches of orders, and plans: what a batch needs, frozen at one moment."""

from datetime import date, timedelta

from django.conf import settings
from django.core.validators import MaxValueValidator, MinValueValidator
from django.db import models
from django.db.models import Count, Exists, Max, OuterRef, Q, QuerySet, Subquery, Sum
from django.utils import timezone

from patterns.models import Colourway, Ending, Pattern, Size

MOST_A_LINE = 9_999


class BatchQuerySet(QuerySet["Batch"]):
    def for_batch_list(self) -> "BatchQuerySet":
        return self.annotate(
            line_count=Count("lines", distinct=True), latest_plan=Max("plans__number")
        ).order_by(models.F("market_date").desc(nulls_first=True), "-pk")

    def for_home(self, today: date) -> "BatchQuerySet":
        """Markets ahead, the next first; batches without a date come last."""
        plans = Plan.objects.filter(batch=OuterRef("pk")).order_by("-number")
        ahead = Q(market_date__isnull=True) | Q(market_date__gte=today)
        return (
            self.filter(ahead)
            .annotate(
                line_count=Count("lines", distinct=True),
                latest_plan=Max("plans__number"),
                latest_plan_pk=Subquery(plans.values("pk")[:1]),
            )
            .order_by(models.F("market_date").asc(nulls_last=True), "-pk")
        )


class Batch(models.Model):
    """The orders that are made together, most often for one market."""

    name = models.CharField(max_length=80)
    market_date = models.DateField(null=True, blank=True)
    revision = models.PositiveIntegerField(default=0)
    created_at = models.DateTimeField(auto_now_add=True)

    objects = BatchQuerySet.as_manager()

    class Meta:
        ordering = ["-pk"]

    def __str__(self) -> str:
        return self.name


class OrderLineQuerySet(QuerySet["OrderLine"]):
    def for_grid(self) -> "OrderLineQuerySet":
        return self.select_related("pattern", "colourway", "size", "ending").order_by(
            "position", "pk"
        )

    def bracelet_count(self) -> int:
        return self.aggregate(total=Sum("quantity", default=0))["total"]


class OrderLine(models.Model):
    """So many equal bracelets for one person or for the stall."""

    batch = models.ForeignKey(Batch, on_delete=models.CASCADE, related_name="lines")
    position = models.PositiveIntegerField()
    for_whom = models.CharField(max_length=120, blank=True)
    pattern = models.ForeignKey(Pattern, on_delete=models.PROTECT, related_name="order_lines")
    colourway = models.ForeignKey(Colourway, on_delete=models.PROTECT, related_name="order_lines")
    size = models.ForeignKey(Size, on_delete=models.PROTECT, related_name="order_lines")
    ending = models.ForeignKey(Ending, on_delete=models.PROTECT, related_name="order_lines")
    quantity = models.PositiveIntegerField(
        default=1, validators=[MinValueValidator(1), MaxValueValidator(MOST_A_LINE)]
    )
    due_date = models.DateField(null=True, blank=True)
    note = models.CharField(max_length=500, blank=True)
    distinct_lengths = models.PositiveSmallIntegerField(
        null=True, blank=True, validators=[MinValueValidator(1), MaxValueValidator(60)]
    )
    matched_set = models.CharField(max_length=40, blank=True)

    objects = OrderLineQuerySet.as_manager()

    class Meta:
        ordering = ["position", "pk"]
        constraints = [
            models.CheckConstraint(
                condition=Q(quantity__gte=1, quantity__lte=MOST_A_LINE),
                name="order_line_quantity_in_range",
            ),
        ]

    def __str__(self) -> str:
        return f"{self.quantity} x {self.pattern} for {self.for_whom or 'the stall'}"


class OrderDraft(models.Model):
    """Rows that were pasted or uploaded and wait for the maker's word; nothing is ordered yet."""

    batch = models.ForeignKey(Batch, on_delete=models.CASCADE, related_name="drafts")
    created_by = models.ForeignKey(settings.AUTH_USER_MODEL, on_delete=models.CASCADE)
    created_at = models.DateTimeField(auto_now_add=True)
    source_name = models.CharField(max_length=200, blank=True)
    rows = models.JSONField()
    notices = models.JSONField(default=list)

    class Meta:
        ordering = ["-pk"]

    def __str__(self) -> str:
        return f"draft of {self.batch}"


class PlanQuerySet(QuerySet["Plan"]):
    def latest_ahead(self, today: date) -> "PlanQuerySet":
        """The newest plan of every batch whose market is still to come."""
        later = Plan.objects.filter(batch=OuterRef("batch"), number__gt=OuterRef("number"))
        ahead = Q(batch__market_date__isnull=True) | Q(batch__market_date__gte=today)
        return self.filter(ahead).filter(~Exists(later))


class Plan(models.Model):
    """A snapshot: every name, length and price in it is a copy, so later edits leave it alone."""

    class Status(models.TextChoices):
        OPTIMAL = "optimal", "proven: nothing cheaper is possible"
        FEASIBLE = "feasible", "not proven to be the cheapest"

    batch = models.ForeignKey(Batch, on_delete=models.CASCADE, related_name="plans")
    number = models.PositiveIntegerField()
    created_at = models.DateTimeField(auto_now_add=True)
    created_by = models.ForeignKey(settings.AUTH_USER_MODEL, on_delete=models.SET_NULL, null=True)
    plan_date = models.DateField()
    batch_name = models.CharField(max_length=80)
    market_date = models.DateField(null=True)
    workshop = models.JSONField()
    status = models.CharField(max_length=8, choices=Status.choices)
    cost = models.DecimalField(max_digits=12, decimal_places=2)
    lower_bound = models.DecimalField(max_digits=12, decimal_places=2)
    bracelet_count = models.PositiveIntegerField()
    piece_count = models.PositiveIntegerField()
    problems = models.JSONField(default=list)
    choice = models.JSONField(default=dict)
    shelf_stamp = models.CharField(max_length=64)
    orders_stamp = models.CharField(max_length=64)

    objects = PlanQuerySet.as_manager()

    class Meta:
        ordering = ["-number"]
        constraints = [
            models.UniqueConstraint(fields=["batch", "number"], name="plan_number_once_a_batch"),
            models.CheckConstraint(
                condition=Q(status__in=["optimal", "feasible"]), name="plan_status_known"
            ),
        ]

    def __str__(self) -> str:
        return f"plan {self.number} of {self.batch_name}"

    def newer(self) -> "Plan | None":
        """The newest plan of the batch, where that is not this one."""
        newest = Plan.objects.filter(batch=self.batch_id).order_by("-number").first()
        return newest if newest and newest.pk != self.pk else None


LOST_AFTER = timedelta(minutes=1)


class PlanRunQuerySet(QuerySet["PlanRun"]):
    def under_way(self) -> "PlanRunQuerySet":
        """Runs that somebody is working on, as far as can be heard."""
        return self.filter(status=PlanRun.Status.RUNNING, heard_at__gte=timezone.now() - LOST_AFTER)


class PlanRun(models.Model):
    """A plan being worked out, perhaps in another process: how far it is, and the wish to stop."""

    class Status(models.TextChoices):
        RUNNING = "running", "working"
        DONE = "done", "done"
        FAILED = "failed", "failed"

    batch = models.ForeignKey(Batch, on_delete=models.CASCADE, related_name="runs")
    created_by = models.ForeignKey(settings.AUTH_USER_MODEL, on_delete=models.SET_NULL, null=True)
    created_at = models.DateTimeField(auto_now_add=True)
    heard_at = models.DateTimeField(auto_now_add=True)
    status = models.CharField(max_length=8, choices=Status.choices, default=Status.RUNNING)
    choice = models.JSONField(default=dict)
    shades_done = models.PositiveIntegerField(default=0)
    shades_total = models.PositiveIntegerField(default=0)
    doing = models.CharField(max_length=120, blank=True)
    stop_wanted = models.BooleanField(default=False)
    message = models.CharField(max_length=500, blank=True)
    plan = models.ForeignKey(Plan, on_delete=models.SET_NULL, null=True, related_name="runs")

    objects = PlanRunQuerySet.as_manager()

    class Meta:
        ordering = ["-pk"]

    def __str__(self) -> str:
        return f"run {self.pk} of {self.batch}"

    @property
    def is_running(self) -> bool:
        return self.status == self.Status.RUNNING and not self.is_lost

    @property
    def is_lost(self) -> bool:
        """Nothing was heard of it for so long that whoever worked on it must be gone."""
        silence = timezone.now() - self.heard_at
        return self.status == self.Status.RUNNING and silence > LOST_AFTER


class PlanKind(models.Model):
    """All equal bracelets of a plan: pattern, colourway, size and ending, exploded once."""

    plan = models.ForeignKey(Plan, on_delete=models.CASCADE, related_name="kinds")
    pattern_id_then = models.BigIntegerField(null=True)
    pattern_version = models.PositiveIntegerField(null=True)
    pattern_name = models.CharField(max_length=80)
    pattern_text = models.TextField()
    colourway_name = models.CharField(max_length=60)
    size_name = models.CharField(max_length=40)
    ending_name = models.CharField(max_length=60)
    knotted_length_mm = models.PositiveIntegerField()
    rows = models.PositiveIntegerField()
    band_width_mm = models.FloatField()
    making = models.JSONField()
    cautions = models.JSONField(default=list)

    class Meta:
        ordering = ["pk"]

    def __str__(self) -> str:
        return f"{self.pattern_name}, {self.colourway_name}, {self.size_name}"


class PlanBraceletQuerySet(QuerySet["PlanBracelet"]):
    def for_bracelet_page(self) -> "PlanBraceletQuerySet":
        return self.select_related("plan__batch", "kind").prefetch_related(
            "pieces__stock", "pieces__shade"
        )


class PlanBracelet(models.Model):
    """One bracelet to make; its number is on its tag."""

    plan = models.ForeignKey(Plan, on_delete=models.CASCADE, related_name="bracelets")
    kind = models.ForeignKey(PlanKind, on_delete=models.CASCADE, related_name="bracelets")
    number = models.PositiveIntegerField()
    for_whom = models.CharField(max_length=120, blank=True)
    due_date = models.DateField(null=True)
    note = models.CharField(max_length=500, blank=True)
    matched_set = models.CharField(max_length=40, blank=True)

    objects = PlanBraceletQuerySet.as_manager()

    class Meta:
        ordering = ["number"]
        constraints = [
            models.UniqueConstraint(fields=["plan", "number"], name="tag_number_once_a_plan"),
        ]

    def __str__(self) -> str:
        return f"bracelet {self.number}"


class PlanShade(models.Model):
    """What one shade needs, finds on the shelf and costs; `proof` is what is known of the plan."""

    class Status(models.TextChoices):
        OPTIMAL = "optimal", "proven: nothing cheaper is possible"
        FEASIBLE = "feasible", "not proven to be the cheapest"
        STOPPED = "stopped", "not worked out: stopped"
        FAILED = "failed", "not worked out: an error"

    plan = models.ForeignKey(Plan, on_delete=models.CASCADE, related_name="shades")
    shade_id_then = models.BigIntegerField()
    code = models.CharField(max_length=20)
    name = models.CharField(max_length=80)
    colour = models.CharField(max_length=7)
    status = models.CharField(max_length=8, choices=Status.choices)
    piece_count = models.PositiveIntegerField()
    need_mm = models.PositiveBigIntegerField()
    shelf_mm = models.PositiveBigIntegerField()
    usable_mm = models.PositiveBigIntegerField()
    left_mm = models.PositiveBigIntegerField()
    bought = models.PositiveIntegerField()
    bought_lower_bound = models.PositiveIntegerField()
    cost = models.DecimalField(max_digits=12, decimal_places=2)
    lower_bound = models.DecimalField(max_digits=12, decimal_places=2)
    shelf = models.JSONField(default=list)
    unplaced = models.JSONField(default=list)
    proof = models.JSONField(default=dict)

    class Meta:
        ordering = ["code"]
        constraints = [
            models.UniqueConstraint(fields=["plan", "code"], name="plan_shade_once"),
        ]

    def __str__(self) -> str:
        return f"{self.code} {self.name}"

    @property
    def solving_seconds(self) -> float:
        """Plans of earlier releases do not know it."""
        return float(self.proof.get("seconds", 0))


class PlanPurchase(models.Model):
    """So many skeins of one put-up to buy for one shade."""

    shade = models.ForeignKey(PlanShade, on_delete=models.CASCADE, related_name="purchases")
    supplier_name = models.CharField(max_length=80)
    put_up_name = models.CharField(max_length=80)
    length_mm = models.PositiveIntegerField()
    reckoned_mm = models.PositiveIntegerField()
    unit_price = models.DecimalField(max_digits=9, decimal_places=2)
    pack_size = models.PositiveSmallIntegerField(default=1)
    count = models.PositiveIntegerField()
    cost = models.DecimalField(max_digits=12, decimal_places=2)

    class Meta:
        ordering = ["supplier_name", "shade__code", "put_up_name"]

    def __str__(self) -> str:
        return f"{self.count} x {self.put_up_name}"

    @property
    def packs(self) -> int:
        """How many packs are taken to the till."""
        return self.count // self.pack_size


class PlanStock(models.Model):
    """A skein or remnant that the plan cuts from, in the order in which it is opened."""

    shade = models.ForeignKey(PlanShade, on_delete=models.CASCADE, related_name="stock")
    position = models.PositiveIntegerField()
    shelf_piece_number = models.BigIntegerField(null=True)
    source = models.CharField(max_length=200)
    lot_name = models.CharField(max_length=40, blank=True)
    is_new = models.BooleanField()
    length_mm = models.PositiveIntegerField()
    reckoned_mm = models.PositiveIntegerField()
    left_mm = models.PositiveIntegerField()
    goes_back = models.BooleanField()

    class Meta:
        ordering = ["position"]
        constraints = [
            models.UniqueConstraint(fields=["shade", "position"], name="plan_stock_position_once"),
        ]

    def __str__(self) -> str:
        return self.source


class PlanPiece(models.Model):
    """One piece to cut: from which stock, in which order, for which bracelet.

    `index` is its place among the pieces of the bracelet's kind, where strands and fold stand.
    """

    bracelet = models.ForeignKey(PlanBracelet, on_delete=models.CASCADE, related_name="pieces")
    shade = models.ForeignKey(PlanShade, on_delete=models.CASCADE, related_name="pieces")
    stock = models.ForeignKey(PlanStock, on_delete=models.CASCADE, related_name="pieces", null=True)
    cut_position = models.PositiveIntegerField(null=True)
    index = models.PositiveIntegerField()
    cut_mm = models.PositiveIntegerField()

    class Meta:
        ordering = ["bracelet_id", "index"]
        constraints = [
            models.UniqueConstraint(fields=["bracelet", "index"], name="plan_piece_index_once"),
            models.UniqueConstraint(
                fields=["stock", "cut_position"], name="plan_piece_cut_position_once"
            ),
        ]

    def __str__(self) -> str:
        return f"{self.bracelet_id}-{self.index}"
