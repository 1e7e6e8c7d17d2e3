"""Where an alloy of many elements lies: its system, whether that is served there, the prepared minimiser."""

from collections.abc import Iterable, Mapping
from dataclasses import dataclass
from functools import cache, cached_property, lru_cache

from diagrams.alloys import Alloy
from diagrams.errors import NotCovered, OutsideData
from diagrams.many.reading import SystemFile, read_system, served_temperatures_c, some_elements, system_ids
from diagrams.many.sample import Sample


@dataclass(frozen=True, eq=False)
class ManyPlace:
    """Some elements (sorted) of a system file."""

    file: SystemFile
    elements: tuple[str, ...]

    @property
    def temperature_range_c(self) -> tuple[float, float]:
        """What the data are good for, °C."""
        return served_temperatures_c(self.file, self.elements)

    @cached_property
    def sample(self) -> Sample:
        """The minimiser made ready, which takes a moment; done when first needed."""
        return Sample(some_elements(self.file, self.elements))


@cache
def covered_systems() -> tuple[frozenset[str], ...]:
    """The sets of elements that system files cover."""
    return tuple(frozenset(read_system(system_id).elements) for system_id in system_ids())


def place_many(alloy: Alloy) -> ManyPlace:
    """The system of an alloy of two or more elements; NotCovered, or OutsideData for its composition."""
    found = prepared(tuple(sorted(alloy.composition_wt)))
    check_served(found.file, alloy.composition_wt)
    return found


def check_served(file: SystemFile, composition_wt: Mapping[str, float]) -> None:
    """Raise OutsideData where a composition lies beyond what a system is good for."""
    for limit in file.limits:
        if not set(limit.elements) <= composition_wt.keys():
            continue
        whole = sum(composition_wt.get(el, 0.0) for el in limit.of)
        share = 100.0 * composition_wt[limit.element] / whole
        if not limit.low <= share <= limit.high:
            among = "" if len(limit.of) == len(file.elements) else f" of {' and '.join(limit.of)}"
            raise OutsideData(
                f"{share:.4g} wt% {limit.element}{among} lies outside the data of {file.id}, which reach "
                f"from {limit.low:g} to {limit.high:g} wt%.",
                field="composition_wt",
                remedy=f"Ask between {limit.low:g} and {limit.high:g} wt% {limit.element}{among}.",
            )


@lru_cache(maxsize=64)
def prepared(elements: tuple[str, ...]) -> ManyPlace:
    """The system of sorted elements; NotCovered where none holds all."""
    return ManyPlace(_system_of(elements), elements)


def _system_of(elements: Iterable[str]) -> SystemFile:
    wanted = frozenset(elements)
    for system_id in system_ids():
        file = read_system(system_id)
        if wanted <= frozenset(file.elements):
            return file
    systems = "; ".join("–".join(read_system(system_id).elements) for system_id in system_ids())
    raise NotCovered(
        f"No stored data cover {', '.join(sorted(wanted))} together.",
        field="alloy",
        remedy=f"Covered together, besides the pairs of the diagrams: {systems}.",
    )
