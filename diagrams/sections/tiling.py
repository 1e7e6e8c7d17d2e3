"""Closes the boundaries between runs of columns into polygons that tile the section's frame exactly."""

from bisect import bisect_right
from itertools import pairwise

import shapely

from diagrams.diagram import Region
from diagrams.errors import NotConverged
from diagrams.sections.naming import Named
from diagrams.sections.section import Point, Run, Station

Edge = tuple[Point, Point]
SLIVER = 1e-6  # percent times °C: no field is as small


def regions_of(runs: tuple[Run, ...], named: list[list[list[Named]]]) -> tuple[list[Region], list[list[int]]]:
    """All fields, from lower left upwards, and for every part of every run the number of its field.

    `named` gives the phases of every part. A field is called as its largest part is.
    """
    return regions_of_faces(runs, named, _faces(runs, named))


def regions_of_faces(
    runs: tuple[Run, ...], named: list[list[list[Named]]], faces: list[shapely.Polygon]
) -> tuple[list[Region], list[list[int]]]:
    """The same from faces that tile the frame; slivers without a part of their own join a neighbour."""
    tree = shapely.STRtree(faces)
    numbers: list[list[int]] = []
    largest: dict[int, tuple[float, list[Named]]] = {}
    for run, names in zip(runs, named, strict=True):
        row = []
        for k, phases in enumerate(names):
            spot, area = _widest(run, k)
            hits = tree.query(shapely.Point(spot), "within").tolist() if area > 0.0 else []
            number = int(hits[0]) if len(hits) == 1 else -1  # −1: a part without any room
            if area > largest.get(number, (0.0, phases))[0]:
                largest[number] = area, phases
            row.append(number)
        numbers.append(row)
    orphans = sorted(set(range(len(faces))) - set(largest))
    if any(faces[k].area > SLIVER for k in orphans):
        raise NotConverged("a field of the section belongs to no column")
    for k in reversed(orphans):  # between borders that meet in a node, a hair beside each other
        faces = _merged(faces, k)
    if orphans:
        return regions_of_faces(runs, named, faces)
    regions = []
    for k, face in enumerate(faces):
        phases = largest[k][1]
        regions.append(
            Region(
                tuple(p[0] for p in phases), tuple(p[1] for p in phases), tuple(p[2] for p in phases), face
            )
        )
    return regions, numbers


def _merged(faces: list[shapely.Polygon], number: int) -> list[shapely.Polygon]:
    """The faces with one joined to the neighbour with which it shares the longest border."""
    sliver, others = faces[number], faces[:number] + faces[number + 1 :]
    shared = [shapely.length(shapely.intersection(sliver, face)) for face in others]
    best = max(range(len(others)), key=lambda k: shared[k])
    whole = shapely.coverage_union(sliver, others[best])
    if not isinstance(whole, shapely.Polygon):
        raise NotConverged("a sliver of the section touches no field along a border")
    others[best] = shapely.normalize(whole)
    return sorted(others, key=_lower_left)


def _widest(run: Run, part: int) -> tuple[Point, float]:
    """The middle of a part's largest strip, and the area of all its strips."""
    best, spot, whole = 0.0, (0.0, 0.0), 0.0
    for one, two in pairwise(run.stations):
        heights = [s.levels[part + 1] - s.levels[part] for s in (one, two)]
        area = 0.5 * sum(heights) * (two.to_share - one.to_share)
        whole += area
        if area > best:
            middle = sum(s.levels[part] + s.levels[part + 1] for s in (one, two)) / 4.0
            best, spot = area, (0.5 * (one.to_share + two.to_share), middle)
    return spot, whole


def _faces(runs: tuple[Run, ...], named: list[list[list[Named]]]) -> list[shapely.Polygon]:
    edges: set[Edge] = set()
    for run in runs:
        for one, two in pairwise(run.stations):
            for a, b in zip(one.levels[1:-1], two.levels[1:-1], strict=True):
                edges.add(((one.to_share, a), (two.to_share, b)))
    first, last = runs[0].stations[0], runs[-1].stations[-1]
    low, high = first.levels[0], first.levels[-1]
    for station in (first, last):
        edges |= {
            ((station.to_share, a), (station.to_share, b)) for a, b in pairwise(sorted({*station.levels}))
        }
    for k, (west, east) in enumerate(pairwise(runs)):
        edges |= _upright(west.stations[-1], named[k], east.stations[0], named[k + 1])
    corners = {(s.to_share, t) for s in (first, last) for t in (low, high)}
    for level in (low, high):
        row = {p for edge in edges for p in edge if p[1] == level} | {c for c in corners if c[1] == level}
        edges = {e for e in edges if not e[0][1] == e[1][1] == level} | set(pairwise(sorted(row)))
    lines = shapely.linestrings([list(edge) for edge in sorted(edges)])
    faces = shapely.get_parts(shapely.polygonize(lines))
    return sorted((shapely.normalize(face) for face in faces), key=_lower_left)


def _upright(one: Station, left: list[list[Named]], two: Station, right: list[list[Named]]) -> set[Edge]:
    """Edges between two runs, where other phases stand on the left than on the right."""
    edges: set[Edge] = set()
    for a, b in pairwise(sorted({*one.levels, *two.levels})):
        middle = 0.5 * (a + b)
        if _models(left, one, middle) != _models(right, two, middle):
            edges.add(((one.to_share, a), (one.to_share, b)))
    return edges


def _models(parts: list[list[Named]], station: Station, temperature_c: float) -> list[str]:
    k = min(max(bisect_right(station.levels, temperature_c), 1), len(parts)) - 1
    return sorted(model for _, _, model in parts[k])


def _lower_left(face: shapely.Polygon) -> tuple[float, float, float]:
    west, south, east, _ = face.bounds
    return south, west, east
