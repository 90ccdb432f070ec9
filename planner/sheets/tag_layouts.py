"""Sizes of tags as a table of data, and how tags of several sizes share pages.

All coordinates and heights are points.
"""

from collections.abc import Sequence
from dataclasses import dataclass

from planner.sheets.codes import code_side
from planner.sheets.contents import Tag
from planner.sheets.fonts import REGULAR, wrapped
from planner.sheets.paper import Paper, millimetres

SIDE_PT = millimetres(8)
TOP_PT = millimetres(8)
FOOT_PT = millimetres(14)
PADDING_PT = 9.0
HEADER_PT = 55.0
PICTURE_PT = 24.0
TABLE_HEAD_PT = 12.0
LEAST_ROW_PT = 9.9
MOST_ROW_PT = 14.5
FINISH_PT = 15.0
SMALL_SIZE_PT = 7.0
SMALL_ROW_PT = 8.4
_MOST_SMALL_LINES = 8
FOLD_WORDS = "Measure the fold from the end of the first strand named."
_WHOLE_PAGE = 12


class TagError(ValueError):
    """A tag with more on it than a page can hold."""


@dataclass(frozen=True)
class TagLayout:
    """One size of tag.

    Parameters
    ----------
    key
        Its name.
    columns
        Tags side by side.
    twelfths
        Height as twelfths of the page's height between the margins.
    piece_columns
        Lists of pieces side by side within the tag.
    """

    key: str
    columns: int
    twelfths: int
    piece_columns: int


TAG_LAYOUTS = (
    TagLayout("compact", columns=2, twelfths=3, piece_columns=1),
    TagLayout("medium", columns=2, twelfths=4, piece_columns=1),
    TagLayout("tall", columns=2, twelfths=6, piece_columns=1),
    TagLayout("wide", columns=1, twelfths=6, piece_columns=2),
    TagLayout("full", columns=1, twelfths=12, piece_columns=2),
)


@dataclass(frozen=True)
class TagRow:
    """Tags side by side, cut apart with one straight cut above and below."""

    tags: tuple[Tag, ...]
    layout: TagLayout

    @property
    def height_share(self) -> float:
        """Height as a share of the page's height between the margins."""
        return self.layout.twelfths / _WHOLE_PAGE


def tag_width(layout: TagLayout, paper: Paper) -> float:
    """Width of a tag from cut line to cut line [pt]."""
    return (paper.width_pt - 2 * SIDE_PT) / layout.columns


def tags_height(paper: Paper) -> float:
    """Height of a page between the outermost cut lines [pt]."""
    return paper.height_pt - TOP_PT - FOOT_PT


def header_height(code_side_pt: float) -> float:
    """Height of a tag's head: its words, or its code where that is higher [pt]."""
    return max(HEADER_PT, code_side_pt - PADDING_PT / 2)


def small_print(tag: Tag, width: float) -> list[str]:
    """Break into lines what stands at a tag's foot: how to fold, and the cautions."""
    is_folded = any(piece.fold_mm is not None for piece in tag.pieces)
    words = " ".join(([FOLD_WORDS] if is_folded else []) + list(tag.cautions))
    return wrapped(words, REGULAR, SMALL_SIZE_PT, width, _MOST_SMALL_LINES)


def least_height(tag: Tag, layout: TagLayout, paper: Paper) -> float:
    """Height that a tag needs in a layout, its rows at their closest [pt]."""
    width = tag_width(layout, paper) - 2 * PADDING_PT
    rows = -(-len(tag.pieces) // layout.piece_columns)
    small_lines = len(small_print(tag, width))
    return (
        2 * PADDING_PT
        + header_height(code_side(tag.code_text))
        + PICTURE_PT
        + TABLE_HEAD_PT
        + rows * LEAST_ROW_PT
        + FINISH_PT
        + (small_lines * SMALL_ROW_PT + 3 if small_lines else 0)
    )


def layout_for(tag: Tag, paper: Paper) -> TagLayout:
    """Choose the smallest layout that holds everything on a tag.

    Raises
    ------
    TagError
        When even a whole page is too small.
    """
    for layout in TAG_LAYOUTS:
        room = tags_height(paper) * layout.twelfths / _WHOLE_PAGE
        if least_height(tag, layout, paper) <= room:
            return layout
    raise TagError(f"Tag {tag.number} has {len(tag.pieces)} pieces: more than a page holds.")


def arrange(tags: Sequence[Tag], paper: Paper) -> list[list[TagRow]]:
    """Put tags on pages in their order, in rows as high as their highest tag.

    Parameters
    ----------
    tags
        In the order of their numbers.
    paper
        The format of the pages.

    Returns
    -------
    list of list of TagRow
        The rows of each page, from the top.
    """
    pages: list[list[TagRow]] = []
    used = _WHOLE_PAGE
    for row in _rows(tags, paper):
        if used + row.layout.twelfths > _WHOLE_PAGE:
            pages.append([])
            used = 0
        pages[-1].append(row)
        used += row.layout.twelfths
    return pages


def _rows(tags: Sequence[Tag], paper: Paper) -> list[TagRow]:
    rows: list[TagRow] = []
    waiting: list[Tag] = []
    layout = TAG_LAYOUTS[0]
    for tag in tags:
        own = layout_for(tag, paper)
        if waiting and own.columns != layout.columns:
            rows.append(TagRow(tuple(waiting), layout))
            waiting = []
        layout = max(layout, own, key=lambda each: each.twelfths) if waiting else own
        waiting.append(tag)
        if len(waiting) == layout.columns:
            rows.append(TagRow(tuple(waiting), layout))
            waiting = []
    if waiting:
        rows.append(TagRow(tuple(waiting), layout))
    return rows
