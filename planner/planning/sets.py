"""Matched sets: bracelets whose thread of each shade comes from one dye lot."""

from collections.abc import Iterable, Mapping, Sequence
from dataclasses import dataclass, replace

from planner.cutting import CutPiece, Group, LotResult
from planner.planning.demand import Bracelet

SET_KEY = "set "
"""Before the key of a set's group: the keys of bracelets are numbers."""


def set_key(name: str) -> str:
    """Give the key of the set of a name: capitals and blanks do not make two sets of one.

    Parameters
    ----------
    name : as the orders give it.

    Returns
    -------
    The key; empty where the name is blank.
    """
    words = " ".join(name.split()).casefold()
    return SET_KEY + words if words else ""


def sets_of(bracelets: Iterable[Bracelet]) -> dict[str, str]:
    """Tell which bracelets are in a set.

    Parameters
    ----------
    bracelets : all of a plan.

    Returns
    -------
    The key of a bracelet's group to the key of its set; bracelets of none are left out.
    """
    keys = ((str(b.number), set_key(b.matched_set)) for b in bracelets if b.matched_set)
    return {key: of_set for key, of_set in keys if of_set}


@dataclass(frozen=True)
class Together:
    """The groups of one shade with those of each set as one, and the way back.

    `members` holds, for every set, the key of the bracelet's group and the piece's index in it, in
    the order of the set's pieces.
    """

    groups: list[Group]
    members: Mapping[str, list[tuple[str, int]]]

    @classmethod
    def of(cls, groups: Sequence[Group], sets: Mapping[str, str]) -> "Together":
        """Put the bracelets of a set together, in the place of the first.

        Parameters
        ----------
        groups : one a bracelet.
        sets : as `sets_of` gives them.

        Returns
        -------
        Groups, one a set or a bracelet of none.
        """
        if not sets:
            return cls(list(groups), {})
        pieces: dict[str, list[int]] = {}
        members: dict[str, list[tuple[str, int]]] = {}
        for group in groups:
            key = sets.get(group.key, group.key)
            pieces.setdefault(key, []).extend(group.pieces_mm)
            if key != group.key:
                indexes = range(len(group.pieces_mm))
                members.setdefault(key, []).extend((group.key, index) for index in indexes)
        return cls([Group(key, tuple(found)) for key, found in pieces.items()], members)

    def apart(self, result: LotResult) -> LotResult:
        """Name the bracelets again, in the cuts and where there is no thread.

        Parameters
        ----------
        result : for the groups of this.

        Returns
        -------
        The same with the keys and indexes of bracelets.
        """
        if not self.members:
            return result
        opened = tuple(
            replace(one, pieces=tuple(self._of_bracelet(piece) for piece in one.pieces))
            for one in result.opened
        )
        unplaced: list[str] = []
        for key in result.unplaced:
            unplaced += dict.fromkeys(owner for owner, _ in self.members.get(key, [(key, 0)]))
        return replace(result, opened=opened, unplaced=tuple(unplaced))

    def _of_bracelet(self, piece: CutPiece) -> CutPiece:
        if piece.group_key not in self.members:
            return piece
        key, index = self.members[piece.group_key][piece.index]
        return CutPiece(key, index, piece.length_mm)
