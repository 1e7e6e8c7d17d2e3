"""Closes border lines into the regions of a diagram and names the phases of each."""

from collections.abc import Callable, Iterable, Mapping
from dataclasses import dataclass, field
from itertools import pairwise
from types import MappingProxyType

import shapely

from diagrams.diagram import Region, RegionKind
from diagrams.errors import DataFault
from diagrams.linework import Linework, Point


@dataclass(frozen=True)
class Band:
    """A two-phase field: its two borders upwards in temperature, and what lies at its left and right end."""

    phases: tuple[str, str]
    kinds: tuple[RegionKind, RegionKind]
    models: tuple[str, str]
    left: tuple[Point, ...]
    right: tuple[Point, ...]
    beyond_wt: Mapping[str, float] = field(default_factory=lambda: MappingProxyType({}))
    beyond_line: Mapping[str, tuple[Point, ...]] = field(default_factory=lambda: MappingProxyType({}))

    def spans(self, temperature_c: float) -> bool:
        """Whether the field exists at a temperature strictly inside its range."""
        return self.left[0][1] < temperature_c < self.left[-1][1]

    def ends(self, temperature_c: float) -> tuple[float, float]:
        """Left and right composition, wt%."""
        return _at(self.left, temperature_c), _at(self.right, temperature_c)


Single = Callable[[shapely.Polygon, "str | None"], tuple[str, RegionKind, str]]


def close_regions(
    lines: Linework, bands: Iterable[Band], rows: Iterable[Iterable[Point]], single: Single
) -> list[Region]:
    """Close bands and horizontal `rows` (invariant lines) into regions that tile the frame of `lines`.

    `single(face, model)` names a one-phase face, given the model of the phase beside it (None if no band
    is beside it): it returns name, kind and model.
    """
    fields = list(bands)
    for band in fields:
        lines.add(band.left)
        lines.add(band.right)
    for row in rows:
        lines.add(sorted(set(row)))
    return [_region(face, fields, single) for face in lines.faces()]


def _region(face: shapely.Polygon, bands: list[Band], single: Single) -> Region:
    inside = face.representative_point()
    band, model = _find(bands, inside.x, inside.y)
    if band is not None:
        return Region(band.phases, band.kinds, band.models, face, band.beyond_wt, band.beyond_line)
    if model is None:  # no field that high or low: ask at other heights of the face
        heights = sorted({t for _, t in face.exterior.coords})
        chords = (_chord(face, 0.5 * (low + high)) for low, high in pairwise(heights))
        beside = (_find(bands, x, t)[1] for x, t in chords)
        model = next((found for found in beside if found is not None), None)
    name, kind, model = single(face, model)
    return Region((name,), (kind,), (model,), face)


def _find(bands: list[Band], second_wt: float, temperature_c: float) -> tuple[Band | None, str | None]:
    """The band a point lies in, or else the phase at the facing end of the nearest band, if there is one."""
    nearest: tuple[float, str] | None = None
    for band in bands:
        if not band.spans(temperature_c):
            continue
        left, right = band.ends(temperature_c)
        if left < second_wt < right:
            return band, None
        on_left = second_wt <= left
        distance = left - second_wt if on_left else second_wt - right
        if nearest is None or distance < nearest[0]:
            nearest = (distance, band.models[0 if on_left else 1])
    return None, nearest[1] if nearest else None


def _chord(face: shapely.Polygon, temperature_c: float) -> Point:
    """The middle of the face's longest stretch at a temperature strictly between two of its vertices."""
    west, _, east, _ = face.bounds
    level = shapely.LineString([(west - 1.0, temperature_c), (east + 1.0, temperature_c)])
    longest = max(shapely.get_parts(shapely.intersection(face, level)), key=shapely.length)
    middle = longest.interpolate(0.5, normalized=True)
    return middle.x, middle.y


def _at(border: tuple[Point, ...], temperature_c: float) -> float:
    for (x1, t1), (x2, t2) in pairwise(border):
        if t1 <= temperature_c <= t2:
            return x1 + (x2 - x1) * (temperature_c - t1) / (t2 - t1)
    raise DataFault(f"no border at {temperature_c} °C")
