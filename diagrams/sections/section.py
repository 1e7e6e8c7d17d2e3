"""A section as it is served: regions as polygons, x = mass percent of the second alloy, y = °C. Immutable.

Beside its polygons it holds the columns they were drawn through, from which the liquid fraction is read.
"""

from bisect import bisect_right
from collections.abc import Mapping
from dataclasses import dataclass

from diagrams.diagram import Region
from diagrams.errors import OutsideData
from diagrams.sources import Source

# Relative heights within a stretch of one set of phases at which its liquid fraction is kept; closer
# towards the top, where melting speeds up.
HEIGHTS = (0.0, 0.1, 0.2, 0.3, 0.4, 0.5, 0.58, 0.66, 0.74, 0.81, 0.87, 0.92, 0.96, 0.985, 0.996, 1.0)

Point = tuple[float, float]  # mass percent of the second alloy, °C
Liquids = tuple[float, ...]  # mass fractions at HEIGHTS; a single one where it is the same all through


@dataclass(frozen=True)
class Station:
    """One composition: the changes of phases with the frame's ends (°C), and the liquid between each two."""

    to_share: float
    levels: tuple[float, ...]
    liquids: tuple[Liquids, ...]


@dataclass(frozen=True)
class Run:
    """Neighbouring compositions with the same fields one over the other, named upwards."""

    fields: tuple[str, ...]
    stations: tuple[Station, ...]


@dataclass(frozen=True)
class Contour:
    """Lines along which a given share of the mass is liquid: the lowest temperature from which on it is."""

    liquid_mass_fraction: float
    lines: tuple[tuple[Point, ...], ...]


@dataclass(frozen=True)
class SectionInvariant:
    """A temperature at which more than one phase changes, and from where to where it shows (mass percent)."""

    temperature_c: float
    under: str
    over: str
    from_share: float
    to_share: float


@dataclass(frozen=True, eq=False)
class Section:
    """A section with its provenance; `data_id` names the system it is computed from."""

    id: str
    name: str
    from_wt: Mapping[str, float]
    to_wt: Mapping[str, float]
    from_name: str
    to_name: str
    to_share_max: float
    temperature_range_c: tuple[float, float]
    data_id: str
    edition: str
    sources: tuple[Source, ...]
    notes: tuple[str, ...]
    regions: tuple[Region, ...]
    contours: tuple[Contour, ...]
    invariants: tuple[SectionInvariant, ...]
    compounds: Mapping[float, str]
    runs: tuple[Run, ...]

    @property
    def elements(self) -> tuple[str, ...]:
        """All elements on the line, sorted."""
        return tuple(sorted({*self.from_wt, *self.to_wt}))

    def state(self, to_share: float, temperature_c: float) -> tuple[str, float]:
        """Name of the field and liquid mass fraction at a point; OutsideData beyond the section."""
        low, high = self.temperature_range_c
        if not (0.0 <= to_share <= self.to_share_max and low <= temperature_c <= high):
            raise OutsideData(f"{to_share:g} %, {temperature_c:g} °C lies outside the section {self.name}.")
        run = next(r for r in self.runs if to_share <= r.stations[-1].to_share)
        places = [station.to_share for station in run.stations]
        k = min(max(bisect_right(places, to_share), 1), len(places) - 1)
        one, two = run.stations[k - 1], run.stations[k]
        share = (to_share - one.to_share) / (two.to_share - one.to_share)
        levels = [a + share * (b - a) for a, b in zip(one.levels, two.levels, strict=True)]
        part = min(max(bisect_right(levels, temperature_c), 1), len(levels) - 1) - 1
        under, over = levels[part], levels[part + 1]
        height = (temperature_c - under) / (over - under) if over > under else 1.0
        a, b = (liquid_at(s.liquids[part], height) for s in (one, two))
        return run.fields[part], a + share * (b - a)


def liquid_at(liquids: Liquids, height: float) -> float:
    """Liquid fraction at a relative height of a stretch."""
    if len(liquids) == 1:
        return liquids[0]
    k = min(max(bisect_right(HEIGHTS, height), 1), len(HEIGHTS) - 1)
    low, high = HEIGHTS[k - 1], HEIGHTS[k]
    return liquids[k - 1] + (liquids[k] - liquids[k - 1]) * (height - low) / (high - low)
