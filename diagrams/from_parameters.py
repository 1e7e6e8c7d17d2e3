"""Builds a diagram from Gibbs-energy parameters: trace, name, close."""

from collections import defaultdict
from types import MappingProxyType

import shapely

from diagrams.close import Band, close_regions
from diagrams.diagram import Diagram, Invariant, LineCompound, Region, RegionKind
from diagrams.equilibrium import Isotherm
from diagrams.errors import DataFault
from diagrams.files.assessments import Assessment
from diagrams.gibbs import Compound, Phase
from diagrams.linework import Linework, Point
from diagrams.reactions import describe
from diagrams.sources import Source
from diagrams.trace import Strand, trace
from diagrams.units import celsius_to_kelvin, kelvin_to_celsius, second_wt_to_x, x_to_second_wt


def diagram_from_parameters(assessment: Assessment) -> Diagram:
    """Compute the whole diagram of an assessment; raises NotConverged or DataFault."""
    builder = _Builder(assessment)
    return Diagram(
        id=assessment.id,
        elements=assessment.system.elements,
        kind="parameters",
        temperature_range_c=assessment.temperature_range_c,
        composition_range_wt=assessment.second_wt_range,
        edition=assessment.edition,
        sources=tuple(Source(s["text"], s["how"], s["confidence"]) for s in assessment.sources),
        notes=assessment.notes,
        regions=tuple(builder.regions()),
        invariants=tuple(builder.invariants()),
        compounds=tuple(builder.compounds()),
    )


class _Builder:
    def __init__(self, assessment: Assessment) -> None:
        self.system = assessment.system
        self.lines = Linework(assessment.second_wt_range, assessment.temperature_range_c)
        low, high = assessment.temperature_range_c
        self.trace = trace(self.system, celsius_to_kelvin(low), celsius_to_kelvin(high))
        self.bands = [self._band(strand) for strand in self.trace.strands]
        self.phases = {phase.model: phase for phase in self.system.phases}

    def _wt(self, x: float) -> float:
        return x_to_second_wt(x, *self.system.elements)

    def _point(self, x: float, temperature_k: float) -> Point:
        return self.lines.vertex(self._wt(x), kelvin_to_celsius(temperature_k))

    def _band(self, strand: Strand) -> Band:
        pair = (strand.first, strand.second)
        middle = strand.vertices[len(strand.vertices) // 2]
        names = phase_names(pair, (middle[1], middle[2]))
        low, high = self.lines.wt
        beyond = {
            name: round(self._wt(phase.x), 7)
            for name, phase in zip(names, pair, strict=True)
            if isinstance(phase, Compound) and not low <= round(self._wt(phase.x), 7) <= high
        }
        return Band(
            phases=(names[0], names[1]),
            kinds=(pair[0].kind, pair[1].kind),
            models=(pair[0].model, pair[1].model),
            left=tuple(self._point(x, t) for t, x, _ in strand.vertices),
            right=tuple(self._point(x, t) for t, _, x in strand.vertices),
            beyond_wt=MappingProxyType(beyond),
        )

    def regions(self) -> list[Region]:
        """Every one- and two-phase region; together they tile the frame."""
        rows = [[self._point(x, e.temperature_k) for _, x in e.points] for e in self.trace.events]
        return close_regions(self.lines, self.bands, rows, self._single)

    def _single(self, face: shapely.Polygon, model: str | None) -> tuple[str, RegionKind, str]:
        inside = face.representative_point()
        x = second_wt_to_x(inside.x, *self.system.elements)
        if model is None:
            phase = Isotherm(self.system, celsius_to_kelvin(inside.y)).single(x)
        else:
            phase = self.phases[model]
        west, _, east, _ = face.bounds
        held = {phase.names.at(second_wt_to_x(v, *self.system.elements)) for v in (west, east)}
        name = phase.names.at(x) if len(held) == 1 else phase.names.spanning
        if name is None:
            raise DataFault(f"one field of {phase.model} holds {sorted(held)}: give it a spanning name")
        return name, phase.kind, phase.model

    def invariants(self) -> list[Invariant]:
        """Every event as the trade calls it, from low to high temperature."""
        found = []
        for event in self.trace.events:
            names = phase_names(tuple(p for p, _ in event.points), tuple(x for _, x in event.points))
            kind, reaction = describe(event, names)
            compositions = {
                name: self._point(x, event.temperature_k)[0]
                for name, (_, x) in zip(names, event.points, strict=True)
            }
            temperature_c = round(kelvin_to_celsius(event.temperature_k), 5)
            found.append(Invariant(kind, temperature_c, reaction, MappingProxyType(compositions)))
        return found

    def compounds(self) -> list[LineCompound]:
        """Line compounds inside the frame with the temperatures between which they are stable."""
        spans: dict[tuple[float, str], list[float]] = defaultdict(list)
        for strand, band in zip(self.trace.strands, self.bands, strict=True):
            for phase, name, border in (
                (strand.first, band.phases[0], band.left),
                (strand.second, band.phases[1], band.right),
            ):
                if isinstance(phase, Compound) and name not in band.beyond_wt:
                    spans[border[0][0], name] += [border[0][1], border[-1][1]]
        return [LineCompound(name, wt, min(span), max(span)) for (wt, name), span in sorted(spans.items())]


def phase_names(phases: tuple[Phase, ...], xs: tuple[float, ...]) -> list[str]:
    """Names of phases met together, left to right.

    A phase that meets itself at two compositions is named by side, else as one field if it has such a name.
    """
    names = []
    apart = max(xs) - min(xs) > 0.0
    for k, (phase, x) in enumerate(zip(phases, xs, strict=True)):
        twice = apart and phases.count(phase) > 1
        if twice:
            ends = phase.names.by_x
            names.append(ends[0][1] if phases.index(phase) == k else ends[-1][1])
        elif phase.names.spanning is not None:
            names.append(phase.names.spanning)
        else:
            names.append(phase.names.at(x))
    return names
