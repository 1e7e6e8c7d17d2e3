"""What cautions are asked for: the elements of an alloy or diagram, and how the alloy is worked."""

from diagrams.alloys import parse_alloy
from diagrams.errors import NotCovered, OutsideData, UnknownDiagram
from diagrams.files.catalog import catalog
from service.process.placed import placed_text
from service.safety import Process


def subject_of(alloy: str | None, diagram: str | None) -> tuple[frozenset[str], Process | None]:
    """The elements and, where it is known, the process; both empty where nothing is asked about.

    Raises UnknownAlloy, InvalidComposition, UnknownDiagram.
    """
    elements, process = _of_alloy(alloy) if alloy is not None else (frozenset[str](), None)
    return elements | (_elements_of(diagram) if diagram is not None else frozenset()), process


def _elements_of(diagram: str) -> frozenset[str]:
    try:
        return frozenset(catalog().get(diagram).elements)
    except UnknownDiagram as error:
        error.field = "diagram"
        raise


def _of_alloy(text: str) -> tuple[frozenset[str], Process | None]:
    try:
        found = placed_text(text)
    except (NotCovered, OutsideData):  # no data tell how it melts; the cautions hold all the same
        return frozenset(parse_alloy(text).composition_wt), None
    return found.elements, found.process
