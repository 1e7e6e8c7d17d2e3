"""Temperatures at which a binary's set of tie lines changes: found exactly, each as a root in one unknown."""

from collections.abc import Callable
from dataclasses import dataclass
from typing import Literal

import numpy as np
from scipy.optimize import brentq, minimize_scalar

from diagrams.equilibrium import parallel_tangent
from diagrams.errors import NotConverged
from diagrams.gibbs import GAS_CONSTANT, Compound, Phase, Solution, SolutionAtT
from diagrams.tie import FixedAtT, PhaseAtT, Tie, solve_tie

WIDEST_SEARCH_K = 6.0

EventKind = Literal["three-phase", "congruent", "critical", "pure", "transformation"]


@dataclass(frozen=True)
class Event:
    """A change at `temperature_k`: the tie lines number `index` on, `below` it, become those `above`.

    `points` holds the phases that meet with their mole fractions, left to right; `below` and `above`
    hold for each tie line the positions in `points` of its two ends.
    """

    kind: EventKind
    temperature_k: float
    index: int
    points: tuple[tuple[Phase, float], ...]
    below: tuple[tuple[int, int], ...]
    above: tuple[tuple[int, int], ...]


def at_temperature(phase: Phase, temperature_k: float) -> PhaseAtT:
    """Any phase with its temperature fixed."""
    if isinstance(phase, Compound):
        return FixedAtT(phase, GAS_CONSTANT * temperature_k, phase.energy(temperature_k))
    return phase.at(temperature_k)


def find_event(index: int, low_k: float, below: list[Tie], high_k: float, above: list[Tie]) -> Event | None:
    """The one event that turns `below` (at low_k) into `above` (at high_k); None if it takes several."""
    few, many = (below, above) if len(below) < len(above) else (above, below)
    rising = few is below
    if len(few) == 1 and len(many) == 2 and _encloses(few[0], many):
        return _three_phase(index, low_k, high_k, few[0], many, rising)
    if not few and len(many) == 2 and many[0].first is many[1].second:
        return _congruent(index, low_k, high_k, many, rising)
    if not few and len(many) == 1:
        if many[0].first is many[0].second:
            return _critical(index, low_k, high_k, many[0], rising)
        return _at_edge(index, low_k, high_k, many[0], rising)
    if len(below) == len(above) == 2 and _replaces(below, above):
        return _transformation(index, low_k, high_k, below, above)
    return None


def _replaces(below: list[Tie], above: list[Tie]) -> bool:
    """Whether one compound gives way to another of the same composition."""
    old, new = below[0].second, above[0].second
    return (
        isinstance(old, Compound)
        and isinstance(new, Compound)
        and old.x == new.x
        and below[1].first is old
        and above[1].first is new
        and below[0].first is above[0].first
        and below[1].second is above[1].second
    )


def _encloses(one: Tie, two: list[Tie]) -> bool:
    return (
        one.first is two[0].first
        and one.second is two[1].second
        and two[0].second is two[1].first
        and one.left < two[0].right < one.right
    )


def _root(function: Callable[[float], float], low_k: float, high_k: float) -> float:
    """Root of a function of temperature in or close around [low_k, high_k]."""
    margin = 0.0
    while margin <= WIDEST_SEARCH_K:
        a, b = low_k - margin, high_k + margin
        fa, fb = function(a), function(b)
        if fa == 0.0:
            return a
        if fa * fb <= 0.0:
            return float(brentq(function, a, b, xtol=1e-9, rtol=1e-14))
        margin = 2.0 * margin + 0.01
    raise NotConverged(f"no change found between {low_k:.3f} K and {high_k:.3f} K")


def _three_phase(
    index: int, low_k: float, high_k: float, outer: Tie, inner: list[Tie], rising: bool
) -> Event:
    middle, x_middle = inner[0].second, 0.5 * (inner[0].right + inner[1].left)
    found: dict[str, float] = {}

    def height(temperature_k: float) -> float:
        """How far the middle phase lies above the tangent of the outer two."""
        a, b = at_temperature(outer.first, temperature_k), at_temperature(outer.second, temperature_k)
        tie = solve_tie(a, b, outer.left, outer.right)
        found.update(left=tie.left, right=tie.right)
        if isinstance(middle, Compound):
            found["middle"] = middle.x
            return middle.energy(temperature_k) - tie.mu1 * (1.0 - middle.x) - tie.mu2 * middle.x
        solution = middle.at(temperature_k)
        x = found["middle"] = parallel_tangent(solution, x_middle, tie.mu2 - tie.mu1)
        return solution.energy(x) - tie.mu1 * (1.0 - x) - tie.mu2 * x

    temperature_k = _root(height, low_k, high_k)
    height(temperature_k)
    points = ((outer.first, found["left"]), (middle, found["middle"]), (outer.second, found["right"]))
    one, two = ((0, 2),), ((0, 1), (1, 2))
    return Event("three-phase", temperature_k, index, points, *((one, two) if rising else (two, one)))


