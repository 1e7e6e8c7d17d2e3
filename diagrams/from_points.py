"""Builds a diagram from digitised points; straight lines between them, the same closing as for parameters."""

from types import MappingProxyType

import shapely

from diagrams.close import Band, close_regions
from diagrams.diagram import Diagram, Invariant, LineCompound, RegionKind
from diagrams.errors import DataFault
from diagrams.files.points import PointField, Points
from diagrams.linework import Linework


def diagram_from_points(points: Points) -> Diagram:
    """Close the tables of tie lines into a diagram; raises DataFault where they do not fit together."""
    lines = Linework(points.second_wt_range, points.temperature_range_c)
    bands = [_band(points, lines, field) for field in points.fields]
    rows = [[lines.vertex(wt, i.temperature_c) for _, wt in i.compositions_wt] for i in points.invariants]

    def single(face: shapely.Polygon, model: str | None) -> tuple[str, RegionKind, str]:
        if model is None:
            x, t = face.representative_point().coords[0]
            raise DataFault(
                f"no field of {points.id} borders on the single phase at {x:g} wt% and {t:g} °C",
                field="fields",
                remedy="Give the two-phase field beside it, or serve a smaller range.",
            )
        return model, points.kinds[model], model

    return Diagram(
        id=points.id,
        elements=points.elements,
        kind="points",
        temperature_range_c=points.temperature_range_c,
        composition_range_wt=points.second_wt_range,
        edition=points.edition,
        sources=points.sources,
        notes=points.notes,
        regions=tuple(close_regions(lines, bands, rows, single)),
        invariants=tuple(
            Invariant(i.kind, i.temperature_c, i.reaction, MappingProxyType(dict(i.compositions_wt)))
            for i in sorted(points.invariants, key=lambda i: i.temperature_c)
        ),
        compounds=tuple(_compounds(points, bands)),
    )


def _band(points: Points, lines: Linework, field: PointField) -> Band:
    _check_rows(points, field)
    low, high = points.second_wt_range
    left = tuple(lines.vertex(a, t) for t, a, _ in field.rows)
    right = tuple(lines.vertex(b, t) for t, _, b in field.rows)
    beyond = {p: wt for p, wt in points.compounds_wt.items() if p in field.phases and not low <= wt <= high}
    solutions = {
        phase: border
        for phase, border in zip(field.phases, (left, right), strict=True)
        if phase not in points.compounds_wt and not all(low <= wt <= high for wt, _ in border)
    }
    return Band(
        phases=field.phases,
        kinds=(points.kinds[field.phases[0]], points.kinds[field.phases[1]]),
        models=field.phases,
        left=left,
        right=right,
        beyond_wt=MappingProxyType(beyond),
        beyond_line=MappingProxyType(solutions),
    )


def _check_rows(points: Points, field: PointField) -> None:
    """Refuse a table that could only be drawn by moving or cutting its points."""
    low, high = points.temperature_range_c
    heights = [row[0] for row in field.rows]
    for wrong, remedy in (
        (heights != sorted(set(heights)), "Order the rows upwards, each temperature once."),
        (len(heights) < 2, "Give at least two rows."),
        (any(not low <= t <= high for t in heights), f"Keep rows within {low:g} to {high:g} °C."),
        (any(a > b for _, a, b in field.rows), "Name the phases and their wt% from left to right."),
        (any(p not in points.kinds for p in field.phases), "Name every phase under phases."),
        (
            any(
                wt != points.compounds_wt.get(phase, wt)
                for _, *ends in field.rows
                for phase, wt in zip(field.phases, ends, strict=True)
            ),
            "Give a compound the composition it has under compounds_wt.",
        ),
    ):
        if wrong:
            raise DataFault(
                f"the rows of {' + '.join(field.phases)} in {points.id} cannot be drawn: "
                f"{remedy[0].lower()}{remedy[1:]}",
                field="rows",
                remedy=remedy,
            )


def _compounds(points: Points, bands: list[Band]) -> list[LineCompound]:
    low, high = points.second_wt_range
    found = []
    for name, wt in sorted(points.compounds_wt.items(), key=lambda item: item[1]):
        spans = [b.left for b in bands if b.phases[0] == name] + [
            b.right for b in bands if b.phases[1] == name
        ]
        if spans and low <= wt <= high:
            found.append(LineCompound(name, wt, min(s[0][1] for s in spans), max(s[-1][1] for s in spans)))
    return found
