"""Loads the sample workshop into an empty database."""

import json
from argparse import ArgumentParser
from typing import Any

from django.conf import settings

from inventory.models import Shade, ShelfPiece, Supplier, Workshop
from inventory.shell import Error, OneLineCommand
from patterns.models import Colourway, Pattern
from planner.actions import WorkshopExists
from planner.models import Batch, OrderLine
from planner.sample.load import load_sample
from planner.workshop_folder import prepare


class Command(OneLineCommand):
    help = "Load the sample workshop, an invented stall, where there is no workshop yet."
    requires_migrations_checks = False

    def add_arguments(self, parser: ArgumentParser) -> None:
        parser.add_argument("--json", action="store_true", help="print the counts as JSON")
        # Listed for --help only: planner.bootstrap takes it out, since settings need it earlier.
        parser.add_argument(
            "--data", metavar="DIR", help=f"the workshop's folder (now {settings.DATA_DIR})"
        )

    def handle(self, *args: Any, **options: Any) -> None:
        prepare(settings.DATA_DIR)
        try:
            workshop = load_sample()
        except WorkshopExists as reason:
            raise Error(str(reason)) from None
        counts = count_loaded()
        if options["json"]:
            self.stdout.write(json.dumps({"workshop": workshop.name, **counts}))
        else:
            self.stdout.write(as_sentence(workshop, counts))


def count_loaded() -> dict[str, int]:
    return {
        "patterns": Pattern.objects.count(),
        "colourways": Colourway.objects.count(),
        "shades": Shade.objects.count(),
        "suppliers": Supplier.objects.count(),
        "pieces": ShelfPiece.objects.count(),
        "batches": Batch.objects.count(),
        "lines": OrderLine.objects.count(),
        "bracelets": OrderLine.objects.all().bracelet_count(),
    }


def as_sentence(workshop: Workshop, counts: dict[str, int]) -> str:
    return (
        f"Loaded {workshop.name}: {counts['patterns']} patterns in {counts['colourways']} "
        f"colourways, {counts['shades']} shades, {counts['pieces']} pieces of thread, "
        f"{counts['batches']} batches with {counts['lines']} lines for "
        f"{counts['bracelets']} bracelets."
    )
