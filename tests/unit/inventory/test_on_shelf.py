from decimal import Decimal

from inventory.on_shelf import reckoned_length


def test_reckoned_length_rounds_down() -> None:
    assert reckoned_length(8_000, Decimal("0.02")) == 7_840
    assert reckoned_length(7_999, Decimal("0.02")) == 7_839
    assert reckoned_length(8_000, Decimal(0)) == 8_000
