"""Border lines of a binary, built once so that neighbouring regions share every vertex, closed into faces."""

from collections import defaultdict
from collections.abc import Iterable
from itertools import pairwise

import shapely

Point = tuple[float, float]  # wt% of the second element, °C
DECIMALS_WT = 7
DECIMALS_C = 5
SOLUBILITY_FLOOR_WT = 1e-6  # a border this near a pure element is drawn here, so that its field keeps an area


class Linework:
    """Collects border lines inside the frame `wt` × `celsius` and closes them into faces.

    Verticals (frame sides, compounds) are split at every vertex that lies on them; all other lines are
    taken as given and must meet at their ends only.
    """

    def __init__(self, wt: tuple[float, float], celsius: tuple[float, float]) -> None:
        self.wt = wt
        self.celsius = celsius
        self._edges: set[tuple[Point, Point]] = set()
        self._verticals: dict[float, list[tuple[float, float]]] = defaultdict(list)
        low, high = celsius
        for x in wt:
            self._verticals[x].append((low, high))
        self._bottom: set[Point] = {(wt[0], low), (wt[1], low)}
        self._top: set[Point] = {(wt[0], high), (wt[1], high)}

    def vertex(self, second_wt: float, temperature_c: float) -> Point:
        """The stored form of a point: rounded, and kept off the pure ends unless it is one exactly."""
        x = second_wt
        if 0.0 < x < SOLUBILITY_FLOOR_WT:
            x = SOLUBILITY_FLOOR_WT
        if 100.0 - SOLUBILITY_FLOOR_WT < x < 100.0:
            x = 100.0 - SOLUBILITY_FLOOR_WT
        low, high = self.celsius
        return round(x, DECIMALS_WT), min(max(round(temperature_c, DECIMALS_C), low), high)

    def add(self, points: Iterable[Point]) -> None:
        """Add a border through the given vertices."""
        line = list(points)
        for a, b in pairwise(line):
            if a[0] == b[0]:
                self._verticals[a[0]].append((min(a[1], b[1]), max(a[1], b[1])))
            else:
                self._add_edge(a, b)

    def _add_edge(self, a: Point, b: Point) -> None:
        if a[0] > b[0]:
            a, b = b, a
        low, high = self.wt
        if b[0] <= low or a[0] >= high:
            return
        if a[0] < low:
            a = self._cut(a, b, low)
        if b[0] > high:
            b = self._cut(a, b, high)
        self._edges.add((a, b))

    @staticmethod
    def _cut(a: Point, b: Point, x: float) -> Point:
        share = (x - a[0]) / (b[0] - a[0])
        return x, round(a[1] + share * (b[1] - a[1]), DECIMALS_C)

    def faces(self) -> list[shapely.Polygon]:
        """All faces, each in normal form, ordered from lower left upwards."""
        points = {p for edge in self._edges for p in edge}
        for x, intervals in self._verticals.items():
            points |= {(x, t) for interval in intervals for t in interval}
        edges = set(self._edges)
        for level, corners in ((self.celsius[0], self._bottom), (self.celsius[1], self._top)):
            row = sorted(corners | {p for p in points if p[1] == level and self.wt[0] <= p[0] <= self.wt[1]})
            edges |= set(pairwise(row))
            points |= corners
        for x, intervals in self._verticals.items():
            if not self.wt[0] <= x <= self.wt[1]:
                continue
            column = sorted(t for px, t in points if px == x)
            for a, b in pairwise(column):
                if any(low <= a and b <= high for low, high in intervals):
                    edges.add(((x, a), (x, b)))
        lines = shapely.linestrings([list(edge) for edge in sorted(edges)])
        faces = shapely.get_parts(shapely.polygonize(lines))
        return sorted((shapely.normalize(face) for face in faces), key=_lower_left)


def _lower_left(face: shapely.Polygon) -> tuple[float, float, float]:
    west, south, east, _ = face.bounds
    return south, west, east
