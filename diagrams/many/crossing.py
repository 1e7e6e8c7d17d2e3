"""The temperature at which one of a set of phases is just used up: Newton's method with the temperature free.

The amount of that phase is held at zero and the temperature takes its place among the unknowns, so a change
of phases is found as exactly as a state is, for many compositions at once.
"""

import numpy as np

from diagrams.gibbs import Floats
from diagrams.many.newton import (
    HIGHEST_LOG,
    LOWEST_LOG,
    TOLERANCE,
    States,
    equations,
    linear,
    shortened,
)
from diagrams.many.system import ManySystem, Mixed

MOST_STEPS = 30
STEP_K = 1e-3  # over which the slope in temperature is taken
LONGEST_K = 20.0


def crossing(system: ManySystem, overall: Floats, start: States, zero: int) -> States:
    """States at which set `zero` of `start` has no amount, at temperatures found on the way.

    `overall` (n,) or (B, n). Flagged, not raised, where none is found within reach of the start.
    """
    phases = [system.phase(s) for s in start.sets]
    states, n = start.mu.shape
    overall = np.broadcast_to(overall, (states, n))
    t = start.temperatures_k.copy()
    mu = start.mu / system.at(t).rt[:, None]
    logs = [u.copy() for u in start.logs]
    amounts = start.amounts.copy()
    amounts[:, zero] = 0.0
    converged = np.zeros(states, dtype=np.bool_)
    everything = np.arange(states)
    place = sum(p.size for p in phases if isinstance(p, Mixed)) + n + zero  # of that amount
    for _ in range(MOST_STEPS):
        matrix, residual = equations(start.sets, phases, system.at(t), overall, mu, logs, amounts)
        _, further = equations(start.sets, phases, system.at(t + STEP_K), overall, mu, logs, amounts)
        with np.errstate(invalid="ignore"):
            converged = np.max(np.abs(residual), axis=1) < TOLERANCE
        if converged.all() or not np.isfinite(residual).any():
            break
        matrix[:, :, place] = (further - residual) / STEP_K
        step = shortened(phases, logs, everything, linear(matrix, -residual))
        with np.errstate(invalid="ignore", divide="ignore"):
            longest = LONGEST_K / np.maximum(np.abs(step[:, place]), LONGEST_K)
        step = step * np.where(np.isfinite(longest), longest, 1.0)[:, None]
        step[converged] = 0.0
        step = np.where(np.isfinite(step), step, 0.0)
        column = 0
        for u, phase in zip(logs, phases, strict=True):
            if isinstance(phase, Mixed):
                u[:] = np.clip(u + step[:, column : column + phase.size], LOWEST_LOG, HIGHEST_LOG)
                column += phase.size
        mu += step[:, column : column + n]
        t = np.maximum(t + step[:, place], 1.0)
        step[:, place] = 0.0
        amounts += step[:, column + n :]
    return States(start.sets, t, mu * system.at(t).rt[:, None], tuple(logs), amounts, converged)
