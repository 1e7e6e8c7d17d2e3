"""Reads the systems of many elements (data/systems/*.json): pair terms come from the binaries' own files.

A system file adds only what lies beyond the binaries. Some of its elements alone make a system of their own;
two that have a stored binary give exactly that binary.
"""

import json
from collections.abc import Iterable, Iterator, Mapping
from dataclasses import dataclass
from functools import cache
from importlib.resources import files
from itertools import combinations
from typing import Any

import numpy as np

from diagrams.errors import DataFault, UnknownDiagram
from diagrams.files.assessments import Assessment, _energy, assessment_from, read_assessment
from diagrams.gibbs import Compound, Energy, Floats, Solution
from diagrams.many.system import Fixed, ManySystem, Mixed, Naming, Pair, Triple

FOLDER = files("diagrams") / "data" / "systems"
OPEN_SHARE = 0.95  # limit of an element towards another where only a third one sets it a limit

Couple = tuple[str, str]


@dataclass(frozen=True)
class Limit:
    """Where all of `elements` are present, `low` ≤ 100 · wt(element) / Σ wt(of) ≤ `high`."""

    elements: tuple[str, ...]
    element: str
    of: tuple[str, ...]
    low: float
    high: float


@dataclass(frozen=True)
class SystemFile:
    """One system file: provenance, served range, the binaries it rests on and what it adds to them."""

    id: str
    elements: tuple[str, ...]
    edition: str
    temperature_range_c: tuple[float, float]
    limits: tuple[Limit, ...]
    sources: tuple[dict[str, str], ...]
    changes: str
    fitted_to: tuple[str, ...]
    notes: tuple[str, ...]
    binaries: Mapping[Couple, Assessment]
    additions: Mapping[Couple, tuple[Assessment, bool]]
    phases: tuple[Mapping[str, Any], ...]
    triples: Mapping[str, Mapping[tuple[str, str, str], tuple[Energy, Energy, Energy]]]


def system_ids() -> tuple[str, ...]:
    """Ids of all system files, sorted."""
    return tuple(sorted(e.name[:-5] for e in FOLDER.iterdir() if e.name.endswith(".json")))


@cache
def read_system(system_id: str) -> SystemFile:
    """Read one system file; raises UnknownDiagram or DataFault."""
    if system_id not in system_ids():
        raise UnknownDiagram(f"there is no system named {system_id}", field="id")
    return system_from(json.loads((FOLDER / f"{system_id}.json").read_text(encoding="utf-8")))


def system_from(document: Mapping[str, Any]) -> SystemFile:
    """Build a system from the parsed text of a system file."""
    binaries = {a.system.elements: a for a in map(read_assessment, document["binaries"])}
    additions = {}
    for addition in document["additions"]:
        couple = _couple(addition["elements"])
        bare = {"id": "-".join(couple), "edition": "", "sources": [], "changes": "", "fitted_to": []}
        served = {"temperature_c": [0, 0], "second_wt": [0, 100]}
        part = assessment_from({**bare, "notes": [], "served": served, **addition})
        for phase in part.system.phases:
            if couple in binaries and _solution(binaries[couple], phase.model, document["phases"]):
                raise DataFault(f"{document['id']} and a binary both give {phase.model} of {couple}")
        additions[couple] = (part, bool(addition["forms"]))
    triples: dict[str, dict[tuple[str, str, str], tuple[Energy, Energy, Energy]]] = {}
    for triple in document["triples"]:
        first, second, third = sorted(triple["elements"])
        terms = [_energy(term) for term in triple["interaction"]]
        triples.setdefault(triple["model"], {})[first, second, third] = (terms[0], terms[1], terms[2])
    served = document["served"]
    limits = [
        Limit(tuple(item["with"]), item["element"], tuple(item["of"]), *item["wt"])
        for item in served["composition"]
    ]
    limits += [
        Limit(c, c[1], c, *a.second_wt_range) for c, a in binaries.items() if a.second_wt_range != (0, 100)
    ]
    low, high = served["temperature_c"]
    return SystemFile(
        id=document["id"],
        elements=tuple(document["elements"]),
        edition=document["edition"],
        temperature_range_c=(float(low), float(high)),
        limits=tuple(limits),
        sources=tuple(document["sources"]),
        changes=document["changes"],
        fitted_to=tuple(document["fitted_to"]),
        notes=tuple(document["notes"]),
        binaries=binaries,
        additions=additions,
        phases=tuple(document["phases"]),
        triples=triples,
    )


def served_temperatures_c(file: SystemFile, elements: tuple[str, ...]) -> tuple[float, float]:
    """Range of °C in which some elements of a system are served: a binary's own, else what all can bear."""
    if len(elements) == 2 and _couple(elements) in file.binaries:
        return file.binaries[_couple(elements)].temperature_range_c
    tops = [a.temperature_range_c[1] for c, a in file.binaries.items() if set(c) <= set(elements)]
    return file.temperature_range_c[0], min([file.temperature_range_c[1], *tops])


