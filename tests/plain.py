"""Builders of plain core data for tests: no database."""

from decimal import Decimal

from patterns.cut_lengths import CutRule, Ending
from patterns.geometry import Gauge
from patterns.pattern_file import read_pattern
from planner.planning.demand import Kind
from planner.planning.netting import ShelfThread, ThreadOffer

TIES = Ending("Plaited ties", "straight", 60, 60, 1.25, 30, 90, 0, 0, 0)


def make_kind(
    strands: str = "A A B B C C",
    *,
    rows: tuple[str, ...] = (),
    finish: str = "exact",
    length_mm: int = 150,
    ending: Ending = TIES,
) -> Kind:
    """All-forward unless rows are given; slots take the shades 1, 2, 3, ... in their order."""
    slots = strands.split()
    if not rows:
        rows = (" ".join("f" * (len(slots) // 2)), " ".join("f" * ((len(slots) - 1) // 2)))
    text = (
        f'name = "Plain"\ntechnique = "diagonal"\nstrands = "{strands}"\n'
        f'finish = "{finish}"\nrows = """\n' + "\n".join(rows) + '\n"""\n'
    )
    return Kind(
        pattern=read_pattern(text),
        pattern_text=text,
        colourway_name="Plain",
        size_name="Medium",
        is_child=False,
        has_metal_or_button=False,
        shades=tuple((slot, number) for number, slot in enumerate(sorted(set(slots)), start=1)),
        knotted_length_mm=length_mm,
        gauge=Gauge(),
        ending=ending,
        rule=CutRule(0.1, 10),
    )


def make_thread(number: int, length_mm: int, *, shade: int = 1, lot: int = 1) -> ShelfThread:
    return ShelfThread(number, shade, lot, f"L{lot}", "remnant", length_mm, length_mm)


def make_offer(key: int = 1, length_mm: int = 8_000, price: str = "1.20") -> ThreadOffer:
    return ThreadOffer(key, "Quay Threads", "skein", length_mm, length_mm, Decimal(price))
