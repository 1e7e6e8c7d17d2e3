"""An alloy made ready for questions: with the data that tell of it, and kept, since most are asked again."""

from collections.abc import Iterator
from contextlib import contextmanager
from dataclasses import dataclass, replace
from functools import lru_cache
from types import MappingProxyType

from diagrams.alloys import Alloy, alloy_from_designation, parse_alloy
from diagrams.comparison import compared
from diagrams.errors import DiagramsError, NotCovered, OutsideData
from diagrams.files.catalog import catalog
from diagrams.fillers import Filler
from diagrams.questions.by_table import ByTable
from diagrams.questions.melt import melter_for
from diagrams.questions.melter import Melter
from service.process.alloy_notes import check_tolerance, notes_on
from service.safety import Process
from service.schemas.alloy import AlloyAsked, AlloyUsed, Amounts, Form, alloy_of, alloy_shown
from service.schemas.base import within
from service.schemas.source import SourceUsed, source_of

BRAZING_FROM_C = 450.0  # liquidus from which joining is called brazing (AWS A3.0, ISO 857-2), from memory
_ABOUT_THE_ALLOY = frozenset({"", "alloy", "composition_wt", "tolerance_wt"})
_NO_LIMITS = MappingProxyType[str, tuple[float, float]]({})


@dataclass(frozen=True, eq=False, slots=True)
class Placed:
    """An alloy with its data; `field` and `tolerance_field` are what an error about it has to name."""

    alloy: Alloy
    melter: Melter
    process: Process | None
    elements: frozenset[str]
    shown: AlloyUsed
    source: SourceUsed
    field: str
    tolerance_field: str


def placed(asked: AlloyAsked, where: str = "alloy") -> Placed:
    """The alloy of a body; `where` is the path of the alloy in it, for errors.

    Raises UnknownAlloy, InvalidComposition, InvalidInput, NotCovered, OutsideData.
    """
    with within(where):
        return _placed(*asked.key)


def placed_text(
    text: str, leave_out_below_wt: float | None = None, tolerance: Amounts | None = None
) -> Placed:
    """The alloy of an address line; raises as `placed` does, naming `alloy` or `tolerance_wt`."""
    return _placed_text(text, leave_out_below_wt, tolerance)


def placed_or_known(asked: AlloyAsked, where: str) -> tuple[Placed | None, Alloy]:
    """As `placed`, with the alloy beside it; None where no data tell of the melting of an alloy."""
    try:
        found = placed(asked, where)
    except (NotCovered, OutsideData):
        with within(where):
            form, value, tolerance, _ = asked.key
            return None, alloy_of(form, value, tolerance)
    return found, found.alloy


@lru_cache(maxsize=1024)
def placed_alloy(alloy: Alloy, field: str, leave_out_below_wt: float | None = None) -> Placed:
    """An alloy that comes of a computation; errors about it name `field`."""
    return _place(alloy, field, field, leave_out_below_wt)


@lru_cache(maxsize=256)
def printed(filler: Filler) -> Placed:
    """A filler by two temperatures: its print, or where the data put it, the less favourable of both."""
    alloy = alloy_from_designation(filler.name)
    melter = ByTable(alloy, _less_favourable(filler))
    return Placed(
        alloy,
        melter,
        _process(melter),
        frozenset(alloy.composition_wt),
        alloy_shown(replace(alloy, limits_wt=_NO_LIMITS), {}, notes_on(alloy, melter, {})),
        source_of(melter),
        "designation",
        "designation",
    )


def _less_favourable(filler: Filler) -> Filler:
    for row in compared():
        if row.filler == filler.name:
            solidus_c = filler.solidus_c + min(0.0, row.solidus_off_c)
            liquidus_c = filler.liquidus_c + max(0.0, row.liquidus_off_c)
            return replace(filler, solidus_c=solidus_c, liquidus_c=liquidus_c)
    return filler


def is_quick(asked: AlloyAsked | str) -> bool:
    """Whether answers about an alloy are read off a diagram or table, at once; else they are computed."""
    try:
        return _is_quick(*asked.key[:2]) if isinstance(asked, AlloyAsked) else _is_quick("designation", asked)
    except DiagramsError:
        return True  # will be refused


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
def _is_quick(form: Form, value: str | Amounts) -> bool:
    alloy = parse_alloy(value) if isinstance(value, str) else alloy_of(form, value, None)
    return len(alloy.composition_wt) <= 2


@lru_cache(maxsize=4096)
def _placed(
    form: Form, value: str | Amounts, tolerance: Amounts | None, leave_out_below_wt: float | None
) -> Placed:
    alloy = alloy_of(form, value, tolerance)
    tolerance_field = form if tolerance is None else "tolerance_wt"
    return _place(alloy, form, tolerance_field, leave_out_below_wt, tolerance or ())


@lru_cache(maxsize=4096)
def _placed_text(text: str, leave_out_below_wt: float | None, tolerance: Amounts | None) -> Placed:
    if tolerance is None:
        return _place(parse_alloy(text), "alloy", "alloy", leave_out_below_wt)
    alloy = parse_alloy(text, dict(tolerance))
    return _place(alloy, "alloy", "tolerance_wt", leave_out_below_wt, tolerance)


def _place(
    alloy: Alloy,
    field: str,
    tolerance_field: str,
    leave_out_below_wt: float | None = None,
    tolerance: Amounts = (),
) -> Placed:
    try:
        check_tolerance(alloy, dict(tolerance))
        found = melter_for(catalog(), alloy, leave_out_below_wt)
    except DiagramsError as error:
        error.field = tolerance_field if error.field == "tolerance_wt" else field
        if alloy.filler is not None:
            error.remedy = f"{tabulated(alloy.filler)} {error.remedy}".strip()
        raise
    melter = found.melter
    reckoned = {el: pair for el, pair in melter.alloy.limits_wt.items() if el in melter.alloy.composition_wt}
    used = replace(melter.alloy, limits_wt=MappingProxyType(reckoned) if melter.limits_wt else _NO_LIMITS)
    return Placed(
        melter.alloy,
        melter,
        _process(melter),
        frozenset(alloy.composition_wt),
        alloy_shown(used, found.left_out_wt, notes_on(alloy, melter, dict(tolerance))),
        source_of(melter),
        field,
        tolerance_field,
    )


def tabulated(filler: Filler) -> str:
    """The melting range of the filler table in words."""
    return (
        f"The filler table gives {filler.name} a solidus of {filler.solidus_c:g} °C "
        f"and a liquidus of {filler.liquidus_c:g} °C ({filler.source}, {filler.how})."
    )


def _process(melter: Melter) -> Process | None:
    """Solder or braze: as the table says, else by the liquidus; None if that lies beyond the data."""
    filler = melter.alloy.filler
    if filler is not None:
        return "braze" if filler.class_ == "braze" else "solder"
    molten = melter.molten_at(BRAZING_FROM_C)
    return None if molten is None else "solder" if molten else "braze"
