"""How an alloy of many elements melts: states followed in temperature, every change of phases found.

Between changes the liquid fraction is smooth; points are set until straight lines between them are true to
STRAIGHT. Changes among solids alone, or in the liquid alone, leave no trace in the curve.
"""

from itertools import pairwise

import numpy as np

from diagrams.errors import InvalidInput, NotConverged, OutsideData
from diagrams.questions.many_state import State, StateFinder

STEP_C = 10.0  # at most, of the first look
EVENT_C = 1e-4  # how closely a change of phases is found
STRAIGHT = 1e-4  # liquid fraction
NOTHING = 1e-9  # liquid fraction: a point this near to a line says nothing

Points = tuple[tuple[float, float], ...]


class FollowedCurve:
    """Liquid fraction as straight lines between points (°C, fraction); a jump is two points at one °C."""

    def __init__(self, points: Points, data_id: str) -> None:
        self.points, self._data_id = points, data_id

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
        for (t0, f0), (t1, f1) in reversed(list(pairwise(self.points))):
            if t0 <= temperature_c and (t1 > t0 or temperature_c >= t1):
                return f1 if t1 == t0 else f0 + (f1 - f0) * (temperature_c - t0) / (t1 - t0)
        return self.points[0][1]

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
    """The melting curve of a composition, from the highest temperature served down to the lowest.

    Where below the solidus no set of solids can be proven, the curve begins at the lowest one proven: among
    solids that are not asked about the data may fail without harm to the melting. Raises NotConverged where
    there is liquid.
    """
    low, high = finder.place.temperature_range_c
    steps = max(2, int(np.ceil((high - low) / STEP_C)) + 1)
    states: list[State] = []
    for t in np.linspace(high, low, steps).tolist():
        try:
            states.append(finder.at(t, states[-1] if states else None))
        except NotConverged:
            if len(states) < 2 or states[-1].liquid > 0.0:
                raise
            break
    states.reverse()
    points = [(states[0].temperature_c, states[0].liquid)]
    for a, b in pairwise(states):
        points += _between(finder, a, b)
        points.append((b.temperature_c, b.liquid))
    return FollowedCurve(_tidy(points), finder.place.file.id)


def _between(finder: StateFinder, a: State, b: State) -> list[tuple[float, float]]:
    if a.liquid == b.liquid and a.liquid in (0.0, 1.0):
        return []
    middle_c = 0.5 * (a.temperature_c + b.temperature_c)
    if b.temperature_c - a.temperature_c < EVENT_C:
        return [(middle_c, a.liquid), (middle_c, b.liquid)]
    middle = finder.at(middle_c, b)
    if a.key == b.key == middle.key and abs(middle.liquid - 0.5 * (a.liquid + b.liquid)) < STRAIGHT:
        return [(middle_c, middle.liquid)]
    return [
        *_between(finder, a, middle),
        (middle_c, middle.liquid),
        *_between(finder, middle, b),
    ]


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
