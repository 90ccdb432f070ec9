"""What thread on the shelf is trusted to hold."""

from decimal import ROUND_DOWN, Decimal


def reckoned_length(length_mm: int, short_measure_share: Decimal) -> int:
    """Return what an unmeasured skein is trusted to hold.

    Parameters
    ----------
    length_mm : nominal length [mm].
    short_measure_share : share by which skeins may run short, 0 to 0.5.

    Returns
    -------
    Length [mm], rounded down.
    """
    exact = Decimal(length_mm) * (1 - short_measure_share)
    return int(exact.quantize(Decimal(1), rounding=ROUND_DOWN))
