"""Least squares on the ternary terms of a system of many elements, to melting ranges of alloys.

A spread holds each term near its start at the cost of one uncertainty, so that what the alloys say nothing
about stays small. A term with a spread of 0 is not free.
"""

import copy
import json
from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from functools import cache
from importlib.resources import files
from typing import Any

import numpy as np
from scipy.optimize import least_squares

from diagrams.errors import NotConverged, UnknownDiagram
from diagrams.gibbs import Floats
from diagrams.many.column import column
from diagrams.many.reading import some_elements, system_from
from diagrams.many.sample import Sample
from diagrams.units import celsius_to_kelvin, kelvin_to_celsius, wt_to_at

FOLDER = files("diagrams") / "data" / "system_fits"
REACH_C = (60.0, 420.0)  # temperatures between which the alloys of these fits melt
_STEP = 0.02  # of each spread, for differences
_MOST = 60

Pair = tuple[float, float]


@dataclass(frozen=True)
class Term:
    """One coefficient: of the triple `elements` in `model`, the one that goes with element `corner`.

    `spread` says how far from 0 it goes at the cost of one uncertainty; the search begins at `guess`.
    """

    elements: tuple[str, ...]
    model: str
    corner: int
    guess: float
    spread: float


@dataclass(frozen=True)
class Alloyed:
    """The melting range of an alloy: temperature and uncertainty (°C) of solidus and liquidus."""

    name: str
    composition_wt: Mapping[str, float]
    solidus_c: Pair
    liquidus_c: Pair
    filler: str | None


@dataclass(frozen=True)
class SystemFit:
    """One fit file."""

    id: str
    changes: str
    terms: tuple[Term, ...]
    targets: tuple[Alloyed, ...]


def system_fit_ids() -> tuple[str, ...]:
    """Ids of all stored fits of systems, sorted."""
    return tuple(sorted(entry.name[:-5] for entry in FOLDER.iterdir() if entry.name.endswith(".json")))


@cache
def read_system_fit(system_id: str) -> SystemFit:
    """Read one fit file; raises UnknownDiagram."""
    if system_id not in system_fit_ids():
        raise UnknownDiagram(f"there is no fit named {system_id}", field="id")
    document = json.loads((FOLDER / f"{system_id}.json").read_text(encoding="utf-8"))
    terms = [
        Term(tuple(free["elements"]), free["model"], k, float(guess), float(spread))
        for free in document["free"]
        for k, (guess, spread) in enumerate(zip(free["guess"], free["spread"], strict=True))
    ]
    targets = [
        Alloyed(t["name"], t["composition_wt"], tuple(t["solidus_c"]), tuple(t["liquidus_c"]), t["filler"])
        for t in document["targets"]
    ]
    return SystemFit(document["id"], document["changes"], tuple(terms), tuple(targets))


def melting_ranges_c(fit: SystemFit, document: Mapping[str, Any]) -> list[Pair]:
    """Solidus and liquidus of every target with the parameters of a parsed system file."""
    system = system_from(document)
    samples: dict[tuple[str, ...], Sample] = {}
    low_k, high_k = (celsius_to_kelvin(c) for c in REACH_C)
    found = []
    for target in fit.targets:
        elements = tuple(sorted(target.composition_wt))
        if elements not in samples:
            samples[elements] = Sample(some_elements(system, elements))
        at = wt_to_at(target.composition_wt)
        whole = column(samples[elements], np.array([at[el] / 100.0 for el in elements]), low_k, high_k)
        melts = next(s for s in whole.stretches if s.liquid[-1] > 0.0)
        molten = next(s for s in whole.stretches if s.liquid[0] >= 1.0)
        found.append((kelvin_to_celsius(melts.low_k), kelvin_to_celsius(molten.low_k)))
    return found


def misses(fit: SystemFit, ranges_c: Sequence[Pair], steps: Floats) -> Floats:
    """How far off each temperature is, in its uncertainty, then how far each term moved, in its spread."""
    off = [
        (reached - aim) / uncertainty
        for target, found in zip(fit.targets, ranges_c, strict=True)
        for reached, (aim, uncertainty) in zip(found, (target.solidus_c, target.liquidus_c), strict=True)
    ]
    return np.concatenate([off, steps])


def run_system_fit(fit: SystemFit, document: Mapping[str, Any]) -> tuple[float, ...]:
    """All coefficients in J/mol, the free ones fitted; NotConverged if the least squares do not settle."""

    def residuals(steps: Floats) -> Floats:
        return misses(fit, melting_ranges_c(fit, with_terms(fit, document, values(fit, steps))), steps)

    def slopes(steps: Floats) -> Floats:
        moves = _STEP * np.eye(len(steps))
        here = residuals(steps)
        return np.stack([(residuals(steps + move) - here) / _STEP for move in moves], axis=1)

    first = np.array([term.guess / term.spread for term in fit.terms if term.spread])
    found = least_squares(residuals, first, slopes, ftol=1e-5, xtol=1e-4, max_nfev=_MOST)
    if found.status == 0:
        raise NotConverged(f"the fit of {fit.id} has not settled")
    return values(fit, found.x)


def values(fit: SystemFit, steps: Floats) -> tuple[float, ...]:
    """All coefficients, in whole J/mol, from the steps of the free ones."""
    left = iter(steps.tolist())
    return tuple(round(next(left) * term.spread) + 0.0 if term.spread else 0.0 for term in fit.terms)


def with_terms(fit: SystemFit, document: Mapping[str, Any], coefficients: Sequence[float]) -> dict[str, Any]:
    """A parsed system file with the coefficients in its triples."""
    new: dict[str, Any] = copy.deepcopy(dict(document))
    names = dict.fromkeys((term.elements, term.model) for term in fit.terms)
    kept = [t for t in new["triples"] if (tuple(t["elements"]), t["model"]) not in names]
    for elements, model in names:
        corners = [
            [{"terms": {"1": value}}]
            for term, value in zip(fit.terms, coefficients, strict=True)
            if (term.elements, term.model) == (elements, model)
        ]
        kept.append({"elements": list(elements), "model": model, "interaction": corners})
    new["triples"] = kept
    return new


def fitted_system(
    fit: SystemFit, document: Mapping[str, Any], coefficients: Sequence[float]
) -> dict[str, Any]:
    """The system file with the coefficients found, what they were fitted to and what they reach."""
    new = with_terms(fit, document, coefficients)
    before = melting_ranges_c(fit, with_terms(fit, document, [0.0] * len(fit.terms)))
    after = melting_ranges_c(fit, new)
    known = [name for name in document["fitted_to"] if name not in {t.name for t in fit.targets}]
    new["changes"] = fit.changes
    new["fitted_to"] = [*known, *(target.name for target in fit.targets)]
    new["reached"] = [
        {
            "name": target.name,
            "before_c": [round(c, 1) for c in old],
            "after_c": [round(c, 1) for c in now],
        }
        for target, old, now in zip(fit.targets, before, after, strict=True)
    ]
    return new
