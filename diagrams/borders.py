"""The borders of a diagram as plain numbers, prepared once from its polygons for fast answers.

Every two-phase polygon is a strip: at each temperature one tie line, so its left and right border are
functions of temperature. Between two neighbouring corner temperatures (a slab) the order of strips is fixed.
"""

from bisect import bisect_right
from dataclasses import dataclass
from itertools import pairwise

import numpy as np
import shapely
from numpy.typing import NDArray

from diagrams.diagram import Diagram, Region
from diagrams.errors import DataFault
from diagrams.tolerances import COMPOUND_WIDTH_WT

Floats = NDArray[np.float64]


class Border:
    """One border: composition (wt%) as a piecewise straight function of temperature (°C)."""

    __slots__ = ("t", "t_array", "x", "x_array")

    def __init__(self, points: list[tuple[float, float]]) -> None:
        self.x = [p[0] for p in points]
        self.t = [p[1] for p in points]
        self.x_array = np.array(self.x)
        self.t_array = np.array(self.t)

    def at(self, temperature_c: float) -> float:
        """Composition at one temperature; held constant beyond the ends."""
        t = self.t
        if temperature_c <= t[0]:
            return self.x[0]
        if temperature_c >= t[-1]:
            return self.x[-1]
        k = bisect_right(t, temperature_c)
        t0, x0 = t[k - 1], self.x[k - 1]
        return x0 + (self.x[k] - x0) * ((temperature_c - t0) / (t[k] - t0))

    def at_many(self, temperatures_c: Floats) -> Floats:
        """The same for an array of temperatures."""
        found: Floats = np.interp(temperatures_c, self.t_array, self.x_array)
        return found


@dataclass(frozen=True, slots=True)
class Strip:
    """A two-phase region and its borders; tie lines reach from `left` to `right`.

    `edge_left` and `edge_right` are the borders of the polygon itself: they differ from the tie line's ends
    only where the frame cuts tie lines off.
    """

    region: Region
    low_c: float
    high_c: float
    left: Border
    right: Border
    edge_left: Border
    edge_right: Border


@dataclass(frozen=True, slots=True)
class Slab:
    """Strips between two corner temperatures, left to right, and the single-phase region in each gap.

    `gaps[k]` lies left of strip k, the last one right of all; None where a gap has no width.
    """

    low_c: float
    high_c: float
    strips: tuple[Strip, ...]
    gaps: tuple[Region | None, ...]


class Borders:
    """All slabs of a diagram, upwards; `corners_c` are the temperatures between them, frame included."""

    __slots__ = ("corners_c", "slabs", "strips")

    def __init__(self, diagram: Diagram) -> None:
        self.strips = tuple(
            _strip(r, diagram.composition_range_wt) for r in diagram.regions if len(r.phases) == 2
        )
        singles = [r for r in diagram.regions if len(r.phases) == 1]
        corners = {*diagram.temperature_range_c}
        for strip in self.strips:
            corners |= {strip.low_c, strip.high_c}
        self.corners_c = sorted(corners)
        self.slabs = tuple(
            _slab(low, high, self.strips, singles, diagram.composition_range_wt)
            for low, high in pairwise(self.corners_c)
        )


def _strip(region: Region, frame: tuple[float, float]) -> Strip:
    edges = _split(region.polygon)
    ends = []
    for phase, edge, side in zip(region.phases, edges, frame, strict=True):
        wt, line = region.beyond_wt.get(phase), region.beyond_line.get(phase)
        on_frame = all(x == side for x in edge.x)
        if wt is not None and on_frame:
            ends.append(Border([(wt, edge.t[0]), (wt, edge.t[-1])]))
        else:
            ends.append(Border(list(line)) if line is not None else edge)
    return Strip(region, edges[0].t[0], edges[0].t[-1], ends[0], ends[1], *edges)


def _split(polygon: shapely.Polygon) -> tuple[Border, Border]:
    """Left and right border of a strip, each from its lowest to its highest temperature."""
    ring = [(float(x), float(t)) for x, t in polygon.exterior.coords[:-1]]
    low, high = min(t for _, t in ring), max(t for _, t in ring)
    floor = sorted(p for p in ring if p[1] == low)
    roof = sorted(p for p in ring if p[1] == high)
    sides = []
    for start, stop, step in ((floor[0], roof[0], 1), (floor[-1], roof[-1], -1)):
        # The ring runs either way round: walk from floor to roof without crossing the other side.
        for direction in (step, -step):
            walk = _walk(ring, start, stop, direction)
            inner = walk[1:-1]
            if all(low < t < high for _, t in inner):
                sides.append(walk)
                break
        else:
            raise DataFault("a two-phase region is not single-valued in temperature")
    if len(floor) == 1 and len(roof) == 1:  # closes to a point at both ends: the two walks must differ
        sides = [_walk(ring, floor[0], roof[0], d) for d in (1, -1)]
        sides.sort(key=lambda walk: _middle(walk, 0.5 * (low + high)))
    for walk in sides:
        if any(b[1] <= a[1] for a, b in pairwise(walk)):
            raise DataFault("a border of a two-phase region does not rise in temperature")
    return Border(sides[0]), Border(sides[1])


def _walk(
    ring: list[tuple[float, float]], start: tuple[float, float], stop: tuple[float, float], step: int
) -> list[tuple[float, float]]:
    k = ring.index(start)
    walk = [ring[k]]
    while walk[-1] != stop:
        k = (k + step) % len(ring)
        walk.append(ring[k])
    return walk


def _middle(walk: list[tuple[float, float]], temperature_c: float) -> float:
    return Border(walk).at(temperature_c)


def _slab(
    low: float, high: float, strips: tuple[Strip, ...], singles: list[Region], frame: tuple[float, float]
) -> Slab:
    middle = 0.5 * (low + high)
    here = sorted(
        (s for s in strips if s.low_c <= low and s.high_c >= high), key=lambda s: s.edge_left.at(middle)
    )
    sides = [frame[0]]
    for strip in here:
        sides += [strip.edge_left.at(middle), strip.edge_right.at(middle)]
    sides.append(frame[1])
    gaps: list[Region | None] = []
    for left, right in zip(sides[::2], sides[1::2], strict=True):
        if right - left <= COMPOUND_WIDTH_WT:
            gaps.append(None)
            continue
        point = shapely.Point(0.5 * (left + right), middle)
        found = [r for r in singles if r.polygon.covers(point)]
        if len(found) != 1:
            raise DataFault(f"{len(found)} single-phase regions at {point.x:.6f} wt% and {middle:.4f} °C")
        gaps.append(found[0])
    return Slab(low, high, tuple(here), tuple(gaps))
