"""What so many put-ups cost where they come in packs."""

from collections.abc import Sequence
from dataclasses import dataclass


@dataclass(frozen=True)
class SoldAs:
    """A put-up that can be bought.

    Parameters
    ----------
    length_mm
        Its length [mm].
    size
        Its length [cells].
    price
        The price of a pack [smallest units of money].
    pack_size
        How many come in a pack.
    minimum_packs
        The fewest packs taken, where any are.
    pack_step
        Packs are taken in multiples of it.
    number
        Which of the problem's put-ups it is, from 0.
    """

    length_mm: int
    size: int
    price: int
    pack_size: int = 1
    minimum_packs: int = 1
    pack_step: int = 1
    number: int = 0

    @property
    def is_single(self) -> bool:
        """Whether any number can be bought."""
        return self.pack_size == self.minimum_packs == self.pack_step == 1

    @property
    def bundle(self) -> int:
        """How many single put-ups come with every step."""
        return self.pack_size * self.pack_step

    @property
    def bundle_price(self) -> int:
        """What a step costs [smallest units of money]."""
        return self.price * self.pack_step

    @property
    def fewest_bundles(self) -> int:
        """How many steps have to be taken, where any are."""
        return -(-self.minimum_packs // self.pack_step)

    @property
    def price_each(self) -> float:
        """What a single put-up costs where the packs are used up [smallest units of money]."""
        return self.price / self.pack_size

    def bought_for(self, opened: int) -> int:
        """Say how many have to be bought so that so many can be opened.

        Parameters
        ----------
        opened
            How many are needed.

        Returns
        -------
        int
            The fewest that are sold, at least `opened`; 0 for 0.
        """
        if opened <= 0:
            return 0
        return max(self.fewest_bundles, -(-opened // self.bundle)) * self.bundle

    def cost_of(self, bought: int) -> int:
        """Give the cost of a number that is sold [smallest units of money]."""
        return bought // self.bundle * self.bundle_price

    def makes_pointless(self, other: "SoldAs") -> bool:
        """Tell whether nobody needs the other one: this is no shorter and never dearer.

        Parameters
        ----------
        other
            Another put-up.

        Returns
        -------
        bool
            False where it only may be pointless.
        """
        if self.length_mm < other.length_mm:
            return False
        if self.is_single:
            return self.price * other.pack_size <= other.price
        packs = self.pack_size, self.minimum_packs, self.pack_step
        others = other.pack_size, other.minimum_packs, other.pack_step
        return packs == others and self.price <= other.price


def worth_buying(sold: Sequence[SoldAs]) -> list[SoldAs]:
    """Leave out put-ups that another one makes pointless.

    Parameters
    ----------
    sold
        The put-ups.

    Returns
    -------
    list of SoldAs
        The rest, by price and then by length; of equal ones the first.
    """
    kept: list[SoldAs] = []
    for item in sorted(sold, key=lambda item: (item.price_each, -item.length_mm, item.bundle)):
        if not any(other.makes_pointless(item) for other in kept):
            kept.append(item)
    return kept
