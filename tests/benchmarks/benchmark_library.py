"""The library page and its pictures on the server; prints milliseconds, asserts nothing.

Patterns of 6 to 24 strands and 2 to 60 rows, a third of them grids, each with one or two
colourways. Run with the project's own Python: tests/benchmarks/benchmark_library.py
"""

import os
import random
import re
import statistics
import sys
import tempfile
import time
from pathlib import Path
from typing import Any

sys.path.insert(0, str(Path(__file__).parents[2]))
os.environ.setdefault("DJANGO_SETTINGS_MODULE", "planner.settings.test")

FEW, MANY = 30, 300
TIMES = 7


def prepare(folder: str) -> None:
    import django
    from django.conf import settings

    settings.DATABASES["default"]["NAME"] = str(Path(folder) / "benchmark.sqlite3")
    settings.ALLOWED_HOSTS = ["testserver"]
    django.setup()
    from django.core.management import call_command

    call_command("migrate", verbosity=0)


def text_of(number: int, chance: random.Random) -> str:
    technique = ("diagonal", "diagonal", "grid")[number % 3]
    name = f'name = "Pattern {number}"\ntechnique = "{technique}"\n'
    rows = 2 * chance.randint(1, 30)
    if technique == "grid":
        cells = ["".join(chance.choices("AAB", k=chance.randint(6, 20)))] * rows
        return f'{name}background = "A"\nrows = """\n' + "\n".join(cells) + '\n"""\n'
    strands = chance.randint(6, 24)
    knots = [
        " ".join(chance.choices(["f", "b", "fb", "bf"], k=(strands - row % 2) // 2))
        for row in range(rows)
    ]
    slots = " ".join("ABC"[strand % 3] for strand in range(strands))
    return f'{name}strands = "{slots}"\nrows = """\n' + "\n".join(knots) + '\n"""\n'


def add_patterns(numbers: range) -> None:
    from django.db import transaction

    from patterns.actions import add_pattern, set_colourway
    from tests.factories import make_shade

    chance = random.Random(numbers.start)
    with transaction.atomic():
        shades = {slot: make_shade(colour=colour) for slot, colour in COLOURS.items()}
        for number in numbers:
            pattern = add_pattern(text=text_of(number, chance))
            used = {slot: shades[slot] for slot in pattern.definition.used_slots}
            for way in ("Dusk", "Dawn")[: 1 + number % 2]:
                set_colourway(pattern=pattern, name=way, shades=used)


COLOURS = {"A": "#f2ecdd", "B": "#a3262f", "C": "#33506b"}


def milliseconds(client: Any, address: str) -> tuple[float, Any]:
    start = time.perf_counter()
    answer = client.get(address)
    spent = (time.perf_counter() - start) * 1_000
    assert answer.status_code in (200, 304), answer.status_code
    return spent, answer


def measure(client: Any) -> float:
    from patterns import models, thumbnails

    count = models.Pattern.objects.count()
    for cache in (thumbnails._slots, thumbnails.picture, models._read_once):
        cache.cache_clear()
    cold, answer = milliseconds(client, "/patterns/")
    warm = statistics.median(milliseconds(client, "/patterns/")[0] for _ in range(TIMES))
    size_kb = len(answer.content) / 1_024
    print(f"{count:4} patterns: page {warm:6.1f} ms, first time {cold:6.1f} ms, {size_kb:.0f} KB")
    pictures = re.findall(r'src="(/patterns/[^"]+)"', answer.content.decode())
    for words in ("drawn", "kept "):
        spent = [milliseconds(client, address)[0] for address in pictures]
        print(
            f"     pictures {words}: {statistics.median(spent):5.1f} ms each,"
            f" {max(spent):5.1f} at the most, {sum(spent):6.0f} ms all {len(spent)}"
        )
    return warm


def main() -> None:
    with tempfile.TemporaryDirectory() as folder:
        prepare(folder)
        from django.contrib.auth.models import User
        from django.test import Client

        from tests.factories import make_workshop

        make_workshop()
        client = Client()
        client.force_login(
            User.objects.create(username="maker"), "django.contrib.auth.backends.ModelBackend"
        )
        add_patterns(range(FEW))
        few = measure(client)
        add_patterns(range(FEW, MANY))
        many = measure(client)
    print(f"{MANY} patterns take {many / few:.1f} times as long as {FEW}; the target is 300 ms")


if __name__ == "__main__":
    main()
