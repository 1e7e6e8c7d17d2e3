"""Choosing among the standard fillers by what they hold, when they melt and who lists them."""

from collections.abc import Iterable, Mapping
from functools import cache

from diagrams.elements import symbol
from diagrams.errors import InvalidInput
from diagrams.fillers import Filler, designation_key, fillers
from service.process.placed import placed
from service.schemas.alloy import AlloyAsked
from service.schemas.fillers import FillersWanted


@cache
def covered() -> Mapping[str, str]:
    """Id of the data by name of the filler, for all fillers whose melting is computed."""
    sources = {f.name: placed(AlloyAsked(designation=f.name)).source for f in fillers()}
    return {name: source.diagram for name, source in sources.items() if source.method != "standard table"}


def choose(wanted: FillersWanted) -> list[Filler]:
    """The fillers that meet every condition, in the order of the table.

    Raises InvalidComposition for an unknown symbol, InvalidInput for conditions that exclude each other.
    """
    contains, without = _symbols(wanted.contains, "contains"), _symbols(wanted.without, "without")
    if both := contains & without:
        raise InvalidInput(
            f"{', '.join(sorted(both))} is wanted and barred at once.",
            field="without",
            remedy="Name an element in contains or in without, not in both.",
        )
    for name, low, high in (
        ("liquidus", wanted.liquidus_min_c, wanted.liquidus_max_c),
        ("brazing", wanted.brazing_min_c, wanted.brazing_max_c),
    ):
        if low is not None and high is not None and low > high:
            raise InvalidInput(
                f"{name}_min_c ({low:g}) is greater than {name}_max_c ({high:g}).",
                field=f"{name}_min_c",
                remedy="Give a lowest that is not above the highest.",
            )
    return [f for f in fillers() if _holds(f, contains, without) and _meets(f, wanted)]


def elements_told_of(chosen: Iterable[Filler], wanted: FillersWanted) -> frozenset[str]:
    """The elements that the chosen fillers hold or may hold, and those asked for."""
    held = {el for filler in chosen for el in (*filler.composition_wt, *filler.limits_wt)}
    return frozenset(held) | _symbols(wanted.contains, "contains")


def _symbols(text: str | None, field: str) -> frozenset[str]:
    return frozenset(symbol(part[:40].strip(), field) for part in text.split(",")) if text else frozenset()


def _holds(filler: Filler, contains: frozenset[str], without: frozenset[str]) -> bool:
    """An element the standard allows counts as held where it is barred (tin in RBCuZn-A)."""
    held = filler.composition_wt.keys() | {el for el, (_, highest) in filler.limits_wt.items() if highest > 0}
    return contains <= filler.composition_wt.keys() and not without & held


def _meets(filler: Filler, wanted: FillersWanted) -> bool:
    return (
        (wanted.standard is None or wanted.standard in filler.designations)
        and (wanted.class_ is None or filler.class_ == wanted.class_)
        and (wanted.lead_free is None or filler.lead_bearing is not wanted.lead_free)
        and (wanted.cadmium_free is None or filler.cadmium_bearing is not wanted.cadmium_free)
        and (wanted.solidus_min_c is None or filler.solidus_c >= wanted.solidus_min_c)
        and (wanted.liquidus_min_c is None or filler.liquidus_c >= wanted.liquidus_min_c)
        and (wanted.liquidus_max_c is None or filler.liquidus_c <= wanted.liquidus_max_c)
        and _brazed_within(filler, wanted)
        and (wanted.covered is None or (filler.name in covered()) is wanted.covered)
        and (not wanted.search or _mentions(filler, wanted.search))
    )


def _brazed_within(filler: Filler, wanted: FillersWanted) -> bool:
    """A filler without a brazing range meets no condition on it."""
    conditions = (wanted.brazed_at_c, wanted.brazing_min_c, wanted.brazing_max_c)
    if all(condition is None for condition in conditions):
        return True
    if filler.brazing_range_c is None:
        return False
    at_c, least_c, most_c = conditions
    low_c, high_c = filler.brazing_range_c
    return (
        (at_c is None or low_c <= at_c <= high_c)
        and (least_c is None or low_c >= least_c)
        and (most_c is None or high_c <= most_c)
    )


def _mentions(filler: Filler, text: str) -> bool:
    """In a name or designation as designations are compared, or in the notes as written."""
    names = (filler.name, filler.also_named or "", *filler.designations.values())
    key = designation_key(text)
    return (bool(key) and any(key in designation_key(n) for n in names)) or (
        text.casefold() in filler.notes.casefold()
    )
