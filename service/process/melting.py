"""The melting of an alloy, as answered, beside what its standard prints."""

from collections.abc import Sequence

import numpy as np

from diagrams.fillers import FILLERS_EDITION, FILLERS_GUIDANCE
from diagrams.questions.melting import MeltingCurve
from diagrams.questions.melting_range import Extremes
from service.process.curves import curve_of, kept_over, needed_over
from service.process.placed import Placed, about
from service.safety import safety_for
from service.schemas.melting import CurvePoint, MeltingAnswer, Tabulated, TemperatureSpan
from service.schemas.source import reference_shown

_SINGLE = (
    "The standard prints one melting temperature, as for a eutectic; where the nominal composition lies "
    "beside the eutectic of the diagram, the diagram's liquidus lies above its solidus. "
)


def melting_of(
    subject: Placed, temperatures_c: Sequence[float] = (), *, where: str = "alloy"
) -> MeltingAnswer:
    """Solidus, liquidus and curve of the alloy given at `where`; OutsideData if they lie beyond the data."""
    with about(subject, where):
        solidus, liquidus = kept_over(subject.place, 0.0), needed_over(subject.place, 1.0)
        curve = curve_of(subject.place)
        fractions = curve.liquid_fractions(np.array(temperatures_c, dtype=np.float64)).tolist()
    asked = list(zip(temperatures_c, fractions, strict=True))
    return MeltingAnswer(
        alloy=subject.shown,
        solidus_c=span_of(solidus),
        liquidus_c=span_of(liquidus),
        curve=[_point(*point) for point in _with(curve, asked)],
        at_temperatures=[_point(*point) for point in asked],
        standard=_tabulated(subject, solidus.nominal, liquidus.nominal),
        source=subject.source,
        safety=safety_for(subject.elements, subject.process, max(liquidus.highest, *temperatures_c, -273.15)),
    )


def span_of(extremes: Extremes) -> TemperatureSpan:
    """Extremes as they are answered."""
    return TemperatureSpan(nominal=extremes.nominal, lowest=extremes.lowest, highest=extremes.highest)


def _with(curve: MeltingCurve, asked: list[tuple[float, float]]) -> list[tuple[float, float]]:
    """The kinks with the points asked for put in between; a kink is not repeated."""
    kinks = {temperature_c for temperature_c, _ in curve.points}
    return sorted((*curve.points, *{p for p in asked if p[0] not in kinks}), key=lambda point: point[0])


def _point(temperature_c: float, fraction: float) -> CurvePoint:
    return CurvePoint(temperature_c=temperature_c, liquid_mass_fraction=fraction)


def _tabulated(subject: Placed, solidus_c: float, liquidus_c: float) -> Tabulated | None:
    filler = subject.alloy.filler
    if filler is None:
        return None
    return Tabulated(
        designation=filler.name,
        designations=dict(filler.designations),
        solidus_c=filler.solidus_c,
        liquidus_c=filler.liquidus_c,
        solidus_difference_c=solidus_c - filler.solidus_c,
        liquidus_difference_c=liquidus_c - filler.liquidus_c,
        single_melting_value=filler.single_melting_value,
        note=(_SINGLE if filler.single_melting_value else "") + FILLERS_GUIDANCE,
        reference=reference_shown(filler.reference),
        edition=FILLERS_EDITION,
    )
