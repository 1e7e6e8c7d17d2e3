"""Where an alloy lies: its diagram, its composition on it, and the interval its tolerance allows."""

from dataclasses import dataclass

from diagrams.alloys import Alloy
from diagrams.diagram import Diagram
from diagrams.errors import InvalidComposition
from diagrams.files.catalog import Catalog


@dataclass(frozen=True)
class Place:
    """An alloy on a binary diagram: nominal, lowest and highest wt% of the second element."""

    diagram: Diagram
    second_wt: float
    low_wt: float
    high_wt: float


def place(catalog: Catalog, alloy: Alloy) -> Place:
    """Find the stored diagram of an alloy of one or two elements; NotCovered if there is none.

    Limits of both elements are met together. A pure metal is taken as pure: what its standard allows as
    impurity is unnamed and has no place on a binary diagram.
    """
    diagram = catalog.for_elements(alloy.composition_wt)
    first, second = diagram.elements
    nominal = alloy.composition_wt.get(second, 0.0)
    if len(alloy.composition_wt) == 1:
        return Place(diagram, nominal, nominal, nominal)
    low, high = 0.0, 100.0
    if second in alloy.limits_wt:
        low, high = alloy.limits_wt[second]
    if first in alloy.limits_wt:
        lowest, highest = alloy.limits_wt[first]
        low, high = max(low, 100.0 - highest), min(high, 100.0 - lowest)
    if not {first, second} & set(alloy.limits_wt):  # limits of other elements say nothing here
        low = high = nominal
    if not low <= nominal <= high:
        raise InvalidComposition(
            f"The nominal {nominal:g} wt% {second} lies outside the limits {low:g} to {high:g} wt%.",
            field="tolerance_wt",
            remedy="Give limits that hold the nominal composition.",
        )
    return Place(diagram, nominal, low, high)
