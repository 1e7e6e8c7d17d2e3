"""The lowest tangent plane from nothing: a simplex over sampled compositions that are sharpened as it goes.

A linear programme over the sample finds the plane (every column a composition of some phase, priced by its
height over the current plane); the low points of each phase over it then join the columns until none lies
lower. This is a global search; Newton's method (newton.py) only finishes it.
"""

from dataclasses import dataclass

import numpy as np

from diagrams.errors import NotConverged
from diagrams.gibbs import Floats
from diagrams.many.newton import States
from diagrams.many.sample import Sample
from diagrams.many.system import Mixed
from diagrams.many.tangent import candidates, follow_down

MOST_PIVOTS = 2000
MOST_ROUNDS = 30
CLOSE = 1e-4  # of RT: near enough for Newton's method
SAME = 0.01  # mole fraction: columns of one phase this near are one composition set
FORBIDDEN = 1e7  # J/mol, more than any energy here


@dataclass
class _Columns:
    """Compositions with their energies and the phase each belongs to; -1 marks the helpers of the start."""

    x: Floats
    energy: Floats
    phase: list[int]

    def add(self, x: Floats, energy: Floats, phase: int) -> None:
        self.x = np.vstack([self.x, x])
        self.energy = np.concatenate([self.energy, energy])
        self.phase += [phase] * len(x)


def search(sample: Sample, overall: Floats, temperature_k: float) -> States:
    """A start for Newton's method at one temperature, for mole fractions `overall` (n,), all > 0.

    Raises NotConverged if the phases described cannot make up the composition.
    """
    system = sample.system
    t = np.array([temperature_k])
    at = system.at(t)
    n = len(overall)
    columns = _Columns(np.eye(n), np.full(n, FORBIDDEN), [-1] * n)
    for number, part in enumerate(sample.phases):
        phase = system.mixed[number]
        if len(phase.windows):
            continue  # comes in below, once its lowest point is known to lie within its limits
        x = np.zeros((len(part.points), n))
        x[:, phase.index] = part.points
        columns.add(x, sample.heights(at, np.zeros((1, n)), number)[0] * at.rt[0], number)
    for k, compound in enumerate(system.fixed):
        columns.add(compound.x[None], at.fixed[0, k : k + 1], len(system.mixed) + k)
    held, shares = list(range(n)), overall.copy()
    for _ in range(MOST_ROUNDS):
        held, shares, mu = _simplex(columns, held, shares, overall)
        lowest = 0.0
        for number, _, heights, logs in candidates(sample, at, mu[None], None):
            phase = system.mixed[number]
            new = heights < -1e-9
            if not new.any():
                continue
            lowest = min(lowest, float(heights.min()))
            x = np.zeros((int(new.sum()), n))
            x[:, phase.index] = np.exp(logs[new])
            columns.add(x, heights[new] * at.rt[0] + x @ mu, number)
        if lowest > -CLOSE:
            break
    if any(columns.phase[c] < 0 and shares[k] > 1e-12 for k, c in enumerate(held)):
        raise NotConverged("the phases described cannot make up this composition")
    return _gather(sample, columns, held, shares, mu, temperature_k)


def _simplex(
    columns: _Columns, held: list[int], shares: Floats, overall: Floats
) -> tuple[list[int], Floats, Floats]:
    for pivot in range(MOST_PIVOTS):
        mu = _solved(columns.x[held], columns.energy[held])
        heights = columns.energy - columns.x @ mu
        heights[held] = 0.0
        # the deepest column enters; in a long run the first deep one, which cannot go in a circle
        low = np.flatnonzero(heights < -1e-6)
        if not low.size:
            return held, shares, mu
        entering = int(low[np.argmin(heights[low])]) if pivot < MOST_PIVOTS // 2 else int(low[0])
        weights = _solved(columns.x[held].T, columns.x[entering])
        with np.errstate(divide="ignore", invalid="ignore"):
            ratios = np.where(weights > 1e-11, np.maximum(shares, 0.0) / weights, np.inf)
        leaving = int(np.argmin(ratios))
        if not np.isfinite(ratios[leaving]):
            break
        held = [*held[:leaving], entering, *held[leaving + 1 :]]
        shares = _solved(columns.x[held].T, overall)
    raise NotConverged("the linear programme over the sample did not settle")


def _solved(matrix: Floats, right: Floats) -> Floats:
    return np.asarray(np.linalg.solve(matrix, right), dtype=np.float64)


def _gather(
    sample: Sample, columns: _Columns, held: list[int], shares: Floats, mu: Floats, temperature_k: float
) -> States:
    """Columns of one composition set become one, each followed to its own lowest point first."""
    system = sample.system
    at = system.at(np.array([temperature_k]))
    sets: list[int] = []
    logs: list[Floats] = []
    amounts: list[float] = []
    for k, column in enumerate(held):
        number = columns.phase[column]
        if number < 0:
            continue
        phase = system.phase(number)
        if not isinstance(phase, Mixed):
            sets.append(number)
            logs.append(np.empty(0))
            amounts.append(float(shares[k]))
            continue
        start = columns.x[column][phase.index][None]
        _, log = follow_down(phase, at.mixed[number], at.rt, mu[phase.index][None], start)
        for other, before in enumerate(sets):
            if before == number and np.max(np.abs(np.exp(logs[other]) - np.exp(log[0]))) < SAME:
                amounts[other] += float(shares[k])
                break
        else:
            sets.append(number)
            logs.append(log[0])
            amounts.append(float(shares[k]))
    return States(
        tuple(sets),
        np.array([temperature_k]),
        mu[None],
        tuple(u[None] for u in logs),
        np.array([amounts]),
        np.zeros(1, dtype=np.bool_),
    )
