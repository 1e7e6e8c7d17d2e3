"""The order in which joints can be made, so that each later heating leaves the earlier ones alone.

One joint may come before another if the other's peak does not reach what the first has to be kept under. If
no order exists, two joints are always in each other's way: in a ring of joints each of which has to come
before the next, the one that needs the highest peak and the one that must come after it collide directly.
"""

from collections.abc import Sequence
from dataclasses import dataclass


@dataclass(frozen=True)
class Heating:
    """A joint's heating: the peak the hottest joint reads at least, and what this joint must later not pass.

    Both °C on the reading; `keeps_c` None: it may melt again and sets no bound.
    """

    name: str
    needs_c: float
    keeps_c: float | None


@dataclass(frozen=True)
class Clash:
    """Two joints neither of which can come first, and by how much (°C) each passes what the other bears.

    `least_c` is what would have to be gained for one of the two orders to work.
    """

    one: str
    other: str
    one_passes_other_c: float
    other_passes_one_c: float

    @property
    def least_c(self) -> float:
        """The smaller of the two."""
        return min(self.one_passes_other_c, self.other_passes_one_c)


def passes(first: Heating, later: Heating) -> float:
    """By how much (°C) the later heating passes what the first bears; zero or negative: it may follow."""
    return float("-inf") if first.keeps_c is None else later.needs_c - first.keeps_c


def clashes(heatings: Sequence[Heating]) -> list[Clash]:
    """All pairs of joints that cannot be made in either order, in the order given."""
    found = []
    for k, one in enumerate(heatings):
        for other in heatings[k + 1 :]:
            one_passes, other_passes = passes(other, one), passes(one, other)
            if one_passes > 0.0 and other_passes > 0.0:
                found.append(Clash(one.name, other.name, one_passes, other_passes))
    return found


def order_of(heatings: Sequence[Heating]) -> list[Heating] | None:
    """An order that works, hottest first wherever there is a choice, as the trade does it; None if none does.

    Equals keep the order in which they were given.
    """
    left = list(heatings)
    order: list[Heating] = []
    while left:
        free = [one for one in left if all(other is one or passes(one, other) <= 0.0 for other in left)]
        if not free:
            return None
        chosen = max(free, key=lambda heating: heating.needs_c)
        order.append(chosen)
        left = [heating for heating in left if heating is not chosen]
    return order
