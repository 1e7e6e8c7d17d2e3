"""An alloy made ready for questions: found, placed on its diagram, and kept, since most are asked again."""

from collections.abc import Iterator
from contextlib import contextmanager
from dataclasses import dataclass
from functools import lru_cache

from diagrams.alloys import Alloy, parse_alloy
from diagrams.errors import DiagramsError
from diagrams.files.catalog import catalog
from diagrams.fillers import Filler
from diagrams.questions.locate import check_composition, locate
from diagrams.questions.place import Place, place
from service.safety import Process
from service.schemas.alloy import AlloyAsked, AlloyUsed, Amounts, Form, alloy_of, alloy_shown
from service.schemas.base import within
from service.schemas.source import SourceUsed, polygon_source

BRAZING_FROM_C = 450.0  # liquidus from which joining is called brazing (AWS A3.0, ISO 857-2), from memory
_ABOUT_THE_ALLOY = frozenset({"", "alloy", "composition_wt", "tolerance_wt"})


@dataclass(frozen=True, eq=False, slots=True)
class Placed:
    """An alloy on its diagram; `field` and `tolerance_field` are what an error about it has to name."""

    alloy: Alloy
    place: Place
    process: Process | None
    elements: frozenset[str]
    shown: AlloyUsed
    source: SourceUsed
    field: str
    tolerance_field: str

    @property
    def second(self) -> str:
        """Symbol of the element whose mass percent is the diagram's axis."""
        return self.place.diagram.elements[1]

    @property
    def has_tolerance(self) -> bool:
        """Whether the alloy may lie beside its nominal composition."""
        return self.place.low_wt < self.place.high_wt


def placed(asked: AlloyAsked, where: str = "alloy") -> Placed:
    """The alloy of a body; `where` is the path of the alloy in it, for errors.

    Raises UnknownAlloy, InvalidComposition, InvalidInput, NotCovered, OutsideData.
    """
    with within(where):
        return _placed(*asked.key)


def placed_text(text: str) -> Placed:
    """The alloy of an address line; raises as `placed` does, and names the field `alloy`."""
    return _placed_text(text)


@contextmanager
def about(subject: Placed, where: str = "") -> Iterator[None]:
    """Make errors about an alloy name the field in which it was given; other errors keep theirs.

    The nominal composition is known to lie within the data, so a composition beyond them is the tolerance's.
    """
    try:
        yield
    except DiagramsError as error:
        if error.field in _ABOUT_THE_ALLOY:
            own = subject.tolerance_field if error.field.endswith("_wt") else subject.field
            error.field = ".".join(filter(None, (where, own)))
        raise


@lru_cache(maxsize=4096)
def _placed(form: Form, value: str | Amounts, tolerance: Amounts | None) -> Placed:
    return _place(alloy_of(form, value, tolerance), form, form if tolerance is None else "tolerance_wt")


@lru_cache(maxsize=4096)
def _placed_text(text: str) -> Placed:
    return _place(parse_alloy(text), "alloy", "alloy")


def _place(alloy: Alloy, field: str, tolerance_field: str) -> Placed:
    try:
        found = place(catalog(), alloy)
        check_composition(found.diagram, found.second_wt)
    except DiagramsError as error:
        error.field = tolerance_field if error.field == "tolerance_wt" else field
        if alloy.filler is not None:
            error.remedy = f"{tabulated(alloy.filler)} {error.remedy}".strip()
        raise
    return Placed(
        alloy,
        found,
        _process(alloy, found),
        frozenset(alloy.composition_wt),
        alloy_shown(alloy),
        polygon_source(found.diagram),
        field,
        tolerance_field,
    )


def tabulated(filler: Filler) -> str:
    """The melting range of the filler table in words."""
    return (
        f"The filler table gives {filler.name} a solidus of {filler.solidus_c:g} °C "
        f"and a liquidus of {filler.liquidus_c:g} °C ({filler.source}, {filler.how})."
    )


def _process(alloy: Alloy, found: Place) -> Process | None:
    """Solder or braze: as the table says, else by the liquidus; None if that lies beyond the data.

    One look at the border temperature tells as much as the liquidus itself, and costs far less.
    """
    if alloy.filler is not None:
        return "braze" if alloy.filler.class_ == "braze" else "solder"
    lowest_c, highest_c = found.diagram.temperature_range_c
    looked_c = min(max(BRAZING_FROM_C, lowest_c), highest_c)
    molten = locate(found.diagram, found.second_wt, looked_c).liquid_mass_fraction >= 1.0
    if molten:
        return "solder" if looked_c <= BRAZING_FROM_C else None
    return "braze" if looked_c >= BRAZING_FROM_C else None
