"""The gate: what every stored diagram must satisfy before it may answer; run in tests and at start."""

from itertools import combinations, pairwise

import shapely

from diagrams.borders import Borders
from diagrams.diagram import Diagram, Region
from diagrams.elements import MOLAR_MASS
from diagrams.errors import DataFault

AREA_TOLERANCE = 1e-9  # share of the frame's area left to rounding when faces are added up
MELTING_POINT_C = 0.01


def check_diagram(diagram: Diagram, melting_points_c: dict[str, float]) -> None:
    """Raise DataFault, naming the diagram and the fault, if a stored diagram breaks a rule of the gate."""
    checks = (
        _provenance(diagram)
        + _polygons(diagram)
        + _tiling(diagram)
        + _neighbours(diagram)
        + _pure_ends(diagram, melting_points_c)
        + _tie_ends(diagram)
    )
    if checks:
        raise DataFault(f"{diagram.id}: " + "; ".join(checks), remedy="Rebuild it or mend its file.")
    Borders(diagram)  # strips single-valued, gaps held by one region each


def _provenance(diagram: Diagram) -> list[str]:
    first, second = diagram.elements
    faults = []
    if diagram.id != f"{first}-{second}".lower() or first >= second:
        faults.append("the id is not the two elements in alphabetical order, lower case")
    faults += [f"{e} is no known element" for e in diagram.elements if e not in MOLAR_MASS]
    if not diagram.sources:
        faults.append("no source is named")
    if not diagram.edition:
        faults.append("no edition is named")
    return faults


def _polygons(diagram: Diagram) -> list[str]:
    faults = []
    for region in diagram.regions:
        if len(region.phases) not in (1, 2) or not len(region.phases) == len(region.kinds) == len(
            region.models
        ):
            faults.append(f"{region.name} does not have one or two phases with a kind and a model each")
        if not region.polygon.is_valid or region.polygon.area <= 0.0:
            faults.append(f"{region.name}: {shapely.is_valid_reason(region.polygon)}")
        if region.polygon.interiors:
            faults.append(f"{region.name} has a hole")
    return faults


def _tiling(diagram: Diagram) -> list[str]:
    """No overlap, no gap, shared vertices: a valid coverage whose area is that of the frame."""
    polygons = [region.polygon for region in diagram.regions]
    (west, east), (south, north) = diagram.composition_range_wt, diagram.temperature_range_c
    frame = (east - west) * (north - south)
    faults = []
    if not shapely.coverage_is_valid(polygons):
        faults.append("regions overlap or do not share their vertices")
    if abs(sum(p.area for p in polygons) - frame) > AREA_TOLERANCE * frame:
        faults.append("regions leave a gap or reach out of the frame")
    if tuple(shapely.total_bounds(polygons)) != (west, south, east, north):
        faults.append("regions do not reach the frame on every side")
    return faults


def _neighbours(diagram: Diagram) -> list[str]:
    """Across a border regions differ by one phase, unless it is an invariant line or a line compound."""
    levels = {round(i.temperature_c, 5) for i in diagram.invariants}
    compounds = {c.second_wt for c in diagram.compounds}
    tree = shapely.STRtree([r.polygon for r in diagram.regions])
    pairs = {
        tuple(sorted(pair)) for pair in tree.query([r.polygon for r in diagram.regions], "touches").T.tolist()
    }
    faults = []
    for i, j in sorted(pairs):
        one, two = diagram.regions[i], diagram.regions[j]
        if one.polygon.relate_pattern(two.polygon, "FF2F1****") and _differ_by_one(one, two):
            continue
        common = shapely.intersection(one.polygon, two.polygon)
        for line in shapely.get_parts(shapely.line_merge(_lines(common))):
            west, south, east, north = line.bounds
            flat = south == north and round(south, 5) in levels
            upright = west == east and west in compounds
            if not (flat or upright or _differ_by_one(one, two)):
                faults.append(f"{one.name} and {two.name} share a border but differ by more than one phase")
    return faults


def _lines(geometry: shapely.Geometry) -> shapely.Geometry:
    parts = [p for p in shapely.get_parts(geometry) if p.geom_type == "LineString"]
    return shapely.MultiLineString(parts)


def _differ_by_one(one: Region, two: Region) -> bool:
    few, many = sorted((list(one.models), list(two.models)), key=len)
    if len(many) - len(few) != 1:
        return False
    rest = list(many)
    for model in few:
        if model not in rest:
            return False
        rest.remove(model)
    return True


def _pure_ends(diagram: Diagram, melting_points_c: dict[str, float]) -> list[str]:
    """Where the frame reaches a pure element, its melting point is an invariant there."""
    faults = []
    low, high = diagram.temperature_range_c
    for element, wt, pure in zip(diagram.elements, diagram.composition_range_wt, (0.0, 100.0), strict=True):
        melts = melting_points_c.get(element)
        if wt != pure or melts is None or not low < melts < high:
            continue
        ends = [
            i.temperature_c
            for i in diagram.invariants
            if i.kind == "melting point" and all(c == pure for c in i.compositions_wt.values())
        ]
        if not any(abs(t - melts) <= MELTING_POINT_C for t in ends):
            faults.append(f"pure {element} does not melt at {melts:.2f} °C (found {ends})")
    return faults


def _tie_ends(diagram: Diagram) -> list[str]:
    """A two-phase region cut off by the frame must know where its tie lines end."""
    faults = []
    compounds = {c.second_wt for c in diagram.compounds}
    for region in diagram.regions:
        if len(region.phases) != 2:
            continue
        known = {*region.beyond_wt, *region.beyond_line}
        faults += [
            f"{region.name} names {phase} beyond the frame, which it does not hold"
            for phase in sorted(known - {*region.phases})
        ]
        faults += [
            f"{region.name} is cut off by the frame, and nothing says where {phase} lies"
            for phase, side in zip(region.phases, diagram.composition_range_wt, strict=True)
            if phase not in known and _upright(region.polygon, side) and side not in compounds
        ]
    for one, two in combinations(diagram.regions, 2):
        if one.phases == two.phases and len(one.phases) == 1 and one.polygon.equals(two.polygon):
            faults.append(f"{one.name} is stored twice")
    return faults


def _upright(polygon: shapely.Polygon, second_wt: float) -> bool:
    """Whether part of the polygon's outline runs straight up at a composition."""
    return any(a[0] == b[0] == second_wt for a, b in pairwise(polygon.exterior.coords))
