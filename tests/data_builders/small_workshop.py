"""A small workshop to read order lists against."""

from datetime import date

from planner.order_list.catalogue import Catalogue, Choice, PatternChoice, SizeChoice

TODAY = date(2026, 11, 1)
MARKET = date(2026, 12, 5)

CATALOGUE = Catalogue(
    patterns=(
        PatternChoice(1, "Wave", (Choice(11, "Dawn"), Choice(12, "Dusk"))),
        PatternChoice(2, "Café chevron", (Choice(21, "Noon"),)),
        PatternChoice(3, "Rope walk", (Choice(31, "Tar"), Choice(32, "Chalk")), 32),
        PatternChoice(4, "Bare", ()),
        PatternChoice(5, "موج", (Choice(51, "ليل"),)),
    ),
    sizes=(
        SizeChoice(1, "Small", 130, 150),
        SizeChoice(2, "Medium", 150, 170),
        SizeChoice(3, "Large", 170, 191),
    ),
    endings=(Choice(1, "Plaited ties"), Choice(2, "Loop and button")),
    default_ending_key=1,
)


def cells(**changes: str) -> dict[str, str]:
    """A row of the grid that is good but for the changes."""
    return {"for_whom": "Anna", "pattern": "Wave", "colourway": "Dawn", "size": "Medium"} | changes
