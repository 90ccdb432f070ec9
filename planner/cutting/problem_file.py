"""Reading a cutting problem from JSON, for scripts and checks."""

import json
import re
from collections.abc import Callable
from decimal import Decimal
from typing import Any, NoReturn, TypeVar

from planner.cutting.problem import CuttingError, Demand, Problem, PutUp, StockPiece

MAXIMUM_BYTES = 16_000_000
LONGEST_NAME = 200
_PRICE = re.compile(r"[0-9]{1,12}(\.[0-9]{1,12})?")
_Part = TypeVar("_Part")


def read_problem(content: bytes) -> Problem:
    """Read one problem.

    Parameters
    ----------
    content
        JSON in UTF-8: ``{"demand": [{"length_mm", "count"}], "stock": [{"length_mm", "count"}],
        "buy": [{"length_mm", "price"}]}``. Stock and buy may be left out, other keys are ignored,
        a price is a number or a text like "3.50". Stock may have a "lot"; what is bought a
        "pack_size" (the price is then that of a pack), "minimum_packs", "pack_step", a "supplier"
        and a "short_measure_share".

    Returns
    -------
    Problem
        The problem.

    Raises
    ------
    CuttingError
        When the content is anything else; the message says where.
    """
    if len(content) > MAXIMUM_BYTES:
        raise CuttingError(f"The file is too large: at most {MAXIMUM_BYTES // 1_000_000} MB.")
    data = _load(content)
    if not isinstance(data, dict):
        raise CuttingError('The file must hold one object with "demand", "stock" and "buy".')
    if "demand" not in data:
        raise CuttingError('The file has no "demand": what is to be cut?')
    return Problem(
        demand=_parts(data, "demand", lambda row: Demand(row["length_mm"], row["count"])),
        stock=_parts(data, "stock", _stock_piece),
        buy=_parts(data, "buy", _put_up),
    )


def _stock_piece(row: dict[str, Any]) -> StockPiece:
    return StockPiece(row["length_mm"], row["count"], _name(row, "lot"))


def _put_up(row: dict[str, Any]) -> PutUp:
    return PutUp(
        row["length_mm"],
        _price(row["price"]),
        row.get("pack_size", 1),
        row.get("minimum_packs", 1),
        row.get("pack_step", 1),
        _name(row, "supplier"),
        _price(row.get("short_measure_share", 0)),
    )


def _name(row: dict[str, Any], key: str) -> str:
    name = row.get(key, "")
    if not isinstance(name, str) or len(name) > LONGEST_NAME:
        raise CuttingError(f'"{key}" must be text of at most {LONGEST_NAME} characters.')
    return name


def _load(content: bytes) -> object:
    try:
        return json.loads(
            content.decode("utf-8-sig"), parse_float=Decimal, parse_constant=_refuse_constant
        )
    except CuttingError:
        raise
    except UnicodeDecodeError as error:
        raise CuttingError("The file is not text in UTF-8.") from error
    except RecursionError as error:
        raise CuttingError("The file is nested too deeply.") from error
    except json.JSONDecodeError as error:
        raise CuttingError(f"The file is not JSON: see line {error.lineno}.") from error
    except (ValueError, ArithmeticError) as error:  # a number of thousands of digits
        raise CuttingError("The file holds a number that is too long.") from error


def _refuse_constant(name: str) -> NoReturn:
    raise CuttingError(f"The file holds {name}, which is not a number.")


def _parts(
    data: dict[str, Any], key: str, build: Callable[[dict[str, Any]], _Part]
) -> tuple[_Part, ...]:
    rows = data.get(key, [])
    if not isinstance(rows, list):
        raise CuttingError(f'"{key}" must be a list.')
    parts = []
    for number, row in enumerate(rows, start=1):
        if not isinstance(row, dict):
            raise CuttingError(f'"{key}", item {number}: must be an object.')
        try:
            parts.append(build(row))
        except KeyError as error:
            raise CuttingError(f'"{key}", item {number}: "{error.args[0]}" is missing.') from error
        except CuttingError as error:
            raise CuttingError(f'"{key}", item {number}: {error}') from error
    return tuple(parts)


def _price(value: Any) -> Any:
    """Turn a number or a text into Decimal; anything else is left for `PutUp` to refuse."""
    if isinstance(value, int) and not isinstance(value, bool) and abs(value) < 10**12:
        return Decimal(value)
    if isinstance(value, str) and _PRICE.fullmatch(value):
        return Decimal(value)
    return value
