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

    def single(_: shapely.Polygon, model: str | None) -> tuple[str, RegionKind, str]:
        name = model if model is not None else "L"
        return name, points.kinds[name], name

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
    if [row[0] for row in field.rows] != sorted({row[0] for row in field.rows}):
        raise DataFault(
            f"the rows of {' + '.join(field.phases)} in {points.id} do not rise in temperature",
            field="rows",
            remedy="Order the rows upwards, each temperature once.",
        )
    low, high = points.second_wt_range
    beyond = {p: wt for p, wt in points.compounds_wt.items() if p in field.phases and not low <= wt <= high}
    return Band(
        phases=field.phases,
        kinds=(points.kinds[field.phases[0]], points.kinds[field.phases[1]]),
        models=field.phases,
        left=tuple(lines.vertex(a, t) for t, a, _ in field.rows),
        right=tuple(lines.vertex(b, t) for t, _, b in field.rows),
        beyond_wt=MappingProxyType(beyond),
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
