"""The melting of an alloy of one or two elements, read from its stored diagram and kept."""

from collections.abc import Mapping, Sequence
from functools import lru_cache

import numpy as np

from diagrams.alloys import Alloy
from diagrams.diagram import Diagram
from diagrams.questions.lever import Equilibrium, equilibrium
from diagrams.questions.locate import borders_of, locate
from diagrams.questions.melter import Melter, Method, Span, jump_at, liquid_up_to
from diagrams.questions.melting import MeltingCurve, melting_curve
from diagrams.questions.melting_range import Extremes, extremes_over
from diagrams.questions.place import Place


class ByPolygon(Melter):
    """An alloy in its place on a binary diagram."""

    method: Method = "polygon"
    how_extremes = (
        "exact: the ends of the interval were tried, and within it both sides of every place where the "
        "stored borders or the lines of this liquid fraction turn or end"
    )

    def __init__(self, alloy: Alloy, place: Place) -> None:
        self.alloy, self.place = alloy, place
        diagram = place.diagram
        self.data_id, self.edition, self.sources = diagram.id, diagram.edition, tuple(diagram.sources)
        self.notes = tuple(diagram.notes)
        wide = place.low_wt < place.high_wt
        self.limits_wt = {diagram.elements[1]: (place.low_wt, place.high_wt)} if wide else {}

    @property
    def elements(self) -> tuple[str, ...]:
        """The two of the diagram, even for a pure metal."""
        return self.place.diagram.elements

    @property
    def curve(self) -> MeltingCurve:
        """The melting curve at the nominal composition; OutsideData beyond the data."""
        return melting_curve(self.place.diagram, self.place.second_wt)

    def equilibrium(self, temperature_c: float) -> Equilibrium:
        """By the lever rule."""
        return equilibrium(self.place.diagram, self.place.second_wt, temperature_c)

    def liquid_fractions(self, temperatures_c: Sequence[float]) -> list[float | None]:
        """Exact on the polygons."""
        found: list[float | None] = self.curve.liquid_fractions(np.array(temperatures_c, float)).tolist()
        return found

    def liquid_up_to(self, temperature_c: float) -> float | None:
        """None beyond the data."""
        return liquid_up_to(self.curve, temperature_c)

    def most_liquid_up_to(self, temperature_c: float) -> float | None:
        """At one temperature the liquid fraction is straight in composition between the borders of the
        fields, so its highest lies at an end of the tolerance or on a border.
        """
        place = self.place
        tried = {place.low_wt, place.second_wt, place.high_wt}
        for strip in borders_of(place.diagram).strips:
            if strip.low_c <= temperature_c <= strip.high_c:
                ends = (strip.left.at(temperature_c), strip.right.at(temperature_c))
                tried |= {wt for wt in ends if place.low_wt < wt < place.high_wt}
        reached = [liquid_up_to(melting_curve(place.diagram, wt), temperature_c) for wt in sorted(tried)]
        return max((fraction for fraction in reached if fraction is not None), default=None)

    def needed(self, fraction: float) -> Span:
        """Extremes found truly."""
        place = self.place
        return self._span(_needed(place.diagram, place.second_wt, place.low_wt, place.high_wt, fraction))

    def kept(self, fraction: float) -> Span:
        """Extremes found truly."""
        place = self.place
        return self._span(_kept(place.diagram, place.second_wt, place.low_wt, place.high_wt, fraction))

    def jump(self, temperature_c: float, composition_wt: Mapping[str, float]) -> float:
        """Of the alloy with this composition."""
        second_wt = composition_wt.get(self.place.diagram.elements[1], 0.0)
        return jump_at(melting_curve(self.place.diagram, second_wt), temperature_c)

    def molten_at(self, temperature_c: float) -> bool | None:
        """One look at the point tells as much as the liquidus itself, and costs far less."""
        lowest_c, highest_c = self.place.diagram.temperature_range_c
        if not lowest_c <= temperature_c <= highest_c:
            looked_c = min(max(temperature_c, lowest_c), highest_c)
            molten = self.molten_at(looked_c)
            return molten if molten is (looked_c < temperature_c) else None
        state = locate(self.place.diagram, self.place.second_wt, temperature_c)
        return state.liquid_mass_fraction >= 1.0

    def _span(self, found: Extremes) -> Span:
        low, high = self._composition(found.lowest_at_wt), self._composition(found.highest_at_wt)
        return Span(found.nominal, found.lowest, found.highest, low, high, found.tried)

    def _composition(self, second_wt: float) -> dict[str, float]:
        first, second = self.place.diagram.elements
        return {first: 100.0 - second_wt, second: second_wt}


# Diagrams compare by identity, and the catalogue holds each once for the life of the process.
@lru_cache(maxsize=4096)
def _needed(diagram: Diagram, nominal: float, low: float, high: float, fraction: float) -> Extremes:
    return extremes_over(diagram, nominal, low, high, fraction, lambda curve: curve.stays_above(fraction))


@lru_cache(maxsize=4096)
def _kept(diagram: Diagram, nominal: float, low: float, high: float, fraction: float) -> Extremes:
    return extremes_over(diagram, nominal, low, high, fraction, lambda curve: curve.first_exceeds(fraction))
