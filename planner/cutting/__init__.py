"""Cutting plans: which stock to open, what to buy, and what to cut from each piece.

Pure: neither Django nor a models module is imported here.
"""

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
    "Offer",
    "Opened",
    "Problem",
    "PutUp",
    "Result",
    "StockPiece",
    "lower_bounds",
    "read_problem",
    "solve",
    "solve_with_lots",
]