def some_elements(file: SystemFile, elements: tuple[str, ...]) -> ManySystem:
    """The system of some of a file's elements, which must be sorted."""
    mixed = [m for p in file.phases if (m := _mixed(file, p, elements)) is not None]
    fixed = []
    for couple, binary in file.binaries.items():
        if not set(couple) <= set(elements):
            continue
        low, high = binary.system.x_range
        for phase in binary.system.phases:
            if isinstance(phase, Compound) and low <= phase.x <= high:
                x = np.zeros(len(elements))
                x[elements.index(couple[0])], x[elements.index(couple[1])] = 1.0 - phase.x, phase.x
                fixed.append(Fixed(phase.model, phase.kind, phase.names.at(phase.x), x, phase.energy))
    return ManySystem(elements, mixed, fixed)


def _couple(elements: Iterable[str]) -> Couple:
    first, second = sorted(elements)
    return first, second


def _solution(part: Assessment, model: str, phases: Iterable[Mapping[str, Any]]) -> Solution | None:
    """A binary's solution that a phase of the system continues; `called` says its name there if another."""
    called: Mapping[str, str] = next((p.get("called", {}) for p in phases if p["model"] == model), {})
    for phase in part.system.phases:
        if isinstance(phase, Solution) and phase.model == called.get(part.id, model):
            owner = [p["model"] for p in phases if p.get("called", {}).get(part.id) == phase.model]
            return phase if not owner or owner == [model] else None
    return None


@dataclass(frozen=True)
class _Part:
    """The solution that gives a phase its terms for a pair, and whether the pair forms it."""

    couple: Couple
    solution: Solution
    forms: bool
    stored: bool


def _parts(file: SystemFile, model: str, within: Iterable[str]) -> Iterator[_Part]:
    for couple in combinations(sorted(within), 2):
        if couple in file.binaries:
            found = _solution(file.binaries[couple], model, file.phases)
            if found is not None:
                yield _Part(couple, found, forms=True, stored=True)
                continue
        if couple in file.additions:
            part, forms = file.additions[couple]
            for phase in part.system.phases:
                if isinstance(phase, Solution) and phase.model == model:
                    yield _Part(couple, phase, forms, stored=False)


def _ends(file: SystemFile, model: str, element: str, parts: list[_Part]) -> Energy:
    """Energy of an element in a phase: what the binaries say, else what the additions say."""
    given = [p for p in parts if element in p.couple]
    energies = [p.solution.ends[p.couple.index(element)] for p in sorted(given, key=lambda p: not p.stored)]
    if not energies:
        raise DataFault(f"{file.id}: no energy of {element} as {model}")
    for part, energy in zip(sorted(given, key=lambda p: not p.stored), energies, strict=True):
        if part.stored and any(energy(t) != energies[0](t) for t in (400.0, 900.0)):
            raise DataFault(f"{file.id}: the binaries disagree on {element} as {model}")
    return energies[0]


def _mixed(file: SystemFile, document: Mapping[str, Any], elements: tuple[str, ...]) -> Mixed | None:
    model = document["model"]
    able = [el for el in file.elements if el in document.get("members", file.elements)]
    members = [el for el in able if el in elements]
    if not members or set(document.get("left_out_with", ["none"])) <= set(elements):
        return None
    everything = list(_parts(file, model, able))
    here = [part for part in everything if set(part.couple) <= set(members)]
    forming = here if len(elements) > 1 else [p for p in everything if members[0] in p.couple]
    if not any(part.forms for part in forming):
        return None
    pairs: list[Pair] = [
        (members.index(p.couple[0]), members.index(p.couple[1]), p.solution.interaction)
        for p in here
        if p.solution.interaction
    ]
    triples: list[Triple] = [
        (members.index(a), members.index(b), members.index(c), terms)
        for (a, b, c), terms in file.triples.get(model, {}).items()
        if {a, b, c} <= set(members)
    ]
    naming = document["names"]
    steps = tuple((float(x), name) for x, name in naming.get("steps", []))
    return Mixed(
        model,
        everything[0].solution.kind,
        Naming(naming.get("element"), steps, naming.get("alone")),
        [elements.index(el) for el in members],
        [_ends(file, model, el, everything) for el in members],
        pairs,
        triples,
        _windows(members, here),
    )


def _windows(members: list[str], parts: list[_Part]) -> Floats:
    """Limits on the second element of pairs as rows · x ≥ 0, straight between the pairs' own limits."""
    rows = []
    limits = {part.couple: part.solution.window for part in parts}
    for element in members:
        towards = {el: limits.get((el, element), (0.0, 1.0)) for el in members if el != element}
        if any(high < 1.0 for _, high in towards.values()):
            row = np.full(len(members), -1.0)
            for el, (_, high) in towards.items():
                most = min(high, OPEN_SHARE) if len(members) > 2 else high
                row[members.index(el)] = most / (1.0 - most)
            rows.append(row)
        if any(low > 0.0 for low, _ in towards.values()):
            row = np.ones(len(members))
            for el, (low, _) in towards.items():
                row[members.index(el)] = -low / (1.0 - low)
            rows.append(row)
    return np.array(rows).reshape(len(rows), len(members))
