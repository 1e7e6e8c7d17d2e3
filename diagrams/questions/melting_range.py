"""Melting over a composition tolerance: the true lowest and highest, wherever in the interval they lie.

The compositions of a given liquid fraction are straight lines between the vertices of a region's two
borders, so an extreme of temperature over an interval lies at an end of the interval, at such a vertex, or
beside a jump. All of these are tried.
"""

from collections.abc import Callable
from dataclasses import dataclass

import numpy as np

from diagrams.diagram import Diagram
from diagrams.errors import OutsideData
from diagrams.questions.locate import borders_of, check_composition
from diagrams.questions.melting import MeltingCurve, melting_curve

BESIDE_WT = 1e-6  # how far beside a jump its other side is read

Question = Callable[[MeltingCurve], float]


@dataclass(frozen=True)
class Extremes:
    """A temperature at the nominal composition and its lowest and highest over the tolerance, with where.

    `tried` counts the compositions looked at.
    """

    nominal: float
    lowest: float
    highest: float
    lowest_at_wt: float
    highest_at_wt: float
    tried: int = 1

    @property
    def safe_low(self) -> float:
        """The lowest; always known here."""
        return self.lowest

    @property
    def safe_high(self) -> float:
        """The highest; always known here."""
        return self.highest


def solidus_over(diagram: Diagram, nominal_wt: float, low_wt: float, high_wt: float) -> Extremes:
    """Solidus over compositions from low_wt to high_wt (wt% of the second element)."""
    return extremes_over(diagram, nominal_wt, low_wt, high_wt, 0.0, lambda curve: curve.solidus_c)


def liquidus_over(diagram: Diagram, nominal_wt: float, low_wt: float, high_wt: float) -> Extremes:
    """Liquidus over compositions from low_wt to high_wt (wt% of the second element)."""
    return extremes_over(diagram, nominal_wt, low_wt, high_wt, 1.0, lambda curve: curve.liquidus_c)


def extremes_over(
    diagram: Diagram, nominal_wt: float, low_wt: float, high_wt: float, fraction: float, question: Question
) -> Extremes:
    """A temperature that belongs to a liquid fraction, over an interval of compositions.

    Raises OutsideData where part of the interval lies beyond the data: nothing is cut off silently.
    """
    check_composition(diagram, low_wt)
    check_composition(diagram, high_wt)
    nominal = question(melting_curve(diagram, nominal_wt))
    if low_wt == high_wt:
        return Extremes(nominal, nominal, nominal, nominal_wt, nominal_wt)
    found = [(nominal, nominal_wt)]
    for wt in _candidates(diagram, low_wt, high_wt, fraction):
        try:
            found.append((question(melting_curve(diagram, wt)), wt))
        except OutsideData as error:
            raise OutsideData(
                f"Within the tolerance, at {wt:.4g} wt% {diagram.elements[1]}: {error}",
                field="tolerance_wt",
                remedy=error.remedy,
            ) from error
    lowest, highest = min(found), max(found)
    return Extremes(nominal, lowest[0], highest[0], lowest[1], highest[1], len(found))


def _candidates(diagram: Diagram, low_wt: float, high_wt: float, fraction: float) -> list[float]:
    found = {low_wt, high_wt}
    for strip in borders_of(diagram).strips:
        t = np.union1d(strip.left.t_array, strip.right.t_array)
        left, right = strip.left.at_many(t), strip.right.at_many(t)
        share = fraction if strip.region.kinds[1] == "liquid" else 1.0 - fraction
        contour = left + share * (right - left)
        # invariant lines and compounds end where a strip opens or closes: look at both sides of each
        marks = np.array([left[0], right[0], left[-1], right[-1], contour[0], contour[-1]])
        marks = np.concatenate([marks - BESIDE_WT, marks, marks + BESIDE_WT])
        if "liquid" not in strip.region.kinds:
            contour = np.empty(0)
        inside = np.concatenate([contour, marks])
        found |= set(inside[(inside > low_wt) & (inside < high_wt)].tolist())
    return sorted(found)
