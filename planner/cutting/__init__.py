"""Cutting plans: which stock to open, what to buy, and what to cut from each piece.

Pure: neither Django nor a models module is imported here.
"""

from planner.cutting.from_scraps import make_from_scraps, scraps_words
from planner.cutting.from_scraps_problem import Makeable, ScrapsProblem, ScrapsResult
from planner.cutting.lot_problem import (
    CutPiece,
    Group,
    Lot,
    LotResult,
    LotStock,
    Offer,
    Opened,
)
from planner.cutting.lots import solve_with_lots
from planner.cutting.problem import (
    Cut,
    CuttingError,
    Demand,
    Problem,
    PutUp,
    Result,
    StockPiece,
)
from planner.cutting.problem_file import read_problem
from planner.cutting.solving import lower_bounds, solve

__all__ = [
    "Cut",
    "CutPiece",
    "CuttingError",
    "Demand",
    "Group",
    "Lot",
    "LotResult",
    "LotStock",
    "Makeable",
    "Offer",
    "Opened",
    "Problem",
    "PutUp",
    "Result",
    "ScrapsProblem",
    "ScrapsResult",
    "StockPiece",
    "lower_bounds",
    "make_from_scraps",
    "read_problem",
    "scraps_words",
    "solve",
    "solve_with_lots",
]
