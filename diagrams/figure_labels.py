"""Finds room for labels in a plot: inside a field, along a line, or beside a spot. Lengths are points.

Every place found is kept free from then on, so that no two labels overlap.
"""

from dataclasses import dataclass

import numpy as np
import shapely
from numpy.typing import NDArray

Floats = NDArray[np.float64]
GRID = 36  # places tried in each direction of a field
ROOMY = 22.0  # clearance beyond which a place is not better for having more
CROSSING = 60.0  # how many points of distance a label goes to avoid one crossing of a border
CROSSED = 8.0  # likewise, for its pointer
BELOW = 30.0  # likewise, to stand over what it names
REACH = (7.0, 10.0, 14.0, 19.0, 26.0, 35.0, 47.0, 62.0, 80.0, 105.0, 135.0)
TURNS = np.linspace(0.0, 2.0 * np.pi, 24, endpoint=False)


@dataclass(frozen=True, slots=True)
class Spot:
    """Where a label goes: its centre, whether it is turned upright, and its size in letters."""

    x: float
    y: float
    upright: bool = False
    size: float = 9.0


class Room:
    """The room in a plot of this width and height, with the borders a label should not cross."""

    def __init__(self, width: float, height: float, borders: shapely.Geometry) -> None:
        self.width, self.height = width, height
        self._borders = borders
        self._taken: list[shapely.Geometry] = []
        self._thin: list[shapely.Geometry] = []
        self._plot = shapely.box(2.0, 2.0, width - 2.0, height - 2.0)  # a little off the frame
        shapely.prepare([borders, self._plot])

    def take(self, x: float, y: float, width: float, height: float) -> None:
        """Keep a box about this centre free of labels."""
        self._taken.append(shapely.box(x - width / 2, y - height / 2, x + width / 2, y + height / 2))

    def take_thin(self, shape: shapely.Geometry) -> None:
        """Keep a line or a spot free of labels; pointers may cross it where they must."""
        self._thin.append(shape)

    def inside(self, field: shapely.Polygon, width: float, height: float) -> tuple[float, float] | None:
        """The centre of a free box well inside a field; None if there is none."""
        west, south, east, north = field.bounds
        if east - west < width or north - south < height:
            return None
        mesh = np.meshgrid(np.linspace(west, east, GRID), np.linspace(south, north, GRID))
        x, y = mesh[0].ravel(), mesh[1].ravel()
        boxes = self._boxes(x, y, width, height)
        shapely.prepare(field)
        fits = shapely.contains_properly(field, boxes) & self._free(boxes)
        if not fits.any():
            return None
        x, y, boxes = x[fits], y[fits], boxes[fits]
        clearance = np.minimum(shapely.distance(boxes, field.exterior), ROOMY)
        middle = field.centroid
        off = np.hypot(x - middle.x, y - middle.y) / max(self.width, self.height)
        return self._keep(x, y, width, height, off - clearance / ROOMY)

    def along(self, line: shapely.LineString, width: float, height: float) -> tuple[float, float] | None:
        """A place right over or under a level line, in open ground where there is some."""
        west, y, east, _ = line.bounds
        steps = np.linspace(west, east, max(2, int((east - west) / 4.0)))
        x = np.concatenate([steps, steps])
        lift = height / 2 + 1.2
        up = np.repeat([lift, -lift], len(steps))
        boxes = self._boxes(x, y + up, width, height)
        good = self._free(boxes) & (self._crossings(boxes) == 0)
        if not good.any():
            return None
        x, up = x[good], up[good]
        lifted = self._boxes(x, y + up * 1.6, width, height)
        clearance = np.minimum(shapely.distance(lifted, self._borders), 9.0)
        cost = -clearance + (up < 0) * 3.0 + np.abs(x - (west + east) / 2) / self.width
        return self._keep(x, y + up, width, height, cost)

    def beside(
        self, x: float, y: float, width: float, height: float, *, over: bool = False
    ) -> tuple[float, float] | None:
        """A free place near a spot, if need be across borders; `over`: above it rather than below.

        The pointer from the label to the spot crosses no other label, and none will be laid over it.
        """
        away, turn = (part.ravel() for part in np.meshgrid(np.array(REACH), TURNS))
        cx = x + (away + width / 2) * np.cos(turn)
        cy = y + (away + height / 2) * np.sin(turn)
        boxes = self._boxes(cx, cy, width, height)
        good = self._free(boxes)
        cx, cy, away, boxes = cx[good], cy[good], away[good], boxes[good]
        pointers = shapely.shortest_line(boxes, shapely.Point(x, y))
        good = np.ones(len(cx), dtype=bool)
        for taken in self._taken:
            if not shapely.intersects_xy(taken, x, y):  # what stands on the spot itself is in nobody's way
                good &= ~shapely.intersects(pointers, taken)
        if not good.any():
            return None
        cx, cy, away, boxes, pointers = cx[good], cy[good], away[good], boxes[good], pointers[good]
        cost = away + CROSSING * self._crossings(boxes) + CROSSED * self._crossings(pointers)
        for thin in self._thin:
            if not shapely.intersects_xy(thin, x, y):
                cost += 3 * CROSSED * shapely.intersects(pointers, thin)
        if over:
            cost += BELOW * (cy < y)
        self._thin.append(pointers[int(np.argmin(np.round(cost, 6)))])
        return self._keep(cx, cy, width, height, cost)

    def widest(self, field: shapely.Polygon) -> tuple[float, float]:
        """A spot inside a field where it is widest, beside what stands there already."""
        rest = shapely.difference(field, shapely.union_all(self._taken))
        parts = [p for p in shapely.get_parts(rest) if isinstance(p, shapely.Polygon) and not p.is_empty]
        open_part = max(parts, key=lambda p: p.area, default=field)
        x, y = shapely.maximum_inscribed_circle(open_part, 0.5).coords[0]
        return float(x), float(y)

    def _boxes(self, x: Floats, y: Floats, width: float, height: float) -> NDArray[np.object_]:
        found: NDArray[np.object_] = shapely.box(x - width / 2, y - height / 2, x + width / 2, y + height / 2)
        return found

    def _free(self, boxes: NDArray[np.object_]) -> NDArray[np.bool_]:
        free: NDArray[np.bool_] = shapely.contains(self._plot, boxes)
        for taken in (*self._taken, *self._thin):
            free &= ~shapely.intersects(boxes, taken)
        return free

    def _crossings(self, shapes: NDArray[np.object_]) -> NDArray[np.int64]:
        """How many border pieces run through each shape; most run through none."""
        count = np.zeros(len(shapes), dtype=np.int64)
        hit = shapely.intersects(self._borders, shapes)
        count[hit] = shapely.get_num_geometries(shapely.intersection(shapes[hit], self._borders))
        return count

    def _keep(self, x: Floats, y: Floats, width: float, height: float, cost: Floats) -> tuple[float, float]:
        best = int(np.argmin(np.round(cost, 6)))
        found = float(x[best]), float(y[best])
        self.take(*found, width + 3.0, height + 2.0)
        return found
