"""The melting of an alloy, as answered, beside what its standard prints."""

from collections.abc import Sequence

from diagrams.errors import OutsideData
from diagrams.fillers import FILLERS_EDITION, FILLERS_GUIDANCE
from diagrams.questions.melter import Melter, Span
from service.process.placed import Placed, about
from service.safety import safety_for
from service.schemas.melting import CurvePoint, MeltingAnswer, Tabulated, TemperatureSpan
from service.schemas.source import reference_shown

Point = tuple[float, float | None]

_SINGLE = (
    "The standard prints one melting temperature, as for a eutectic; where the nominal composition lies "
    "beside the eutectic of the diagram, the diagram's liquidus lies above its solidus. "
)


def melting_of(
    subject: Placed, temperatures_c: Sequence[float] = (), *, where: str = "alloy"
) -> MeltingAnswer:
    """Solidus, liquidus and curve of the alloy given at `where`; OutsideData if they lie beyond the data."""
    melter = subject.melter
    with about(subject, where):
        solidus, liquidus = melter.kept(0.0), melter.needed(1.0)
        points = points_of(melter)
        fractions = _fractions_at(melter, temperatures_c)
    asked = list(zip(temperatures_c, fractions, strict=True))
    return MeltingAnswer(
        alloy=subject.shown,
        solidus_c=span_of(solidus),
        liquidus_c=span_of(liquidus),
        tolerance=tolerance_told(melter, solidus, liquidus),
        curve=[shown_point(*point) for point in _with(points, asked)],
        at_temperatures=[shown_point(*point) for point in asked],
        standard=_tabulated(subject, solidus.nominal, liquidus.nominal),
        source=subject.source,
        safety=safety_for(
            subject.elements, subject.process, max(liquidus.safe_high, *temperatures_c, -273.15)
        ),
    )


def _fractions_at(melter: Melter, temperatures_c: Sequence[float]) -> list[float | None]:
    """Liquid fraction at temperatures; OutsideData names the first that lies beyond the data."""
    try:
        return melter.liquid_fractions(temperatures_c)
    except OutsideData:
        for k, temperature_c in enumerate(temperatures_c):
            try:
                melter.liquid_fractions([temperature_c])
            except OutsideData as error:
                error.field = f"temperatures_c.{k}"
                raise
        raise


def span_of(span: Span) -> TemperatureSpan:
    """Extremes as they are answered."""
    return TemperatureSpan(
        nominal=span.nominal,
        lowest=span.lowest,
        highest=span.highest,
        lowest_at_wt=None if span.lowest_at is None else dict(span.lowest_at),
        highest_at_wt=None if span.highest_at is None else dict(span.highest_at),
    )


def tolerance_told(melter: Melter, *spans: Span) -> str | None:
    """How the extremes over the tolerance were found, with the number of compositions tried; None without."""
    if not melter.limits_wt and spans[0].lowest is not None:
        return None
    tried = " and ".join(dict.fromkeys(str(span.tried) for span in spans))
    counted = f" ({tried} compositions)" if melter.limits_wt else ""
    return f"{melter.how_extremes}{counted}."


def points_of(melter: Melter) -> Sequence[Point]:
    """The curve; by a table what it tells: nothing liquid up to the solidus, all from the liquidus on."""
    if melter.curve is not None:
        return melter.curve.points
    low, high = melter.kept(0.0).nominal, melter.needed(1.0).nominal
    unknown: list[Point] = [(low, None), (high, None)] if low < high else []
    return [(low, 0.0), *unknown, (high, 1.0)]


def shown_point(temperature_c: float, fraction: float | None) -> CurvePoint:
    """A point as answered."""
    return CurvePoint(temperature_c=temperature_c, liquid_mass_fraction=fraction)


def _with(points: Sequence[Point], asked: list[Point]) -> list[Point]:
    """The kinks with the points asked for put in between; a kink is not repeated."""
    kinks = {temperature_c for temperature_c, _ in points}
    return sorted((*points, *{p for p in asked if p[0] not in kinks}), key=lambda point: point[0])


def _tabulated(subject: Placed, solidus_c: float, liquidus_c: float) -> Tabulated | None:
    filler = subject.alloy.filler
    if filler is None:
        return None
    computed = subject.melter.method != "standard table"
    return Tabulated(
        designation=filler.name,
        designations=dict(filler.designations),
        solidus_c=filler.solidus_c,
        liquidus_c=filler.liquidus_c,
        solidus_difference_c=solidus_c - filler.solidus_c if computed else None,
        liquidus_difference_c=liquidus_c - filler.liquidus_c if computed else None,
        single_melting_value=filler.single_melting_value,
        note=(_SINGLE if filler.single_melting_value and computed else "") + FILLERS_GUIDANCE,
        reference=reference_shown(filler.reference),
        edition=FILLERS_EDITION,
    )
