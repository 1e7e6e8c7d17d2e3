"""The door for the melting of any alloy: finds the data that speak of it."""

from collections.abc import Mapping
from dataclasses import dataclass

from diagrams.alloys import Alloy
from diagrams.errors import NotCovered, OutsideData
from diagrams.files.catalog import Catalog
from diagrams.questions.by_minimisation import ByMinimisation
from diagrams.questions.by_polygon import ByPolygon
from diagrams.questions.by_table import ByTable
from diagrams.questions.locate import check_composition
from diagrams.questions.many_place import covered_systems
from diagrams.questions.melter import Melter
from diagrams.questions.place import place
from diagrams.questions.traces import without_traces


@dataclass(frozen=True)
class Found:
    """The data for an alloy, and the trace elements left out of it (wt%)."""

    melter: Melter
    left_out_wt: Mapping[str, float]


def melter_for(catalog: Catalog, alloy: Alloy, leave_out_below_wt: float | None = None) -> Found:
    """The data that tell how an alloy melts.

    A stored diagram where there is one, else minimisation; a filler outside both is answered from the table
    of its standards. Elements under `leave_out_below_wt` wt% that no data cover are left out. Raises
    NotCovered, OutsideData for a composition beyond the data, InvalidComposition for limits that miss the
    nominal.
    """
    left_out: Mapping[str, float] = {}
    if leave_out_below_wt is not None:
        alloy, left_out = without_traces(alloy, leave_out_below_wt, covered_together(catalog))
    try:
        return Found(_computed(catalog, alloy), left_out)
    except (NotCovered, OutsideData):
        if alloy.filler is None:
            raise
    if left_out:  # the table speaks of the filler as it is
        return melter_for(catalog, alloy)
    return Found(ByTable(alloy, alloy.filler), {})


def covered_together(catalog: Catalog) -> list[frozenset[str]]:
    """Sets of elements whose alloys are computed."""
    return [frozenset(diagram.elements) for diagram in catalog.diagrams.values()] + list(covered_systems())


def _computed(catalog: Catalog, alloy: Alloy) -> Melter:
    try:
        found = place(catalog, alloy)
    except NotCovered:
        if len(alloy.composition_wt) < 2:
            raise
        return ByMinimisation(alloy)
    check_composition(found.diagram, found.second_wt)
    return ByPolygon(alloy, found)
