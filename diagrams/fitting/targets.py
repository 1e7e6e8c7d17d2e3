"""Points a fit aims at, and what a set of parameters makes of each: a local equilibrium, solved directly."""

import math
from collections.abc import Callable, Mapping
from dataclasses import dataclass
from typing import Any

import numpy as np
from scipy.optimize import root

from diagrams.errors import DataFault, NotConverged
from diagrams.gibbs import GAS_CONSTANT, Compound, Phase, System, logit
from diagrams.units import ZERO_CELSIUS_K, second_wt_to_x, x_to_second_wt

KINDS = {"invariant": 3, "tie": 2, "boundary": 2, "congruent": 2, "critical": 1}
_CLOSED = 1e-9  # of RT: how well the potentials must agree
_FARTHEST = 60.0  # of the unknowns: logits, and kelvin over 100
_APART = 1e-4  # mole fraction by which two ends of one phase must differ


@dataclass(frozen=True)
class Target:
    """One point of a diagram that a fit shall meet.

    `kind`: “invariant” (three phases), “tie” (two at `start_c`), “boundary” (two, the first one at its
    composition in `start_wt`), “congruent” (two of one composition), “critical” (top of a gap).
    `start_wt` are mass percent of the second element where the search begins, one a phase.
    `temperature_c` and `wt` hold (value, uncertainty) of what is aimed at, None where nothing is.
    `fillers` names rows of the filler table the point was taken from, `invariant` a handbook point.
    """

    name: str
    kind: str
    models: tuple[str, ...]
    start_wt: tuple[float, ...]
    start_c: float
    temperature_c: tuple[float, float] | None
    wt: tuple[tuple[float, float] | None, ...]
    source: str
    how: str
    confidence: str
    fillers: tuple[str, ...]
    invariant: str | None


@dataclass(frozen=True)
class Point:
    """What the parameters give: temperature in °C and mass percent of the second element, one a phase."""

    temperature_c: float
    wt: tuple[float, ...]


def target_from(document: Mapping[str, Any]) -> Target:
    """Read one target of a fit file; raises DataFault if it aims at nothing or has too few phases."""
    models = tuple(model for model, _ in document["phases"])
    reach = document["reach"]
    wt = tuple(tuple(pair) if pair else None for pair in reach.get("wt", [None] * len(models)))
    kind = document["kind"]
    if KINDS.get(kind) != len(models) or len(wt) != len(models):
        raise DataFault(f"the target “{document['name']}” does not have the phases its kind needs")
    temperature = tuple(reach["temperature_c"]) if "temperature_c" in reach else None
    if temperature is None and not any(wt):
        raise DataFault(f"the target “{document['name']}” aims at nothing")
    return Target(
        document["name"],
        kind,
        models,
        tuple(float(start) for _, start in document["phases"]),
        float(document["start_c"]),
        temperature,
        wt,
        document["source"],
        document["how"],
        document["confidence"],
        tuple(document.get("fillers", ())),
        document.get("invariant"),
    )


def solve_target(target: Target, system: System) -> Point:
    """The point as these parameters give it; raises NotConverged if they do not have it near the start."""
    search = _search(target, system)
    found = root(search.safe, search.start, method="hybr", options={"xtol": 1e-12})
    values = [float(value) for value in found.x]
    if max(abs(value) for value in search.safe(values)) > _CLOSED:
        raise NotConverged(f"no equilibrium found near “{target.name}”")
    temperature_k, x = search.unpack(values)
    for i, model in enumerate(target.models):
        if any(target.models[j] == model and abs(x[i] - x[j]) < _APART for j in range(i)):
            raise NotConverged(f"both ends of {model} fell together at “{target.name}”")
    first, second = system.elements
    return Point(temperature_k - ZERO_CELSIUS_K, tuple(x_to_second_wt(v, first, second) for v in x))


def gap_at_start(target: Target, system: System) -> float:
    """How far the phases are from equilibrium where the search begins, in RT."""
    search = _search(target, system)
    return float(np.linalg.norm(search.residuals(search.start)))


def misses(target: Target, point: Point) -> list[float]:
    """How far the point lies from what is aimed at, in units of each uncertainty."""
    pairs = [(point.temperature_c, target.temperature_c), *zip(point.wt, target.wt, strict=True)]
    return [(value - aim[0]) / aim[1] for value, aim in pairs if aim is not None]


