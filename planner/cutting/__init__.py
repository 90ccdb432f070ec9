"""Cutting plans: which stock to open, what to buy, and what to cut from each piece.

Pure: neither Django nor a models module is imported here.
"""

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
    "CuttingError",
    "Demand",
    "Problem",
    "PutUp",
    "Result",
    "StockPiece",
    "lower_bounds",
    "read_problem",
    "solve",
]
