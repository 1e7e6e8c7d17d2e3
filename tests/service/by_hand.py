"""The lever rule with ruler and pencil: a horizontal line across the published polygons, and nothing else."""

import numpy as np
from shapely import LineString, Point
from shapely.geometry import shape


class Drawing:
    """A diagram as `GET /v1/diagrams/{id}` publishes it."""

    def __init__(self, published):
        self.elements = published["elements"]
        self.ranges = published["composition_range_wt"], published["temperature_range_c"]
        self.regions = [(shape(region["geometry"]), region) for region in published["regions"]]

    def phases(self, second_wt, temperature_c):
        """Return {phase: (kind, mass fraction, wt% of the second element)} at a point inside a field."""
        point = Point(second_wt, temperature_c)
        polygon, region = next((p, r) for p, r in self.regions if p.contains(point))
        if len(region["phases"]) == 1:
            return {region["phases"][0]: (region["kinds"][0], 1.0, second_wt)}
        left, right = self._tie_line(polygon, region, second_wt, temperature_c)
        amounts = ((right - second_wt) / (right - left), (second_wt - left) / (right - left))
        rows = zip(region["phases"], region["kinds"], amounts, (left, right), strict=True)
        return {phase: (kind, amount, end) for phase, kind, amount, end in rows}

    def liquid(self, second_wt, temperature_c):
        """Return the liquid mass fraction at a point inside a field."""
        return sum(
            amount for kind, amount, _ in self.phases(second_wt, temperature_c).values() if kind == "liquid"
        )

    def inner_points(self, rng, count, clear=0.02):
        """Return points that lie clear of every border."""
        (wt_low, wt_high), (c_low, c_high) = self.ranges
        found = []
        while len(found) < count:
            wt, temperature_c = rng.uniform(wt_low, wt_high), rng.uniform(c_low, c_high)
            point = Point(wt, temperature_c)
            if min(polygon.exterior.distance(point) for polygon, _ in self.regions) > clear:
                found.append((float(wt), float(temperature_c)))
        return found

    def reaches(self, second_wt, fraction):
        """Return where the liquid fraction passes a value, °C, by halving; it must rise with temperature."""
        low, high = self.ranges[1]
        low, high = low + 1e-7, high - 1e-7
        for _ in range(45):
            middle = 0.5 * (low + high)
            if self.liquid(second_wt, middle) >= fraction:
                high = middle
            else:
                low = middle
        return high

    def _tie_line(self, polygon, region, second_wt, temperature_c):
        across = polygon.intersection(LineString([(-1.0, temperature_c), (101.0, temperature_c)]))
        pieces = getattr(across, "geoms", [across])
        piece = next(p for p in pieces if p.bounds[0] <= second_wt <= p.bounds[2])
        ends = [piece.bounds[0], piece.bounds[2]]
        for k, phase in enumerate(region["phases"]):
            if phase in region["tie_ends_beyond"]:
                line = np.array(region["tie_ends_beyond"][phase])
                ends[k] = float(np.interp(temperature_c, line[:, 1], line[:, 0]))
        return ends
