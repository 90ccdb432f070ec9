"""Which of the eight masks a square code gets: the one whose pattern misleads a reader least.

References
----------
ISO/IEC 18004, Information technology: QR code bar code symbology specification, data masking:
the eight masks and the penalties by which one is chosen.
"""

import numpy as np
import segno
from numpy.typing import NDArray

Modules = NDArray[np.bool_]

MASKS = 8
LONG_RUN, RUN_POINTS, BLOCK_POINTS, FINDER_POINTS, SHARE_POINTS = 5, 3, 3, 40, 10
_FINDER = (1, 0, 1, 1, 1, 0, 1)
_LIGHT_BESIDE = 4


def symbol_of(text: str) -> Modules:
    """Encode a text, dark modules True, with the mask that has the least penalty.

    Raises
    ------
    ValueError
        When the text does not fit any code.

    Notes
    -----
    The encoder can choose the mask itself, module by module, which takes as long as drawing half a
    tag. Two masks differ in the same modules whatever the text, so one symbol and a table for
    its size give all eight.
    """
    first = _made(text, 0)
    symbols = _modules(first) ^ _differences(int(first.version), str(first.error), text)
    best: Modules = symbols[int(np.argmin(penalties(symbols)))]
    return best


def _made(text: str, mask: int) -> segno.QRCode:
    return segno.make_qr(text, error="L", encoding="utf-8", boost_error=True, mask=mask)


def _modules(symbol: segno.QRCode) -> Modules:
    return np.array([list(row) for row in symbol.matrix], dtype=np.bool_)


class _Differences:
    """Where each mask differs from the first, by size and level of correction."""

    def __init__(self) -> None:
        self.found: dict[tuple[int, str], Modules] = {}

    def __call__(self, version: int, error: str, text: str) -> Modules:
        if (version, error) not in self.found:
            symbols = np.array([_modules(_made(text, mask)) for mask in range(MASKS)])
            self.found[version, error] = symbols ^ symbols[0]
        return self.found[version, error]


_differences = _Differences()


def penalties(symbols: Modules) -> NDArray[np.int64]:
    """Add up the penalty of each symbol.

    Parameters
    ----------
    symbols
        Modules by symbol, row and column.
    """
    turned = symbols.transpose(0, 2, 1)
    found = _of_rows(symbols) + _of_rows(turned) + BLOCK_POINTS * _blocks(symbols)
    share = symbols.mean(axis=(1, 2)) * 100
    steps: NDArray[np.int64] = found + SHARE_POINTS * (np.abs(share - 50) / 5).astype(np.int64)
    return steps


def _of_rows(symbols: Modules) -> NDArray[np.int64]:
    """Long runs of one colour, and what looks like a finder pattern, in all rows."""
    same = symbols[:, :, 1:] == symbols[:, :, :-1]
    width = same.shape[2] - LONG_RUN + 2
    long = np.logical_and.reduce([same[:, :, k : k + width] for k in range(LONG_RUN - 1)])
    begins = long.copy()
    begins[:, :, 1:] &= ~long[:, :, :-1]
    runs = long.sum(axis=(1, 2)) + (RUN_POINTS - 1) * begins.sum(axis=(1, 2))
    finders: NDArray[np.int64] = runs + FINDER_POINTS * _finders(symbols)
    return finders


def _finders(symbols: Modules) -> NDArray[np.int64]:
    """Dark and light as 1:1:3:1:1 with light before or behind; outside all is light."""
    padded = np.pad(symbols, ((0, 0), (0, 0), (_LIGHT_BESIDE, _LIGHT_BESIDE)))
    places = symbols.shape[2] - len(_FINDER) + 1

    def at(offset: int) -> Modules:
        return padded[:, :, _LIGHT_BESIDE + offset : _LIGHT_BESIDE + offset + places]

    looks = np.logical_and.reduce([at(k) == bool(dark) for k, dark in enumerate(_FINDER)])
    before = np.logical_or.reduce([at(-k) for k in range(1, _LIGHT_BESIDE + 1)])
    behind = np.logical_or.reduce([at(len(_FINDER) + k) for k in range(_LIGHT_BESIDE)])
    count: NDArray[np.int64] = (looks & ~(before & behind)).sum(axis=(1, 2))
    return count


def _blocks(symbols: Modules) -> NDArray[np.int64]:
    """Squares of two by two modules of one colour."""
    level = symbols[:, :, 1:] == symbols[:, :, :-1]
    upright = symbols[:, 1:, 1:] == symbols[:, :-1, 1:]
    count: NDArray[np.int64] = (level[:, 1:] & level[:, :-1] & upright).sum(axis=(1, 2))
    return count
