"""Reads the parameter files (data/assessments/*.json) into systems of phases, with their provenance."""

import json
from dataclasses import dataclass
from functools import cache
from importlib.resources import files
from typing import Any

from diagrams.errors import DataFault, UnknownDiagram
from diagrams.gibbs import TERMS, Compound, Energy, Names, Phase, Solution, System

FOLDER = files("diagrams") / "data" / "assessments"


@dataclass(frozen=True)
class Assessment:
    """One parameter file: the system, the range it may be served in, and where it comes from."""

    id: str
    system: System
    edition: str
    temperature_range_c: tuple[float, float]
    second_wt_range: tuple[float, float]
    sources: tuple[dict[str, str], ...]
    changes: str
    fitted_to: tuple[str, ...]
    notes: tuple[str, ...]


def assessment_ids() -> tuple[str, ...]:
    """Ids of all stored parameter files, sorted."""
    names = (entry.name for entry in FOLDER.iterdir())
    return tuple(sorted(n[:-5] for n in names if n.endswith(".json") and n != "elements.json"))


@cache
def read_assessment(diagram_id: str) -> Assessment:
    """Read one parameter file; raises UnknownDiagram or DataFault."""
    entry = FOLDER / f"{diagram_id}.json"
    if diagram_id not in assessment_ids():
        raise UnknownDiagram(f"there are no parameters named {diagram_id}", field="id")
    return assessment_from(json.loads(entry.read_text(encoding="utf-8")))


def assessment_from(document: dict[str, Any]) -> Assessment:
    """Build an assessment from the parsed text of a parameter file."""
    first, second = document["elements"]
    phases = tuple(_phase(p, (first, second)) for p in document["phases"])
    served = document["served"]
    return Assessment(
        id=document["id"],
        system=System((first, second), phases, tuple(document.get("described_x", (0.0, 1.0)))),
        edition=document["edition"],
        temperature_range_c=tuple(served["temperature_c"]),
        second_wt_range=tuple(served["second_wt"]),
        sources=tuple(document["sources"]),
        changes=document["changes"],
        fitted_to=tuple(document["fitted_to"]),
        notes=tuple(document["notes"]),
    )


def _phase(document: dict[str, Any], elements: tuple[str, str]) -> Phase:
    names = Names(tuple((float(x), n) for x, n in document["names"]), document.get("spanning_name"))
    if document["type"] == "compound":
        return Compound(
            document["model"], document["kind"], names, float(document["x"]), _energy(document["energy"])
        )
    own = document.get("own_ends", {})
    first, second = (
        _energy(own[el]) if el in own else _element_energy(el, document["structure"]) for el in elements
    )
    low, high = document.get("window_x", (0.0, 1.0))
    return Solution(
        document["model"],
        document["kind"],
        names,
        (first, second),
        tuple(_energy(term) for term in document["interaction"]),
        (float(low), float(high)),
    )


@cache
def _element_document() -> dict[str, Any]:
    document: dict[str, Any] = json.loads((FOLDER / "elements.json").read_text(encoding="utf-8"))
    return document


@cache
def _element_energy(element: str, structure: str) -> Energy:
    try:
        return _energy(_element_document()["structures"][element][structure])
    except KeyError:
        raise DataFault(f"elements.json has no energy of {element} as {structure}") from None


def melting_points_c() -> dict[str, float]:
    """Melting point of each element in °C, as the parameter files use it."""
    return {el: t - 273.15 for el, t in _element_document()["melting_points_k"].items()}


def _energy(pieces: list[dict[str, Any]]) -> Energy:
    rows = []
    for piece in pieces:
        unknown = set(piece["terms"]) - set(TERMS)
        if unknown:
            raise DataFault(f"unknown terms {sorted(unknown)} in a parameter file")
        rows.append(tuple(float(piece["terms"].get(term, 0.0)) for term in TERMS))
    return Energy(tuple(float(p.get("below_k", "inf")) for p in pieces), tuple(rows))
