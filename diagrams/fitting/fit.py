"""Least squares on the free coefficients of one system, from the fit file to the new parameter file."""

import copy
import json
from collections.abc import Sequence
from dataclasses import dataclass
from functools import cache
from importlib.resources import files
from typing import Any

import numpy as np
from scipy.optimize import least_squares

from diagrams.errors import DataFault, NotConverged, UnknownDiagram
from diagrams.files.assessments import assessment_from
from diagrams.fitting.targets import Point, Target, gap_at_start, misses, solve_target, target_from
from diagrams.gibbs import System

FOLDER = files("diagrams") / "data" / "fits"
DECIMALS = {"1": 2, "T": 5, "T ln T": 6}  # J/mol, J/(mol K)
_STEP = 1e-4  # of each spread, for central differences
_LOST = 100.0  # uncertainties counted for each RT of unbalance, where a point cannot be found at all


@dataclass(frozen=True)
class Coefficient:
    """One number that may move: a `term` of an interaction order, an element's end, or a compound.

    `spread` (in the unit of the coefficient) says how far from `start` it may go at the cost of one
    uncertainty: it keeps what the points say nothing about near the set the fit started from.
    """

    model: str
    part: str
    key: int | str
    term: str
    start: float
    spread: float


@dataclass(frozen=True)
class Fit:
    """One fit file: the coefficients that are free, the points they shall meet, and what to say of it."""

    id: str
    start: str
    changes: str
    coefficients: tuple[Coefficient, ...]
    targets: tuple[Target, ...]


@dataclass(frozen=True)
class Outcome:
    """What a fit found: rounded coefficients, and the point each target came to, before and after."""

    values: tuple[float, ...]
    before: tuple[Point | None, ...]
    after: tuple[Point | None, ...]


def fit_ids() -> tuple[str, ...]:
    """Ids of all stored fits, sorted."""
    return tuple(sorted(entry.name[:-5] for entry in FOLDER.iterdir() if entry.name.endswith(".json")))


@cache
def read_fit(diagram_id: str) -> Fit:
    """Read one fit file; raises UnknownDiagram or DataFault."""
    if diagram_id not in fit_ids():
        raise UnknownDiagram(f"there is no fit named {diagram_id}", field="id")
    document = json.loads((FOLDER / f"{diagram_id}.json").read_text(encoding="utf-8"))
    return Fit(
        document["id"],
        document["start"],
        document["changes"],
        tuple(c for entry in document["free"] for c in _coefficients(entry)),
        tuple(target_from(target) for target in document["targets"]),
    )


def _coefficients(entry: dict[str, Any]) -> list[Coefficient]:
    part = entry["part"]
    key = entry.get("order", entry.get("element", 0))
    starts = entry["terms"]
    return [Coefficient(entry["model"], part, key, t, float(v), float(s)) for t, (v, s) in starts.items()]


def run_fit(fit: Fit, document: dict[str, Any]) -> Outcome:
    """Fit the parsed parameter file `document`; raises NotConverged if the least squares do not settle."""
    start = np.array([c.start for c in fit.coefficients])
    spread = np.array([c.spread for c in fit.coefficients])

    def residuals(steps: Any) -> Any:
        system = _system(fit, document, (start + steps * spread).tolist())
        out: list[float] = []
        for target in fit.targets:
            try:
                out += misses(target, solve_target(target, system))
            except NotConverged:
                aims = len(misses(target, Point(target.start_c, target.start_wt)))
                out += [_LOST * gap_at_start(target, system)] * aims
        return np.concatenate([out, steps])

    def slopes(steps: Any) -> Any:
        ahead = [residuals(steps + h) - residuals(steps - h) for h in _STEP * np.eye(len(steps))]
        return np.stack(ahead, axis=1) / (2.0 * _STEP)

    found = least_squares(
        residuals, np.zeros(len(start)), slopes, xtol=1e-12, ftol=1e-12, gtol=1e-12, max_nfev=400
    )
    if found.status == 0:
        raise NotConverged(f"the fit of {fit.id} has not settled")
    values = [
        round(float(v), DECIMALS[c.term])
        for v, c in zip(start + found.x * spread, fit.coefficients, strict=True)
    ]
    before = points(fit, _system(fit, document, start.tolist()))
    return Outcome(tuple(values), before, points(fit, _system(fit, document, values)))


def points(fit: Fit, system: System) -> tuple[Point | None, ...]:
    """What a system makes of every target; None where it does not have the point."""
    out: list[Point | None] = []
    for target in fit.targets:
        try:
            out.append(solve_target(target, system))
        except NotConverged:
            out.append(None)
    return tuple(out)


def fitted_document(fit: Fit, document: dict[str, Any], outcome: Outcome) -> dict[str, Any]:
    """The parameter file with the coefficients found, what they were fitted to and what they reach."""
    new = _with_values(fit, document, outcome.values)
    reached = []
    for target, point in zip(fit.targets, outcome.after, strict=True):
        if point is None:
            raise NotConverged(f"the fit of {fit.id} lost “{target.name}”")
        entry: dict[str, Any] = {"name": target.name, "temperature_c": round(point.temperature_c, 1)}
        entry["second_wt"] = [round(value, 2) for value in point.wt]
        reached.append(entry)
    new["changes"] = fit.changes
    new["fitted_to"] = [target.name for target in fit.targets]
    new["reached"] = reached
    return new


def _system(fit: Fit, document: dict[str, Any], values: Sequence[float]) -> System:
    return assessment_from(_with_values(fit, document, values)).system


def _with_values(fit: Fit, document: dict[str, Any], values: Sequence[float]) -> dict[str, Any]:
    new = copy.deepcopy(document)
    phases = {phase["model"]: phase for phase in new["phases"]}
    for c, value in zip(fit.coefficients, values, strict=True):
        phase = phases[c.model]
        if c.part == "interaction":
            series = phase["interaction"]
            while len(series) <= int(c.key):
                series.append([{"terms": {"1": 0}}])
            piece = series[int(c.key)][0]
        elif c.part == "own_ends":
            piece = phase.setdefault("own_ends", {}).setdefault(c.key, [{"terms": {}}])[0]
        elif c.part == "energy":
            piece = phase["energy"][0]
        else:
            raise DataFault(f"a fit file names the part “{c.part}”, which no phase has")
        piece["terms"][c.term] = value
    return new


@dataclass(frozen=True)
class FittedFact:
    """A printed point that went into a fit, so that no test may count it as an independent check.

    `fillers` are names in the filler table, `invariant` a handbook point as “system kind”.
    """

    id: str
    target: str
    fillers: tuple[str, ...]
    invariant: str | None


def fitted_facts() -> tuple[FittedFact, ...]:
    """Every target of every stored fit, by id."""
    return tuple(
        FittedFact(diagram_id, target.name, target.fillers, target.invariant)
        for diagram_id in fit_ids()
        for target in read_fit(diagram_id).targets
    )
