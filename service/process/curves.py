"""Melting curves and their extremes over a tolerance, kept: the same fillers are asked again and again."""

from functools import lru_cache

from diagrams.diagram import Diagram
from diagrams.questions.locate import borders_of
from diagrams.questions.melting import MeltingCurve, melting_curve
from diagrams.questions.melting_range import Extremes, extremes_over
from diagrams.questions.place import Place


def curve_of(found: Place) -> MeltingCurve:
    """The melting curve at the nominal composition; OutsideData beyond the data."""
    return _curve(found.diagram, found.second_wt)


def needed_over(found: Place, fraction: float) -> Extremes:
    """From which temperature on at least this much is liquid (0 < fraction ≤ 1), over the tolerance."""
    return _needed(found.diagram, found.second_wt, found.low_wt, found.high_wt, fraction)


def kept_over(found: Place, fraction: float) -> Extremes:
    """Up to which temperature no more than this is liquid (0 ≤ fraction < 1), over the tolerance."""
    return _kept(found.diagram, found.second_wt, found.low_wt, found.high_wt, fraction)


# Diagrams compare by identity, and the catalogue holds each once for the life of the process.
@lru_cache(maxsize=1024)
def _curve(diagram: Diagram, second_wt: float) -> MeltingCurve:
    return melting_curve(diagram, second_wt)


@lru_cache(maxsize=4096)
def _needed(diagram: Diagram, nominal: float, low: float, high: float, fraction: float) -> Extremes:
    return extremes_over(diagram, nominal, low, high, fraction, lambda curve: curve.stays_above(fraction))


@lru_cache(maxsize=4096)
def _kept(diagram: Diagram, nominal: float, low: float, high: float, fraction: float) -> Extremes:
    return extremes_over(diagram, nominal, low, high, fraction, lambda curve: curve.first_exceeds(fraction))


_SAME_C = 1e-9  # a reading and its tolerance, subtracted and added again, miss the temperature by less


def liquid_up_to(curve: MeltingCurve, temperature_c: float) -> float | None:
    """Liquid fraction on heating up to a temperature; at a jump that just below; None beyond the data."""
    if not curve.pieces[0].low_c <= temperature_c <= curve.pieces[-1].high_c:
        return None
    piece = next(p for p in curve.pieces if p.high_c >= temperature_c - _SAME_C)
    return piece.at(min(temperature_c, piece.high_c))


def most_liquid_up_to(found: Place, temperature_c: float) -> float | None:
    """The same, highest over the tolerance; None beyond the data.

    At one temperature the liquid fraction is straight in composition between the borders of the fields, so
    its highest lies at an end of the tolerance or on a border.
    """
    tried = {found.low_wt, found.second_wt, found.high_wt}
    for strip in borders_of(found.diagram).strips:
        if strip.low_c <= temperature_c <= strip.high_c:
            ends = (strip.left.at(temperature_c), strip.right.at(temperature_c))
            tried |= {wt for wt in ends if found.low_wt < wt < found.high_wt}
    reached = [liquid_up_to(_curve(found.diagram, wt), temperature_c) for wt in sorted(tried)]
    return max((fraction for fraction in reached if fraction is not None), default=None)
