"""What came of a demand on a recorded run: value, bound, margin.

The margin is in the unit of the demand: positive inside, zero on the bound, negative outside.
"""

from dataclasses import dataclass

from service.process.bounds import Bounds
from service.schemas.profile_words import Side

ONE_SIDED_C = 25.0  # a temperature bounded on one side only: 0 °C is no natural zero to take shares of
ROUNDING = 1e-9  # relative: a margin this small comes from the arithmetic, not from the run


@dataclass(frozen=True)
class Checked:
    """One demand on one sensor; `why` says why there is no value, in which case the demand is not met.

    `span` is the distance between the two bounds of a demand that has both.
    """

    limit: str
    side: Side
    value: float | None
    bound: float
    unit: str
    span: float | None
    why: str | None = None

    @property
    def margin(self) -> float | None:
        """Distance inside the bound, in `unit`; None without a value."""
        if self.value is None:
            return None
        margin = self.value - self.bound if self.side == "at least" else self.bound - self.value
        return 0.0 if abs(margin) <= ROUNDING * max(1.0, abs(self.bound)) else margin

    @property
    def passed(self) -> bool:
        """Whether the demand is met; on the bound it is."""
        return self.margin is not None and self.margin >= 0.0

    @property
    def tightness(self) -> float:
        """What makes margins of different units comparable: the margin as a share of what is allowed.

        Where a demand has two bounds that is the span between them, with one bound the bound itself, and for
        temperatures ONE_SIDED_C.
        """
        if self.margin is None:
            return float("-inf")
        alone = ONE_SIDED_C if self.unit == "°C" else max(abs(self.bound), ROUNDING)
        return self.margin / (self.span or alone)


def held(limit: str, value: float | None, bounds: Bounds, unit: str, why: str | None = None) -> list[Checked]:
    """A value against its bounds; `why` is told only where there is no value."""
    low, high = bounds.low, bounds.high
    span = high - low if low is not None and high is not None and high > low else None
    told = why if value is None else None
    found = []
    if low is not None:
        found.append(Checked(limit, "at least", value, low, unit, span, told))
    if high is not None:
        found.append(Checked(limit, "at most", value, high, unit, span, told))
    return found
