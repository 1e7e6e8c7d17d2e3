"""The stored sections: which lines are kept, and the sections read and gate-checked once."""

import json
from collections.abc import Mapping
from functools import cache
from types import MappingProxyType
from typing import Any

from diagrams.alloys import Alloy, parse_alloy
from diagrams.errors import DataFault
from diagrams.sections.build import build_section
from diagrams.sections.check import check_section
from diagrams.sections.line import Line, line_between
from diagrams.sections.section import Section
from diagrams.sections.store import FOLDER, LINES, from_text, stored_names, stored_text, to_text


@cache
def lines() -> Mapping[str, Mapping[str, Any]]:
    """What is to be stored, by name: `from_alloy`, `to_alloy`, `to_share_max`, `temperature_range_c`."""
    text = (FOLDER / LINES).read_text(encoding="utf-8")
    return MappingProxyType({item["name"]: item for item in json.loads(text)["lines"]})


def line_of(name: str) -> tuple[Line, Alloy, Alloy]:
    """The line of a stored section and its two alloys."""
    item = lines()[name]
    one, two = (parse_alloy(item[key]) for key in ("from_alloy", "to_alloy"))
    low, high = item["temperature_range_c"]
    line = line_between(one.composition_wt, two.composition_wt, item["to_share_max"], (low, high))
    return line, one, two


def named(alloy: Alloy) -> str:
    """How an alloy is called: its designation, or symbols with mass percent."""
    if alloy.designation is not None:
        return alloy.designation
    if len(alloy.composition_wt) == 1:
        return alloy.elements[0]
    return "".join(f"{el}{wt:.6g}" for el, wt in alloy.composition_wt.items())


def build(name: str) -> Section:
    """Compute a section that is to be stored; raises DataFault where it does not pass the gate."""
    line, one, two = line_of(name)
    section = build_section(line, name, named(one), named(two))
    check_section(section)
    return section


def build_text(name: str) -> str:
    """The text a section is stored as, computed anew."""
    return to_text(build(name))


@cache
def stored_sections() -> Mapping[str, Section]:
    """Every stored section by its id; raises DataFault if one does not pass the gate."""
    found = {}
    for name in stored_names():
        section = from_text(stored_text(name))
        if section.name != name:
            raise DataFault(f"{name}.json holds the section {section.name}")
        check_section(section)
        found[section.id] = section
    return MappingProxyType(found)
