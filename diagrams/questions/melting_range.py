"""Melting over a composition tolerance: the true lowest and highest, wherever in the interval they lie.

At one temperature a field has one composition of a given liquid fraction, so along that contour the
temperature rises or falls steadily with composition until the contour turns back or ends. An extreme over an
interval therefore lies at an end of the interval, where a contour turns (retrograde melting), or where a
field opens or closes (invariants, compounds), on it or right beside it. All of these are tried.
"""

from collections.abc import Callable
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from diagrams.diagram import Diagram
from diagrams.errors import OutsideData
from diagrams.questions.locate import borders_of, check_composition
from diagrams.questions.melting import MeltingCurve, melting_curve, mixed_fields

BESIDE_WT = 1e-6  # how far beside a jump its other side is read

Floats = NDArray[np.float64]
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
    """The ends, and from both sides each place where the temperature may turn or jump."""
    marks: list[Floats] = []
    for strip in borders_of(diagram).strips:
        # invariant lines and compounds end where a strip opens or closes
        marks += [strip.left.x_array[[0, -1]], strip.right.x_array[[0, -1]]]
    for field in mixed_fields(diagram):
        contour = field.contour(fraction)
        way = np.sign(np.diff(contour))
        turns = np.flatnonzero(way[1:] * way[:-1] <= 0.0) + 1
        marks += [contour[[0, -1]], contour[turns]]
    at = np.concatenate(marks)
    tried = np.concatenate([at - BESIDE_WT, at, at + BESIDE_WT, [low_wt, high_wt]])
    found: list[float] = np.unique(tried[(tried >= low_wt) & (tried <= high_wt)]).tolist()
    return found
