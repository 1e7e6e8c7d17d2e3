"""A straight line through analyses over time, and when it will meet a limit, with the uncertainty of the fit.

Least squares; the interval for the day follows Fieller's theorem (J. R. Stat. Soc. B 16 (1954) 175), from
memory: all days at which the limit lies within the confidence band of the line.
"""

import math
from collections.abc import Sequence
from dataclasses import dataclass
from importlib import import_module
from typing import Literal

import numpy as np

CONFIDENCE = 0.95
LEAST_POINTS = 3  # two always lie on a line: nothing would be known of the scatter
NO_SCATTER = 1e-12  # relative: smaller residuals come from the arithmetic

Outlook = Literal["too few analyses", "no drift towards it", "will meet it", "meets it already"]


@dataclass(frozen=True)
class Drift:
    """c = at_mean + slope · (day − mean_day) in wt%; standard error of slope; None of what is not known."""

    points: int
    mean_day: float
    at_mean: float
    slope: float
    slope_error: float | None
    residual_sd: float | None
    spread: float  # Σ (day − mean_day)²

    def at(self, day: float) -> float:
        """The line at a day."""
        return self.at_mean + self.slope * (day - self.mean_day)


@dataclass(frozen=True)
class Meeting:
    """When a limit is met: best estimate, earliest, latest with CONFIDENCE; a latest of None is unknown."""

    outlook: Outlook
    day: float | None = None
    earliest: float | None = None
    latest: float | None = None


def drift_of(days: Sequence[float], values: Sequence[float]) -> Drift | None:
    """The line through (day, wt%) pairs; None for fewer than two different days."""
    t, c = np.asarray(days, dtype=np.float64), np.asarray(values, dtype=np.float64)
    if len(np.unique(t)) < 2:
        return None
    mean_day, at_mean = float(t.mean()), float(c.mean())
    spread = float(((t - mean_day) ** 2).sum())
    slope = float(((t - mean_day) * (c - at_mean)).sum() / spread)
    sd = error = None
    if len(t) >= LEAST_POINTS:
        left = float(((c - at_mean - slope * (t - mean_day)) ** 2).sum())
        sd = math.sqrt(left / (len(t) - 2))
        sd = 0.0 if sd <= NO_SCATTER * max(1.0, float(np.abs(c).max())) else sd
        error = sd / math.sqrt(spread)
    return Drift(len(t), mean_day, at_mean, slope, error, sd, spread)


def meeting(drift: Drift | None, limit: float, today: float, *, upwards: bool = True) -> Meeting:
    """When the line crosses a limit from below (or from above: `upwards` False), seen from `today`."""
    if drift is None or drift.residual_sd is None:
        return Meeting("too few analyses")
    sign = 1.0 if upwards else -1.0
    missing = sign * (limit - drift.at(today))
    if missing <= 0.0:
        return Meeting("meets it already")
    width = _student(drift.points - 2) * drift.residual_sd
    slope = sign * drift.slope
    if slope <= 0.0:
        return Meeting("no drift towards it", earliest=_band(drift, limit, today, width)[0])
    day = today + missing / slope
    if width == 0.0:
        return Meeting("will meet it", day, day, day)
    earliest, latest = _band(drift, limit, today, width)
    return Meeting("will meet it", day, day if earliest is None else earliest, latest)


def _student(degrees: int) -> float:
    """Student's t within which CONFIDENCE lies; the library is large, so it is loaded when first needed."""
    return float(import_module("scipy.special").stdtrit(degrees, 0.5 + CONFIDENCE / 2.0))


def _band(drift: Drift, limit: float, today: float, width: float) -> tuple[float | None, float | None]:
    """First and last day from today on at which the confidence band holds the limit.

    (at_mean − limit + slope u)² = width² (1/n + u²/spread) with u = day − mean_day; a last day of None:
    the band never leaves the limit behind.
    """
    gap = drift.at_mean - limit
    a = drift.slope**2 - width**2 / drift.spread
    b = 2.0 * gap * drift.slope
    c = gap**2 - width**2 / drift.points
    roots = _roots(a, b, c)
    later = [drift.mean_day + u for u in roots if drift.mean_day + u >= today]
    u = today - drift.mean_day
    if (a * u + b) * u + c <= 0.0:  # the band holds the limit already
        return today, (later[0] if later and a > 0.0 else None)
    if not later:
        return None, None
    return later[0], (later[1] if len(later) > 1 else None)


def _roots(a: float, b: float, c: float) -> list[float]:
    """Real roots of a u² + b u + c, ascending."""
    if a == 0.0:
        return [] if b == 0.0 else [-c / b]
    inside = b * b - 4.0 * a * c
    if inside < 0.0:
        return []
    q = -0.5 * (b + math.copysign(math.sqrt(inside), b))
    found = {q / a} if q == 0.0 else {q / a, c / q}
    return sorted(found)