def _phase(system: System, model: str) -> Phase:
    for phase in system.phases:
        if phase.model == model:
            return phase
    raise DataFault(f"a target names the phase {model}, which the parameter file does not have")


@dataclass(frozen=True)
class _Search:
    """Unknowns at the start, equations in them (in RT), and what they mean: kelvin and mole fractions."""

    start: list[float]
    residuals: Callable[[list[float]], list[float]]
    unpack: Callable[[list[float]], tuple[float, list[float]]]

    def safe(self, values: Any) -> list[float]:
        """The equations, with a plain large number where the search has run away."""
        plain = [float(value) for value in values]
        if max(abs(value) for value in plain) > _FARTHEST:
            return [1e3] * len(plain)
        return self.residuals(plain)


def _search(target: Target, system: System) -> _Search:
    phases = [_phase(system, model) for model in target.models]
    x = [second_wt_to_x(wt, *system.elements) for wt in target.start_wt]
    if target.kind in ("congruent", "critical"):
        return _one_composition(target, phases, x[0])
    return _equal_potentials(target, phases, x)


def _equal_potentials(target: Target, phases: list[Phase], x: list[float]) -> _Search:
    start_k = target.start_c + ZERO_CELSIUS_K
    fixed_t = target.kind == "tie"
    held = [isinstance(phase, Compound) for phase in phases]
    if target.kind == "boundary":
        held[0] = True
    free = [i for i, is_held in enumerate(held) if not is_held]

    def unpack(values: list[float]) -> tuple[float, list[float]]:
        compositions = [p.x if isinstance(p, Compound) else x[i] for i, p in enumerate(phases)]
        for i, value in zip(free, values if fixed_t else values[1:], strict=True):
            compositions[i] = _fraction(value)
        return start_k if fixed_t else values[0] * 100.0, compositions

    def residuals(values: list[float]) -> list[float]:
        temperature_k, _ = unpack(values)
        u = [logit(value) for value in x]
        for i, value in zip(free, values if fixed_t else values[1:], strict=True):
            u[i] = value
        rt = GAS_CONSTANT * temperature_k
        lines: list[tuple[float, float]] = []
        compounds: list[tuple[float, float]] = []
        for phase, ui in zip(phases, u, strict=True):
            if isinstance(phase, Compound):
                compounds.append((phase.x, phase.energy(temperature_k)))
            else:
                lines.append(phase.at(temperature_k).potentials(ui)[:2])
        mu1, mu2 = lines[0]
        out = [(line[k] - lines[0][k]) / rt for line in lines[1:] for k in (0, 1)]
        return out + [((1.0 - xc) * mu1 + xc * mu2 - g) / rt for xc, g in compounds]

    start = ([] if fixed_t else [start_k / 100.0]) + [logit(x[i]) for i in free]
    return _Search(start, residuals, unpack)


def _one_composition(target: Target, phases: list[Phase], x: float) -> _Search:
    """Equal energies and slopes of two phases, or second and third derivative zero of one."""
    here, other = phases[0], phases[-1]
    if isinstance(here, Compound):
        raise DataFault(f"the target “{target.name}” must name the solution first")

    def residuals(values: list[float]) -> list[float]:
        temperature_k, u = values[0] * 100.0, values[1]
        rt = GAS_CONSTANT * temperature_k
        solution = here.at(temperature_k)
        mu1, mu2, _, _, x = solution.potentials(u)
        if target.kind == "critical":
            h = 1e-4
            slope = (solution.curvature(x + h) - solution.curvature(x - h)) / (2.0 * h)
            # where x(1−x)G″ and its slope vanish, so do G″ and G‴
            return [solution.curvature(x) / rt, slope / rt]
        if isinstance(other, Compound):
            return [((1.0 - x) * mu1 + x * mu2 - other.energy(temperature_k)) / rt, x - other.x]
        nu1, nu2 = other.at(temperature_k).potentials(u)[:2]
        return [(mu1 - nu1) / rt, (mu2 - nu2) / rt]

    def unpack(values: list[float]) -> tuple[float, list[float]]:
        return values[0] * 100.0, [_fraction(values[1])] * len(phases)

    return _Search([(target.start_c + ZERO_CELSIUS_K) / 100.0, logit(x)], residuals, unpack)


def _fraction(u: float) -> float:
    return 1.0 / (1.0 + math.exp(-u))
