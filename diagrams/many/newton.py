"""Newton's method on a given set of phases: equal potentials and mass balance, for many temperatures at once.

The unknowns are ln x of every solution, the potentials over RT and the amounts. Amounts may come out
negative: whoever asked then knows that the phase is not stable.
"""

from dataclasses import dataclass
from typing import Any

import numpy as np
from numpy.typing import NDArray

from diagrams.gibbs import Floats
from diagrams.many.system import AtT, Fixed, Ints, ManySystem, Mixed

MOST_STEPS = 40
TOLERANCE = 1e-11  # on potentials over RT, and on relative mass balance
LONGEST_STEP = 1.6  # of ln x
DILUTE_LOG = -4.0  # ln x below which an element may fall by any factor in one step
LOWEST_LOG, HIGHEST_LOG = -300.0, 3.0

Flags = NDArray[np.bool_]


@dataclass(frozen=True)
class States:
    """B states with the phases `sets` (numbers in the system; a solution may stand more than once).

    `logs` holds ln x for each set (B, m; empty for compounds), `mu` potentials in J/mol (B, n), `amounts`
    moles of each set for one mole of alloy (B, sets).
    """

    sets: tuple[int, ...]
    temperatures_k: Floats
    mu: Floats
    logs: tuple[Floats, ...]
    amounts: Floats
    converged: Flags

    def take(self, which: Any) -> "States":
        """Some of the states: an index array, a mask or a slice."""
        return States(
            self.sets,
            self.temperatures_k[which],
            self.mu[which],
            tuple(u[which] for u in self.logs),
            self.amounts[which],
            self.converged[which],
        )

    def moved(self, temperatures_k: Floats) -> "States":
        """The first state as a start for other temperatures."""
        rows = np.zeros(len(temperatures_k), dtype=np.int64)
        first = self.take(rows)
        return States(self.sets, temperatures_k, first.mu, first.logs, first.amounts, first.converged)

    def composition(self, system: ManySystem, k: int) -> Floats:
        """Mole fractions (B, n) of set k over all elements of the system."""
        phase = system.phase(self.sets[k])
        x = np.zeros_like(self.mu)
        if isinstance(phase, Fixed):
            x[:] = phase.x
        else:
            x[:, phase.index] = np.exp(self.logs[k])
        return x


def solve(system: ManySystem, overall: Floats, start: States) -> States:
    """Equilibrium of the phases of `start` at its temperatures, for mole fractions `overall`, all > 0.

    `overall` is one composition (n,) or one a state (B, n). States that do not converge are flagged, not
    raised.
    """
    phases = [system.phase(s) for s in start.sets]
    overall = np.broadcast_to(overall, start.mu.shape)
    every = system.at(start.temperatures_k)
    mu = start.mu / every.rt[:, None]
    logs = [u.copy() for u in start.logs]
    amounts = start.amounts.copy()
    converged = np.zeros(len(mu), dtype=np.bool_)
    open_rows: Ints = np.arange(len(mu))
    at = every
    for _ in range(MOST_STEPS):
        matrix, residual = equations(
            start.sets,
            phases,
            at,
            overall[open_rows],
            mu[open_rows],
            [u[open_rows] for u in logs],
            amounts[open_rows],
        )
        with np.errstate(invalid="ignore"):
            size = np.max(np.abs(residual), axis=1)
            done = size < TOLERANCE
            lost = ~np.isfinite(size)
        converged[open_rows[done]] = True
        keep = ~(done | lost)
        if not keep.any():
            break
        if not keep.all():
            open_rows, matrix, residual, at = open_rows[keep], matrix[keep], residual[keep], at.take(keep)
        step = shortened(phases, logs, open_rows, linear(matrix, -residual))
        column = 0
        for u, phase in zip(logs, phases, strict=True):
            if isinstance(phase, Mixed):
                moved = u[open_rows] + step[:, column : column + phase.size]
                u[open_rows] = np.clip(moved, LOWEST_LOG, HIGHEST_LOG)
                column += phase.size
        mu[open_rows] += step[:, column : column + mu.shape[1]]
        amounts[open_rows] += step[:, column + mu.shape[1] :]
    return States(start.sets, start.temperatures_k, mu * every.rt[:, None], tuple(logs), amounts, converged)


