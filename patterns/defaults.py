"""Endings and sizes that a new workshop starts with; all of them can be edited."""

from dataclasses import dataclass

from patterns.cut_lengths import Ending

# Common practice, no published source: take-up of a three-part plait 1.2 to 1.3, closing
# knot about 30 mm, grip 80 to 100 mm, loop of a folded start 40 to 60 mm. The finished
# ties and the start of a single strand are this project's own choice.
DEFAULT_ENDINGS: tuple[Ending, ...] = (
    Ending(
        name="Loose ties",
        start="straight",
        start_tie_mm=90,
        end_tie_mm=90,
        take_up=1.0,
        closing_knot_mm=30,
        grip_mm=80,
        fold_loop_mm=0,
        single_start_mm=0,
        sliding_piece_mm=0,
    ),
    Ending(
        name="Plaited ties",
        start="straight",
        start_tie_mm=72,
        end_tie_mm=72,
        take_up=1.25,
        closing_knot_mm=30,
        grip_mm=80,
        fold_loop_mm=0,
        single_start_mm=0,
        sliding_piece_mm=0,
    ),
    Ending(
        name="Folded start, plaited end",
        start="folded",
        start_tie_mm=0,
        end_tie_mm=100,
        take_up=1.25,
        closing_knot_mm=30,
        grip_mm=90,
        fold_loop_mm=50,
        single_start_mm=80,
        sliding_piece_mm=0,
    ),
    Ending(
        name="Loop and button",
        start="folded",
        start_tie_mm=0,
        end_tie_mm=60,
        take_up=1.0,
        closing_knot_mm=30,
        grip_mm=90,
        fold_loop_mm=60,
        single_start_mm=80,
        sliding_piece_mm=0,
    ),
    Ending(
        name="Sliding closure",
        start="straight",
        start_tie_mm=120,
        end_tie_mm=120,
        take_up=1.25,
        closing_knot_mm=30,
        grip_mm=80,
        fold_loop_mm=0,
        single_start_mm=0,
        sliding_piece_mm=400,
    ),
)

# The closure of each ending decides how the knotted length follows from the wrist.
_TIED_ENDINGS = ("Loose ties", "Plaited ties", "Folded start, plaited end", "Sliding closure")
BUTTONED_ENDINGS = ("Loop and button",)
# Common practice, no source: a tied band is 10 to 25 mm shorter than the wrist. Over a
# range of 15 mm, the smallest wrist less 10 mm meets both ends exactly.
_SHORTER_THAN_SMALLEST_MM = 10
# Common practice, no source: a buttoned band is the wrist and 5 to 15 mm. A range of 15 mm
# cannot meet both ends: we choose never too tight, so the smallest third has 15 to 20 mm.
_LONGER_THAN_LARGEST_MM = 5
_RANGE_MM = 15


@dataclass(frozen=True)
class SizeDefault:
    """A size: a range of wrists and the knotted length for each ending.

    Parameters
    ----------
    name
        What it is called.
    wrist_min_mm, wrist_max_mm
        Girth of the wrists it fits [mm].
    is_child
        Whether tags of this size carry the cautions for children.
    knotted_length_mm
        Pairs of an ending's name and a knotted length [mm].
    """

    name: str
    wrist_min_mm: int
    wrist_max_mm: int
    is_child: bool
    knotted_length_mm: tuple[tuple[str, int], ...]

    def knotted_length_for(self, ending: str) -> int:
        """Return the knotted length for an ending [mm].

        Raises
        ------
        KeyError
            When the size has no length for that ending.
        """
        return dict(self.knotted_length_mm)[ending]


def _size(name: str, wrist_min_mm: int, *, is_child: bool = False) -> SizeDefault:
    wrist_max_mm = wrist_min_mm + _RANGE_MM
    tied_mm = wrist_min_mm - _SHORTER_THAN_SMALLEST_MM
    buttoned_mm = wrist_max_mm + _LONGER_THAN_LARGEST_MM
    return SizeDefault(
        name=name,
        wrist_min_mm=wrist_min_mm,
        wrist_max_mm=wrist_max_mm,
        is_child=is_child,
        knotted_length_mm=(
            *((ending, tied_mm) for ending in _TIED_ENDINGS),
            *((ending, buttoned_mm) for ending in BUTTONED_ENDINGS),
        ),
    )


DEFAULT_SIZES: tuple[SizeDefault, ...] = (
    _size("Small child", 105, is_child=True),
    _size("Child", 120, is_child=True),
    _size("Small", 135),
    _size("Medium", 150),
    _size("Large", 165),
    _size("Extra large", 180),
)
