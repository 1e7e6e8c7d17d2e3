"""Sections: stored ones, and others computed once and kept by their content."""

import threading
from collections import OrderedDict
from dataclasses import dataclass
from functools import lru_cache

from diagrams.errors import DataFault, InvalidInput, NotConverged, UnknownDiagram
from diagrams.figure_style import PictureFormat
from diagrams.sections.build import build_section, section_id
from diagrams.sections.check import check_section
from diagrams.sections.figure import draw_section
from diagrams.sections.line import Line, line_between
from diagrams.sections.section import Section
from diagrams.sections.shelf import named, stored_sections
from service.process.caution import caution_lines
from service.schemas.alloy import AlloyAsked, Amounts, Form, alloy_of
from service.schemas.base import within
from service.schemas.sections import SectionQuestion

MOST_KEPT = 32  # sections of about half a megabyte each
MOST_TOLD = 300  # characters of what went wrong
MOST_ELEMENTS = 4  # beyond, a section takes a minute and more


Key = tuple[Form, str | Amounts]


@dataclass(frozen=True, eq=False)
class Way:
    """A line that was asked for, with the id of its section and the names of its ends."""

    id: str
    line: Line
    from_name: str
    to_name: str


class _Kept:
    """Computed sections by id, the longest unasked dropped first; one is computed at a time."""

    def __init__(self) -> None:
        self._lock = threading.Lock()
        self._computing = threading.Lock()
        self._sections: OrderedDict[str, Section] = OrderedDict()

    def get(self, found_id: str) -> Section | None:
        """The one with this id, stored or kept."""
        stored = stored_sections().get(found_id)
        if stored is not None:
            return stored
        with self._lock:
            if found_id in self._sections:
                self._sections.move_to_end(found_id)
            return self._sections.get(found_id)

    def made(self, way: Way) -> Section:
        """The section of a line, computed if it is not there yet."""
        found = self.get(way.id)
        if found is not None:
            return found
        with self._computing:
            found = self.get(way.id)
            if found is None:
                found = _built(way)
                with self._lock:
                    self._sections[way.id] = found
                    while len(self._sections) > MOST_KEPT:
                        self._sections.popitem(last=False)
        return found


def _built(way: Way) -> Section:
    """Computed and past the gate; NotConverged where one of both fails."""
    try:
        found = build_section(way.line, way.id, way.from_name, way.to_name)
        check_section(found)
    except (NotConverged, DataFault) as error:
        remedy = "Ask for a shorter line or a narrower range of temperature, and report this one."
        told = f"This section could not be proven: {error}"
        raise NotConverged(told[:MOST_TOLD], field="to_alloy", remedy=remedy) from error
    return found


_kept = _Kept()


def section_of(question: SectionQuestion) -> Section:
    """The section asked for; raises InvalidInput, NotCovered, OutsideData, NotConverged naming the field."""
    asked = question.temperature_range_c
    if asked is not None and asked[0] >= asked[1]:
        raise InvalidInput(
            f"{asked[0]:g} to {asked[1]:g} °C is no range.",
            field="temperature_range_c.1",
            remedy="Give the lowest temperature first, then the highest.",
        )
    one, two = _key(question.from_alloy, "from_alloy"), _key(question.to_alloy, "to_alloy")
    way = _way(one, two, question.to_share_max, None if asked is None else (asked[0], asked[1]))
    return _kept.made(way)


@lru_cache(maxsize=256)
def _way(one: Key, two: Key, most: float, range_c: tuple[float, float] | None) -> Way:
    with within("from_alloy"):
        start = alloy_of(*one, None)
    with within("to_alloy"):
        end = alloy_of(*two, None)
    elements = {*start.composition_wt, *end.composition_wt}
    if len(elements) > MOST_ELEMENTS:
        raise InvalidInput(
            f"A section of {len(elements)} elements would take a minute and more; {MOST_ELEMENTS} are most.",
            field="to_alloy",
            remedy="Leave out an element, or take a stored section (GET /v1/sections).",
        )
    line = line_between(start.composition_wt, end.composition_wt, most, range_c)
    return Way(section_id(line), line, named(start), named(end))


def known_section(found_id: str) -> Section:
    """A stored section or one computed before; UnknownDiagram names `id`."""
    found = _kept.get(found_id)
    if found is None:
        raise UnknownDiagram(
            f"No section {found_id[:40]} is stored or still kept.",
            field="id",
            remedy="GET /v1/sections lists the stored ones; POST /v1/sections computes others.",
        )
    return found


@lru_cache(maxsize=32)
def section_picture(section: Section, form: PictureFormat) -> bytes:
    """Its picture."""
    return draw_section(section, caution_lines(section.elements), form)


def _key(asked: AlloyAsked, where: str) -> Key:
    with within(where):
        form, value, tolerance, _ = asked.key
        if tolerance:
            raise InvalidInput(
                "A section runs between two compositions; tolerances have no place in it.",
                field="tolerance_wt",
                remedy="Leave tolerance_wt out.",
            )
        return form, value
