"""Cutting problems by the seed: for the tests of the solver and for its benchmark.

Skeins of 8 m are reckoned at 7,840 mm (2 % short measure). The ranges are those of bracelets:
single strands of 350 to 1,600 mm, folded pairs of 1.2 to 3.3 m, remnants of 0.4 to 7.5 m.
"""

from collections import Counter
from decimal import Decimal
from random import Random

from planner.cutting import Demand, Problem, PutUp, StockPiece

SKEIN = PutUp(8000, Decimal("1.20"), short_measure_share=Decimal("0.02"))
MOST_REMNANTS = 60
MOST_REMNANTS_BESIDE_FOLDED = 30


def realistic_shade(random: Random, *, remnants: int | None = None, step_mm: int = 10) -> Problem:
    """10 to 90 lengths of 350 to 1,600 mm, 40 to 2,500 pieces; None for 0 to 60 remnants."""
    distinct = random.randint(10, 90)
    pieces = max(distinct, round(40 * (2_500 / 40) ** random.random()))
    lengths = random.sample(range(350, 1_601, step_mm), distinct)
    if remnants is None:
        remnants = random.randint(0, MOST_REMNANTS)
    return _problem(random, lengths, pieces, remnants)


def folded_starts(random: Random, *, remnants: int | None = None, step_mm: int = 10) -> Problem:
    """30 to 230 pieces of 1.2 to 3.3 m; None for no remnants in half of them, up to 30 in others."""
    pieces = round(30 * (230 / 30) ** random.random())
    lengths = random.sample(range(1_200, 3_301, step_mm), random.randint(5, min(90, pieces)))
    if remnants is None:
        remnants = random.choice([0, random.randint(1, MOST_REMNANTS_BESIDE_FOLDED)])
    return _problem(random, lengths, pieces, remnants)


def triplets(random: Random, bins: int) -> Problem:
    """Three pieces fill each of so many bins of 1,000 exactly: the optimum by construction.

    The rule of E. Falkenauer, Journal of Heuristics 2 (1996) 5-30 (from memory): a in 380..490,
    b in 250..floor((1000 - a) / 2), c the rest.
    """
    pieces: Counter[int] = Counter()
    for _ in range(bins):
        first = random.randint(380, 490)
        second = random.randint(250, (1_000 - first) // 2)
        pieces.update([first, second, 1_000 - first - second])
    return Problem(_demand(pieces), (), (PutUp(1_000, Decimal(1)),))


def small_with_remnants(random: Random) -> Problem:
    """At most 12 pieces, 4 remnants and 2 put-ups, at times in packs: small enough for any solver."""
    pieces = Counter(random.randrange(200, 900, 10) for _ in range(random.randint(3, 12)))
    stock = tuple(StockPiece(random.randint(250, 1_800), 1) for _ in range(random.randint(0, 4)))
    buy = []
    for _ in range(random.randint(1, 2)):
        packs = random.choice([(1, 1, 1), (1, 1, 1), (3, 1, 1), (2, 2, 1), (1, 2, 2)])
        price = Decimal(random.randrange(50, 400, 5) * packs[0]) / 100
        buy.append(PutUp(random.randrange(900, 2_400, 10), price, *packs))
    return Problem(_demand(pieces), stock, tuple(buy))


def _problem(random: Random, lengths: list[int], pieces: int, remnants: int) -> Problem:
    counts = Counter(lengths)
    counts.update(random.choice(lengths) for _ in range(pieces - len(lengths)))
    stock = tuple(StockPiece(random.randint(400, 7_500), 1) for _ in range(remnants))
    return Problem(_demand(counts), stock, (SKEIN,))


def _demand(counts: Counter[int]) -> tuple[Demand, ...]:
    return tuple(Demand(length, count) for length, count in counts.items())
