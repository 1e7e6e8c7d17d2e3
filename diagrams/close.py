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
    x, t = inside.x, inside.y
    nearest: tuple[float, str] | None = None
    for band in bands:
        if not band.spans(t):
            continue
        left, right = band.ends(t)
        if left < x < right:
            return Region(band.phases, band.kinds, band.models, face, band.beyond_wt)
        distance, model = (left - x, band.models[0]) if x <= left else (x - right, band.models[1])
        if nearest is None or distance < nearest[0]:
            nearest = (distance, model)
    name, kind, model = single(face, nearest[1] if nearest else None)
    return Region((name,), (kind,), (model,), face)


def _at(border: tuple[Point, ...], temperature_c: float) -> float:
    for (x1, t1), (x2, t2) in pairwise(border):
        if t1 <= temperature_c <= t2:
            return x1 + (x2 - x1) * (temperature_c - t1) / (t2 - t1)
    raise DataFault(f"no border at {temperature_c} °C")