def _congruent(index: int, low_k: float, high_k: float, ties: list[Tie], rising: bool) -> Event:
    outer, inner = ties[0].first, ties[0].second
    start = 0.25 * (ties[0].left + ties[0].right + ties[1].left + ties[1].right)
    found: dict[str, float] = {}

    def height(temperature_k: float) -> float:
        """Energy of the inner phase over the outer, where the two curves run parallel."""
        a, c = at_temperature(outer, temperature_k), at_temperature(inner, temperature_k)
        if isinstance(a, SolutionAtT) and isinstance(c, SolutionAtT):
            x = found["x"] = _parallel(a, c, found.get("x", start))
            return c.energy(x) - a.energy(x)
        solution, fixed, sign = (a, c, 1.0) if isinstance(a, SolutionAtT) else (c, a, -1.0)
        if not isinstance(solution, SolutionAtT) or not isinstance(fixed, FixedAtT):
            raise NotConverged("two compounds cannot melt congruently into each other")
        found["x"] = fixed.phase.x
        return sign * (fixed.g - solution.energy(fixed.phase.x))

    temperature_k = _root(height, low_k, high_k)
    height(temperature_k)
    x = found["x"]
    points = ((outer, x), (inner, x), (outer, x))
    pairs = ((0, 1), (1, 2))
    return Event("congruent", temperature_k, index, points, *(((), pairs) if rising else (pairs, ())))


def _parallel(a: SolutionAtT, c: SolutionAtT, start: float) -> float:
    """Mole fraction near `start` at which two solutions have the same slope dG/dx."""

    def difference(x: float) -> float:
        h = 1e-6
        return (c.energy(x + h) - a.energy(x + h) - c.energy(x - h) + a.energy(x - h)) / (2 * h)

    width = 0.002
    while width < 0.3:
        low, high = max(2e-6, start - width), min(1.0 - 2e-6, start + width)
        if difference(low) * difference(high) <= 0.0:
            return float(brentq(difference, low, high, xtol=1e-12))
        width *= 1.6
    raise NotConverged(f"{a.phase.model} and {c.phase.model} run nowhere parallel near x = {start:.4f}")


def _critical(index: int, low_k: float, high_k: float, tie: Tie, rising: bool) -> Event:
    phase = tie.first
    if not isinstance(phase, Solution):
        raise NotConverged("a compound has no miscibility gap")
    start = 0.5 * (tie.left + tie.right)
    width = max(0.02, tie.right - tie.left)
    found: dict[str, float] = {}

    def curvature(temperature_k: float) -> float:
        solution = phase.at(temperature_k)
        low, high = max(1e-6, start - width), min(1.0 - 1e-6, start + width)
        best = minimize_scalar(
            solution.curvature, bounds=(low, high), method="bounded", options={"xatol": 1e-11}
        )
        found["x"] = float(best.x)
        return float(best.fun)

    temperature_k = _root(curvature, low_k, high_k)
    curvature(temperature_k)
    points = ((phase, found["x"]), (phase, found["x"]))
    pairs = ((0, 1),)
    return Event("critical", temperature_k, index, points, *(((), pairs) if rising else (pairs, ())))


def _at_edge(index: int, low_k: float, high_k: float, tie: Tie, rising: bool) -> Event:
    """A tie line that shrinks to a pure element, or to a compound at the edge of what is described."""
    edges = [p.x for p in (tie.first, tie.second) if isinstance(p, Compound)]
    edge = edges[0] if edges else float(tie.left + tie.right > 1.0)

    def energy(phase: Phase, temperature_k: float) -> float:
        frozen = at_temperature(phase, temperature_k)
        return frozen.g if isinstance(frozen, FixedAtT) else frozen.energy(edge)

    temperature_k = _root(lambda t: energy(tie.first, t) - energy(tie.second, t), low_k, high_k)
    points = ((tie.first, edge), (tie.second, edge))
    pairs = ((0, 1),)
    return Event("pure", temperature_k, index, points, *(((), pairs) if rising else (pairs, ())))


def _transformation(index: int, low_k: float, high_k: float, below: list[Tie], above: list[Tie]) -> Event:
    old, new = at_energy(below[0].second), at_energy(above[0].second)
    temperature_k = _root(lambda t: old(t) - new(t), low_k, high_k)
    ends = [below[0].first, below[0].second, above[0].second, below[1].second]
    frozen = [at_temperature(phase, temperature_k) for phase in ends]
    left = solve_tie(frozen[0], frozen[1], below[0].left, below[0].right).left
    right = solve_tie(frozen[1], frozen[3], below[1].left, below[1].right).right
    x = below[0].right
    points = ((ends[0], left), (ends[1], x), (ends[2], x), (ends[3], right))
    return Event("transformation", temperature_k, index, points, ((0, 1), (1, 3)), ((0, 2), (2, 3)))


def at_energy(phase: Phase) -> Callable[[float], float]:
    """The energy of a compound as a function of temperature."""
    if not isinstance(phase, Compound):
        raise NotConverged(f"{phase.model} is no compound")
    return phase.energy


def same_ties(one: Tie, two: Tie, most: float) -> bool:
    """Whether two tie lines at neighbouring temperatures are one strand: same phases, ends within `most`."""
    return (
        one.first is two.first
        and one.second is two.second
        and bool(np.hypot(one.left - two.left, one.right - two.right) < most)
    )
