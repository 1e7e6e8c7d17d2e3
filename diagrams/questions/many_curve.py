"""How an alloy of many elements melts: its column of phases, read as liquid fraction against temperature.

Changes among solids alone, or in the liquid alone, leave no trace in the curve.
"""

from bisect import bisect_right
from itertools import pairwise

from diagrams.errors import InvalidInput, OutsideData
from diagrams.many.change import Change, change_between
from diagrams.many.column import Column, column
from diagrams.many.stretch import smoothed
from diagrams.questions.many_state import StateFinder
from diagrams.units import celsius_to_kelvin, kelvin_to_celsius

AT_CHANGE_C = 1e-6
NOTHING = 1e-9  # liquid fraction: a point this near to a line says nothing

Points = tuple[tuple[float, float], ...]


class FollowedCurve:
    """Liquid fraction as straight lines between points (°C, fraction); a jump is two points at one °C."""

    def __init__(self, points: Points, data_id: str, column: Column) -> None:
        self.points, self._data_id, self.column = points, data_id, column
        self._temperatures_c = [t for t, _ in points]

    def change_at(self, temperature_c: float) -> Change | None:
        """The change of phases at a temperature, if there is one that can be looked for again."""
        for below, above in pairwise(self.column.stretches):
            if abs(kelvin_to_celsius(above.low_k) - temperature_c) < AT_CHANGE_C:
                return change_between(below, above)
        return None

    @property
    def solidus_c(self) -> float:
        """Temperature of the first liquid on heating; OutsideData beyond the data."""
        return self.first_exceeds(0.0)

    @property
    def liquidus_c(self) -> float:
        """Lowest temperature from which on all is liquid; OutsideData beyond the data."""
        return self.stays_above(1.0)

    def liquid_fraction(self, temperature_c: float) -> float:
        """Fraction at a temperature; at a jump the value just above; OutsideData beyond the data."""
        low, high = self.points[0][0], self.points[-1][0]
        if not low <= temperature_c <= high:
            raise OutsideData(
                f"{temperature_c:g} °C lies outside the data of {self._data_id} for these elements, "
                f"{low:g} to {high:g} °C.",
                field="temperatures_c",
                remedy=f"Ask between {low:g} and {high:g} °C.",
            )
        k = bisect_right(self._temperatures_c, temperature_c)  # after both points of a jump
        if k == len(self.points):
            return self.points[-1][1]
        (t0, f0), (t1, f1) = self.points[k - 1 : k + 1]
        return f0 + (f1 - f0) * (temperature_c - t0) / (t1 - t0)

    def first_exceeds(self, fraction: float) -> float:
        """Temperature up to which the fraction stays at or under `fraction` (0 ≤ fraction < 1)."""
        _check(fraction)
        if self.points[0][1] > fraction:
            raise self._beyond("already holds more liquid at the lowest temperature of the data")
        for (t0, f0), (t1, f1) in pairwise(self.points):
            if f1 > fraction:
                return t0 + (t1 - t0) * (fraction - f0) / (f1 - f0)
        raise self._beyond("holds no more liquid even at the highest temperature of the data")

    def stays_above(self, fraction: float) -> float:
        """Lowest temperature from which on the fraction is at least `fraction` (0 < fraction ≤ 1)."""
        _check(fraction)
        if self.points[-1][1] < fraction:
            raise self._beyond("is not that far molten at the highest temperature of the data")
        for (t0, f0), (t1, f1) in reversed(list(pairwise(self.points))):
            if f0 < fraction:
                return t0 + (t1 - t0) * (fraction - f0) / (f1 - f0)
        raise self._beyond("is that far molten already at the lowest temperature of the data")

    def _beyond(self, what: str) -> OutsideData:
        return OutsideData(
            f"The alloy {what} ({self._data_id}).",
            field="alloy",
            remedy="The temperature asked for lies outside the data: choose another alloy or fraction.",
        )


def _check(fraction: float) -> None:
    if not 0.0 <= fraction <= 1.0:
        raise InvalidInput(
            f"A liquid fraction of {fraction:g} is not possible.",
            field="target_liquid_fraction",
            remedy="Give a mass fraction from 0 to 1.",
        )


def follow(finder: StateFinder) -> FollowedCurve:
    """The melting curve of a composition, from the lowest temperature served to the highest.

    Where below the solidus no set of solids can be proven, the curve begins at the lowest one proven: among
    solids that are not asked about the data may fail without harm to the melting. Raises NotConverged where
    there is liquid.
    """
    low, high = finder.place.temperature_range_c
    sample, overall = finder.place.sample, finder.overall
    found = column(sample, overall, celsius_to_kelvin(low), celsius_to_kelvin(high))
    points: list[tuple[float, float]] = []
    for stretch in found.stretches:
        smooth = smoothed(sample, overall, stretch)
        temperatures_c = [kelvin_to_celsius(t) for t in smooth.states.temperatures_k.tolist()]
        points += zip(temperatures_c, smooth.liquid.tolist(), strict=True)
    ends = (low if found.complete else points[0][0], high)
    points[0], points[-1] = (ends[0], points[0][1]), (ends[1], points[-1][1])
    return FollowedCurve(_tidy(points), finder.place.file.id, found)


def _tidy(points: list[tuple[float, float]]) -> Points:
    """Without points that say nothing: steps of the bisection beside a change, and straight stretches."""
    kept: list[tuple[float, float]] = []
    for t, f in points:
        if kept and kept[-1] == (t, f):
            continue
        while len(kept) > 1 and _on_line(kept[-2], kept[-1], (t, f)):
            kept.pop()
        kept.append((t, f))
    return tuple(kept)


def _on_line(a: tuple[float, float], b: tuple[float, float], c: tuple[float, float]) -> bool:
    if c[0] == a[0] or b[0] in (a[0], c[0]):
        return False
    return abs(a[1] + (c[1] - a[1]) * (b[0] - a[0]) / (c[0] - a[0]) - b[1]) < NOTHING
