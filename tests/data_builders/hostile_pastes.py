"""Pastes into the box of rows that are wrong in every way that was thought of."""

import random
from collections.abc import Iterator


def hostile_pastes(count: int = 800, seed: int = 2026) -> Iterator[str]:
    """The same pastes every time: noise, huge counts, deep brackets, long lines, odd letters."""
    chance = random.Random(seed)
    words = (
        "f",
        "b",
        "fb",
        "bf",
        "x2",
        "3f",
        "(",
        ")",
        "row 7:",
        "999999999f",
        "x" * 300,
        "ß",
        "→",
    )
    for number in range(count):
        kind = number % 6
        if kind == 0:
            yield "".join(chr(chance.randrange(1, 0xD7FF)) for _ in range(chance.randrange(400)))
        elif kind == 1:
            yield chance.choice(("(", "9", "9 ", "x", "f", ")", "-", "\0")) * chance.randrange(
                1, 9_000
            )
        elif kind == 2:
            yield " ".join(chance.choice(words) for _ in range(chance.randrange(1, 200)))
        elif kind == 3:
            yield "\n".join(chance.choice(words) for _ in range(chance.randrange(1, 900)))
        elif kind == 4:
            yield "\n".join(["30(30(30(30(f))))", "x400"] * chance.randrange(1, 40))
        else:
            yield chance.choice(words) * chance.randrange(1, 3_000)
