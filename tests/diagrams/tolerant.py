"""Alloys of two elements with any interval of compositions, asked as the service asks."""

from diagrams.alloys import alloy_from_wt
from diagrams.files.catalog import catalog
from diagrams.questions.by_polygon import ByPolygon
from diagrams.questions.place import Place


def tolerant(diagram_id: str, nominal_wt: float, low_wt: float, high_wt: float) -> ByPolygon:
    """An alloy with wt% of the second element from low_wt to high_wt, not always in the middle."""
    diagram = catalog().get(diagram_id)
    first, second = diagram.elements
    alloy = alloy_from_wt({first: 100.0 - nominal_wt, second: nominal_wt})
    return ByPolygon(alloy, Place(diagram, nominal_wt, low_wt, high_wt))
