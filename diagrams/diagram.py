"""A phase diagram as it is served: regions as polygons, x = wt% of the second element, y = °C. Immutable."""

from collections.abc import Mapping
from dataclasses import dataclass, field
from functools import cached_property
from types import MappingProxyType
from typing import Literal

import shapely

from diagrams.sources import Source

RegionKind = Literal["liquid", "solid"]


@dataclass(frozen=True, eq=False)
class Region:
    """One field of the diagram. `phases`, `kinds` and `models` run alike, left phase first.

    Where the edge of the stored range cuts tie lines off, their true ends are kept: `beyond_wt` gives the
    composition of a line compound, `beyond_line` the border of a solution as points (wt%, °C), upwards.
    """

    phases: tuple[str, ...]
    kinds: tuple[RegionKind, ...]
    models: tuple[str, ...]
    polygon: shapely.Polygon
    beyond_wt: Mapping[str, float] = field(default_factory=lambda: MappingProxyType({}))
    beyond_line: Mapping[str, tuple[tuple[float, float], ...]] = field(
        default_factory=lambda: MappingProxyType({})
    )

    @cached_property
    def name(self) -> str:
        """The field's name, such as `L + (Pb)`: the liquid stands first."""
        order = sorted(range(len(self.phases)), key=lambda k: self.kinds[k] != "liquid")
        return " + ".join(self.phases[k] for k in order)


@dataclass(frozen=True)
class Invariant:
    """A temperature at which the phases present change all at once, with the composition of each in wt%."""

    kind: str
    temperature_c: float
    reaction: str
    compositions_wt: Mapping[str, float]


@dataclass(frozen=True)
class LineCompound:
    """A phase of fixed composition, without width: it has no polygon of its own."""

    name: str
    second_wt: float
    from_c: float
    to_c: float


@dataclass(frozen=True, eq=False)
class Diagram:
    """A binary phase diagram with its provenance."""

    id: str
    elements: tuple[str, str]
    kind: Literal["parameters", "points"]
    temperature_range_c: tuple[float, float]
    composition_range_wt: tuple[float, float]
    edition: str
    sources: tuple[Source, ...]
    notes: tuple[str, ...]
    regions: tuple[Region, ...]
    invariants: tuple[Invariant, ...]
    compounds: tuple[LineCompound, ...]