def shortened(phases: list[Mixed | Fixed], logs: list[Floats], rows: Ints, step: Floats) -> Floats:
    """Steps (B, unknowns) cut to LONGEST_STEP of any ln x; dilute elements may fall by any factor."""
    column = 0
    longest: Floats = np.zeros(len(step))
    for u, phase in zip(logs, phases, strict=True):
        if isinstance(phase, Mixed):
            part = step[:, column : column + phase.size]
            part = np.where(u[rows] > DILUTE_LOG, np.abs(part), part)
            longest = np.maximum(longest, part.max(axis=1))
            column += phase.size
    scale: Floats = LONGEST_STEP / np.maximum(longest, LONGEST_STEP)
    return step * scale[:, None]


def linear(matrix: Floats, right: Floats) -> Floats:
    """Solutions (B, unknowns) of B systems of linear equations; NaN for those that have none."""
    try:
        found: Floats = np.asarray(np.linalg.solve(matrix, right[:, :, None])[:, :, 0], dtype=np.float64)
    except np.linalg.LinAlgError:
        found = np.full(right.shape, np.nan)
        for k in range(len(matrix)):
            try:
                found[k] = np.linalg.solve(matrix[k], right[k])
            except np.linalg.LinAlgError:
                continue  # stays nan: that state is lost
    return found


def equations(
    sets: tuple[int, ...],
    phases: list[Mixed | Fixed],
    at: AtT,
    overall: Floats,
    mu: Floats,
    logs: list[Floats],
    amounts: Floats,
) -> tuple[Floats, Floats]:
    """Jacobian and residuals of B states: potentials and Σ x of every set, then the mass balance.

    Unknowns: ln x of every solution, potentials over RT, amounts. `overall` (B, n).
    """
    states, n = mu.shape
    unknowns = sum(p.size for p in phases if isinstance(p, Mixed)) + n + len(phases)
    matrix, residual = np.zeros((states, unknowns, unknowns)), np.zeros((states, unknowns))
    first_mu = unknowns - n - len(phases)
    first_amount = unknowns - len(phases)
    balance = unknowns - n  # the last n rows
    residual[:, balance:] = -1.0
    rt = at.rt
    row = column = 0
    for k, phase in enumerate(phases):
        share = amounts[:, k]
        if isinstance(phase, Fixed):
            g = at.fixed[:, sets[k] - len(at.mixed)]
            residual[:, row] = g / rt - mu @ phase.x
            matrix[:, row, first_mu : first_mu + n] = -phase.x
            relative = phase.x / overall
            residual[:, balance:] += share[:, None] * relative
            matrix[:, balance:, first_amount + k] = relative
            row += 1
            continue
        m, index = phase.size, phase.index
        potentials, slopes, x = phase.potentials(at.mixed[sets[k]], rt, logs[k])
        inner = np.arange(m)
        residual[:, row : row + m] = potentials / rt[:, None] - mu[:, index]
        matrix[:, row : row + m, column : column + m] = slopes / rt[:, None, None]
        matrix[:, row + inner, first_mu + index] = -1.0
        residual[:, row + m] = x.sum(axis=1) - 1.0
        matrix[:, row + m, column : column + m] = x
        dissolved = x / overall[:, index]
        residual[:, balance + index] += share[:, None] * dissolved
        matrix[:, balance + index, column + inner] = share[:, None] * dissolved
        matrix[:, balance + index, first_amount + k] = dissolved
        row += m + 1
        column += m
    return matrix, residual
