"""The gate: what every section must satisfy before it may answer."""

from collections import Counter
from itertools import pairwise

import shapely

from diagrams.diagram import Region
from diagrams.errors import DataFault
from diagrams.sections.section import Section

AREA_TOLERANCE = 1e-9  # share of the frame's area left to rounding when faces are added up
LEVEL_C = 0.06  # how far a border may lie from the temperature of an invariant that is said to be it
STUB_C = 0.15  # an upright this short is a node that did not close to a point
UPRIGHT = 1e-6  # percent
NODE = 1e-4  # of the section's length: columns stand no nearer to a place where the sequence changes


def check_section(section: Section) -> None:
    """Raise DataFault, naming the section and the faults, if it breaks a rule of the gate."""
    faults = [*_provenance(section), *_polygons(section), *_tiling(section), *_neighbours(section)]
    faults += [*_runs(section), *_contours(section)]
    if faults:
        raise DataFault(f"{section.name}: " + "; ".join(faults), remedy="Rebuild it.")


def _provenance(section: Section) -> list[str]:
    told = section.sources and section.edition and section.data_id and section.id
    return [] if told else ["source, edition, data or id is missing"]


def _polygons(section: Section) -> list[str]:
    faults = []
    for region in section.regions:
        if not 0 < len(region.phases) == len(region.kinds) == len(region.models):
            faults.append(f"{region.name} lacks a kind or model for a phase")
        if len(region.phases) > len(section.elements):
            faults.append(f"{region.name} has more phases than there are elements")
        if not region.polygon.is_valid or region.polygon.area <= 0.0:
            faults.append(f"{region.name}: {shapely.is_valid_reason(region.polygon)}")
    return faults


def _tiling(section: Section) -> list[str]:
    """No overlap, no gap, shared vertices: a valid coverage whose area is that of the frame."""
    polygons = [region.polygon for region in section.regions]
    south, north = section.temperature_range_c
    frame = section.to_share_max * (north - south)
    faults = []
    if not shapely.coverage_is_valid(polygons):
        faults.append("regions overlap or do not share their vertices")
    if abs(sum(p.area for p in polygons) - frame) > AREA_TOLERANCE * frame:
        faults.append("regions leave a gap or reach out of the frame")
    if tuple(shapely.total_bounds(polygons)) != (0.0, south, section.to_share_max, north):
        faults.append("regions do not reach the frame on every side")
    return faults


def _neighbours(section: Section) -> list[str]:
    """Across a border regions differ by one phase, but for invariant levels and compounds' uprights."""
    levels = [i.temperature_c for i in section.invariants]
    tree = shapely.STRtree([r.polygon for r in section.regions])
    hits = tree.query([r.polygon for r in section.regions], "touches").T.tolist()
    faults = []
    for i, j in sorted({(min(pair), max(pair)) for pair in hits}):
        one, two = section.regions[i], section.regions[j]
        if _differ_by_one(one, two):
            continue
        common = shapely.intersection(one.polygon, two.polygon)
        for line in shapely.get_parts(shapely.line_merge(_lines(common))):
            west, south, east, north = line.bounds
            flat = any(abs(south - t) <= LEVEL_C and abs(north - t) <= LEVEL_C for t in levels)
            upright = east - west <= UPRIGHT and (
                north - south <= STUB_C or any(abs(x - west) <= 1e-4 for x in section.compounds)
            )
            node = east - west <= NODE * section.to_share_max and north - south <= STUB_C
            if not (flat or upright or node):
                faults.append(
                    f"{one.name} and {two.name} share a border from {west:g} % {south:g} °C to {east:g} % "
                    f"{north:g} °C but differ by more than one phase"
                )
    return faults


def _lines(geometry: shapely.Geometry) -> shapely.Geometry:
    parts = [p for p in shapely.get_parts(geometry) if p.geom_type == "LineString"]
    return shapely.MultiLineString(parts)


def _differ_by_one(one: Region, two: Region) -> bool:
    a, b = Counter(one.models), Counter(two.models)
    return (a - b).total() + (b - a).total() == 1


def _runs(section: Section) -> list[str]:
    """The columns span the frame, meet at the same places, and name the fields their middles lie in."""
    faults = []
    places = [(run.stations[0].to_share, run.stations[-1].to_share) for run in section.runs]
    if [0.0, *(east for _, east in places)] != [*(west for west, _ in places), section.to_share_max]:
        faults.append("the columns do not span the section without gaps")
    for run in section.runs:
        for station in run.stations:
            frame = (station.levels[0], station.levels[-1])
            if frame != section.temperature_range_c or list(station.levels) != sorted(station.levels):
                faults.append(f"the levels at {station.to_share:g} % are not in order")
        for one, two in pairwise(run.stations):
            for k, name in enumerate(run.fields):
                t = [s.levels[k] for s in (one, two)] + [s.levels[k + 1] for s in (one, two)]
                if min(t[2] - t[0], t[3] - t[1]) < 0.01:
                    continue
                spot = shapely.Point(0.5 * (one.to_share + two.to_share), sum(t) / 4.0)
                if not any(r.name == name and r.polygon.intersects(spot) for r in section.regions):
                    faults.append(f"at {spot.x:g} %, {spot.y:g} °C the columns have {name}, the regions not")
    return faults


def _contours(section: Section) -> list[str]:
    """Where a contour runs through a field, part of it is liquid there: that much, by the columns."""
    faults = []
    for contour in section.contours:
        for line in contour.lines:
            for share, t in line[1:-1:7]:
                above = section.state(share, min(t + LEVEL_C, section.temperature_range_c[1]))[1]
                under = section.state(share, max(t - LEVEL_C, section.temperature_range_c[0]))[1]
                if not under - 0.01 <= contour.liquid_mass_fraction <= above + 0.01:
                    faults.append(f"the contour {contour.liquid_mass_fraction:g} is wrong at {share:g} %")
    return faults
