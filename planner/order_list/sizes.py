"""A size given by its name, or by the wrist it has to fit."""

import re
from fractions import Fraction

from inventory.measures import MeasureError, format_length, parse_length
from planner.order_list.catalogue import Names, SizeChoice
from planner.order_list.cells import listed, shown
from planner.order_list.problems import CellProblem

BARE_WRIST_CM = (10, 22)
"""The numbers without a unit that are taken for a wrist in centimetres, both included."""

_BARE = re.compile(r"[0-9]+(?:[.,][0-9]+)?")
_LIKE_A_LENGTH = re.compile(r"[-−]?[0-9½¼¾⅛⅜⅝⅞⅓⅔.,]")


class Sizes:
    """The sizes on offer, to look up what people type.

    Parameters
    ----------
    choices
        The sizes.
    """

    def __init__(self, choices: tuple[SizeChoice, ...]) -> None:
        self._choices = tuple(sorted(choices, key=lambda size: (size.wrist_min_mm, size.name)))
        self._names = Names(choices)

    def read(self, text: str) -> tuple[int, str | None]:
        """Find a size.

        Parameters
        ----------
        text
            Its name, or a wrist: ``16 cm``, ``6 1/2 in``; a bare number from 10 to 22 is in cm.

        Returns
        -------
        tuple of int and (str or None)
            The size's key; and for a wrist a sentence that says how it was read.

        Raises
        ------
        CellProblem
            When there is no such size, or no one size for the wrist.
        """
        if not self._choices:
            raise CellProblem("there are no sizes yet. Add one first.")
        found = self._names.find(text)
        if len(found) == 1:
            return found[0][0], None
        if found:
            raise _ambiguous(text, [name for _, name in found])
        wrist_mm = self._wrist(text)
        if wrist_mm is None:
            raise self._unknown(text)
        size = self._for_wrist(text, wrist_mm)
        unit = " cm" if _BARE.fullmatch(text) else ""
        return size.key, f"a wrist of {text}{unit} was read as size {size.name}."

    def _wrist(self, text: str) -> Fraction | None:
        if not _LIKE_A_LENGTH.match(text):
            return None
        try:
            length = parse_length(text, default_unit="cm")
        except MeasureError:
            return None
        if _BARE.fullmatch(text) and not BARE_WRIST_CM[0] * 10 <= length <= BARE_WRIST_CM[1] * 10:
            raise CellProblem(
                f"there is no size called {shown(text)}, and a wrist needs its unit here: "
                "write it like 165 mm, 16.5 cm or 6 1/2 in."
            )
        return length

    def _for_wrist(self, text: str, wrist_mm: Fraction) -> SizeChoice:
        fitting = [s for s in self._choices if s.wrist_min_mm <= wrist_mm < s.wrist_max_mm]
        # The largest wrist of all has no next size to fall to.
        fitting = fitting or [size for size in self._choices if size.wrist_max_mm == wrist_mm]
        if not fitting:
            raise self._no_fit(text, wrist_mm)
        if len(fitting) > 1:
            names = listed([size.name for size in fitting])
            raise CellProblem(f"a wrist of {shown(text)} fits {names}. Write which.")
        return fitting[0]

    def _no_fit(self, text: str, wrist_mm: Fraction) -> CellProblem:
        def distance(size: SizeChoice) -> Fraction:
            return max(size.wrist_min_mm - wrist_mm, wrist_mm - size.wrist_max_mm)

        near = min(self._choices, key=distance)
        least, most = format_length(near.wrist_min_mm), format_length(near.wrist_max_mm)
        return CellProblem(
            f"no size fits a wrist of {shown(text)}. The nearest is {near.name}, {least} to {most}.",
            near.name,
        )

    def _unknown(self, text: str) -> CellProblem:
        near = self._names.nearest(text)
        if near is not None:
            return CellProblem(f"no size called {shown(text)}. Did you mean {near}?", near)
        names = listed([size.name for size in self._choices], most=8)
        return CellProblem(
            f"no size called {shown(text)}. Write {names}, or a wrist such as 16 cm."
        )


def _ambiguous(text: str, names: list[str]) -> CellProblem:
    return CellProblem(f"{shown(text)} may be {listed(names)}. Write the name exactly.")
