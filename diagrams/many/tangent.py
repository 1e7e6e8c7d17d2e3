"""How far phases lie over a tangent plane: the lowest point of each, followed from a sample.

At the lowest point all potentials of the phase lie above the plane by one and the same height.
"""

from dataclasses import dataclass

import numpy as np

from diagrams.gibbs import Floats
from diagrams.many.newton import States
from diagrams.many.sample import NEAR, Sample
from diagrams.many.system import AtT, Ints, ManySystem, Mixed

MOST_STEPS = 25
LONGEST_STEP = 1.0  # of ln x
DILUTE = 0.02  # mole fraction below which an element may fall by any factor in one step
SETTLED = 1e-13  # of RT: fall that Newton's step still promises
HOPELESS = 0.2  # where the promised fall is less than this share of the height, no way leads under the plane
LOWEST_LOG = -300.0
OUTSIDE = 1e-9  # of RT: how much lower a phase must lie beyond its limits to have its lowest point there


@dataclass(frozen=True)
class Deepest:
    """For each of B planes the phase that lies lowest: its height over RT, number and composition.

    `log` is ln x over the elements the phase dissolves, empty for a compound.
    """

    height: Floats
    phase: Ints
    logs: list[Floats]


def follow_down(phase: Mixed, values: Floats, rt: Floats, mu: Floats, start: Floats) -> tuple[Floats, Floats]:
    """From compositions `start` (B, m) down to the lowest point over the planes mu (B, m).

    Gives the heights over RT and ln x. The lowest point met on the way counts, whatever Newton's method
    does; the way is left early where it can no longer lead under the plane. Where it leads out of the
    compositions the phase is described for, the phase does not count: its height is infinite.
    """
    # an element missing at the start is let in as far as the plane asks for
    u = np.log(np.maximum(start, 1e-13))
    potentials, _, _ = phase.potentials(values, rt, u)
    wanted = u + (mu - potentials) / rt[:, None]
    u = _normal(np.where(start > 0.0, u, np.clip(wanted, LOWEST_LOG, -3.0)))
    lowest, found = np.full(len(u), np.inf), u.copy()
    outside = np.full(len(u), np.inf)
    rows: Ints = np.arange(len(u))
    for _ in range(MOST_STEPS):
        potentials, slopes, x = phase.potentials(values, rt, u)
        above = (potentials - mu) / rt[:, None]
        height = np.einsum("bi,bi->b", x, above)
        within = phase.inside(x)
        better = (height < lowest[rows]) & within
        if better.any():
            lowest[rows[better]], found[rows[better]] = height[better], u[better]
        if not within.all():
            outside[rows[~within]] = np.minimum(outside[rows[~within]], height[~within])
        # not downhill, or curved the wrong way: the step of an ideal solution, which always leads down
        step = _downhill(slopes / rt[:, None, None], x, above)
        fall = -np.einsum("bi,bi->b", x * step, above)
        wrong = ~((fall >= -1e-14) & np.all(np.isfinite(step), axis=1))
        step[wrong] = height[wrong, None] - above[wrong]
        longest = np.max(np.where(x > DILUTE, np.abs(step), step), axis=1)
        u = _normal(u + step / np.maximum(longest, LONGEST_STEP)[:, None])
        left = (np.abs(fall) > SETTLED) & (wrong | (height < 0.0) | (fall > HOPELESS * height))
        if not left.any():
            break
        if not left.all():
            rows, u, values, rt, mu = rows[left], u[left], values[left], rt[left], mu[left]
        u = np.clip(u, LOWEST_LOG, 0.0)
    lowest[outside < lowest - OUTSIDE] = np.inf
    return lowest, found


def _downhill(slopes: Floats, x: Floats, above: Floats) -> Floats:
    """Newton's step in ln x (B, m) towards potentials all above the plane by one height."""
    states, size = x.shape
    matrix = np.zeros((states, size + 1, size + 1))
    right = np.zeros((states, size + 1, 1))
    matrix[:, :size, :size] = slopes
    matrix[:, :size, size] = -1.0
    matrix[:, size, :size] = x
    right[:, :size, 0] = -above
    try:
        return np.linalg.solve(matrix, right)[:, :size, 0]
    except np.linalg.LinAlgError:
        return np.full_like(x, np.nan)


def _normal(u: Floats) -> Floats:
    top = u.max(axis=1, keepdims=True)
    found: Floats = u - top - np.log(np.sum(np.exp(u - top), axis=1, keepdims=True))
    return found


def candidates(
    sample: Sample, at: AtT, mu: Floats, beside: States | None, near: float = NEAR
) -> list[tuple[int, Ints, Floats, Floats]]:
    """Low points of every solution over the planes mu: (phase, rows of mu, heights over RT, ln x).

    `beside` names states whose own surroundings are left out: there the plane touches.
    """
    found = []
    for number, part in enumerate(sample.phases):
        heights = sample.heights(at, mu, number)
        shadow = sample.beside(beside, number) if beside is not None else None
        if shadow is not None:
            heights = np.where(shadow, np.inf, heights)
        rows, starts = [], []
        for region in part.regions:
            piece = heights[:, region]
            best = np.argmin(piece, axis=1)
            low = np.flatnonzero(piece[np.arange(len(best)), best] < near)
            rows.append(low)
            starts.append(part.points[region][best[low]])
        which = np.concatenate(rows)
        if which.size:
            phase = sample.system.mixed[number]
            height, logs = follow_down(
                phase, at.mixed[number][which], at.rt[which], mu[which][:, phase.index], np.vstack(starts)
            )
            found.append((number, which, height, logs))
    return found


def compound_heights(system: ManySystem, at: AtT, mu: Floats) -> Floats:
    """Heights of the compounds over the planes, over RT: (B, compounds)."""
    found: Floats = (at.fixed - mu @ system.fixed_x.T) / at.rt[:, None]
    return found


def deepest(sample: Sample, states: States) -> Deepest:
    """The phase lying lowest over the tangent plane of each state; under zero it is missing."""
    system = sample.system
    at = system.at(states.temperatures_k)
    count = len(states.mu)
    height = np.full(count, np.inf)
    number = np.full(count, -1)
    logs: list[Floats] = [np.empty(0) for _ in range(count)]
    heights = compound_heights(system, at, states.mu)
    if heights.shape[1]:
        best = np.argmin(heights, axis=1)
        height = heights[np.arange(count), best]
        number = best + len(system.mixed)
    for phase, rows, low, found in candidates(sample, at, states.mu, states):
        for k, row in enumerate(rows.tolist()):
            if low[k] < height[row]:
                height[row], number[row], logs[row] = low[k], phase, found[k]
    return Deepest(height, number, logs)
