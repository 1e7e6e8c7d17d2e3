"""Where the liquid fraction of an alloy of many elements passes a value, found without its whole curve.

For searches over a tolerance, where hundreds of compositions are asked: each starts from what its neighbour
gave, temperature and state. The fraction is taken to rise with temperature, as melting does.
"""

from collections.abc import Callable
from dataclasses import dataclass

from diagrams.errors import OutsideData
from diagrams.many.change import Change, again, holds
from diagrams.questions.many_state import State, StateFinder
from diagrams.units import kelvin_to_celsius

SAME_C = 2e-3  # a guess this near counts as met
FINE_C = 1e-4
FIRST_STEP_C = 2.0

Passed = Callable[[float], bool]  # of a liquid fraction


def same_change(finder: StateFinder, change: Change) -> float | None:
    """Where a neighbour's change of phases happens at a composition of the same elements, °C.

    None where it does not, or lies beyond the data.
    """
    if change.states.mu.shape[1] != len(finder.elements):
        return None
    sample = finder.place.sample
    found = again(sample, finder.overall, change)
    if not holds(sample, found)[0]:
        return None
    temperature_c = kelvin_to_celsius(float(found.temperatures_k[0]))
    low, high = finder.place.temperature_range_c
    return temperature_c if low <= temperature_c <= high else None


@dataclass
class Edge:
    """Finds edges, remembering the last one as the next guess."""

    guess_c: float
    near: State | None = None

    def find(self, finder: StateFinder, passed: Passed, fine: bool = False) -> float:
        """The temperature from which on `passed` holds; OutsideData where it lies beyond the data."""
        range_c = finder.place.temperature_range_c

        def above(temperature_c: float) -> bool:
            self.near = finder.at(temperature_c, self._fitting(finder))
            return passed(self.near.liquid)

        low, high = self._bracket(above, range_c)
        while high - low > (FINE_C if fine else SAME_C):
            middle = 0.5 * (low + high)
            if above(middle):
                high = middle
            else:
                low = middle
        self.guess_c = high
        return high

    def _fitting(self, finder: StateFinder) -> State | None:
        """The last state, if it is of the same elements: its arrays count those."""
        if self.near is None or self.near.states.mu.shape[1] != len(finder.elements):
            return None
        return self.near

    def _bracket(self, above: Passed, range_c: tuple[float, float]) -> tuple[float, float]:
        """Two temperatures with the edge between them, as near to the guess as may be."""
        lowest, highest = range_c
        low = high = min(max(self.guess_c, lowest), highest)
        step = 0.5 * SAME_C
        if above(min(high, highest)):
            while True:
                low = max(low - step, lowest)
                if not above(low):
                    return low, high
                if low == lowest:
                    raise self._beyond("is that far molten already at the lowest temperature of the data")
                high, step = low, max(2.0 * step, FIRST_STEP_C)
        while True:
            high = min(high + step, highest)
            if above(high):
                return low, high
            if high == highest:
                raise self._beyond("is not that far molten at the highest temperature of the data")
            low, step = high, max(2.0 * step, FIRST_STEP_C)

    def _beyond(self, what: str) -> OutsideData:
        return OutsideData(
            f"The alloy {what}.",
            field="alloy",
            remedy="The temperature asked for lies outside the data: choose another alloy or fraction.",
        )
