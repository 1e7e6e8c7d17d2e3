"""A prepared sample of compositions for every phase: energies there are one matrix product a temperature.

The sample has the lattice of the simplex and dilute tails along its vertices and edges. It only has to be
dense enough to start from: a phase as near to the tangent plane as NEAR at some point is followed to its
own lowest point (tangent.py), and between neighbouring points the height differs by less than that.
"""

from functools import lru_cache
from itertools import combinations, pairwise, product

import numpy as np

from diagrams.gibbs import Floats
from diagrams.many.newton import Flags, States
from diagrams.many.system import AtT, ManySystem, Mixed

NEAR = 0.12  # of RT
DIVISIONS = {1: 1, 2: 120, 3: 28, 4: 14, 5: 10, 6: 8}
VERTEX_TAILS = (1e-3, 1e-2, 0.03)
EDGE_TAILS = (2e-3, 0.02)
EDGE_STEPS = 12


@lru_cache(maxsize=16)
def lattice(m: int) -> Floats:
    """Sample compositions of m elements, (points, m), pure ends included."""
    steps = DIVISIONS.get(m, 6)
    bars = np.array(list(combinations(range(steps + m - 1), m - 1))).reshape(-1, m - 1)
    edges = np.hstack([np.full((len(bars), 1), -1), bars, np.full((len(bars), 1), steps + m - 1)])
    blocks = [(np.diff(edges, axis=1) - 1) / steps]
    for size, tails in ((1, VERTEX_TAILS), (2, EDGE_TAILS)):
        first = (np.arange(EDGE_STEPS) + 0.5) / EDGE_STEPS
        shares = np.ones((1, 1)) if size == 1 else np.stack([first, 1.0 - first], axis=1)
        for main in combinations(range(m), size) if size < m else ():
            rest = [k for k in range(m) if k not in main]
            few = np.array(list(product((0.0, *tails), repeat=len(rest))))
            block = np.zeros((len(shares), len(few), m))
            block[:, :, rest] = few[None]
            block[:, :, list(main)] = shares[:, None, :] * (1.0 - few.sum(axis=1))[None, :, None]
            blocks.append(block.reshape(-1, m))
    return np.unique(np.round(np.vstack(blocks), 12), axis=0)


class PhaseSample:
    """The sample of one solution, ordered by main element: `regions` are the runs of one main element."""

    def __init__(self, phase: Mixed) -> None:
        points = lattice(phase.size)
        points = points[phase.inside(points)]
        main = np.argmax(points, axis=1)
        order = np.argsort(main, kind="stable")
        self.points = points[order]
        marks = np.searchsorted(main[order], np.arange(phase.size + 1))
        self.regions = [slice(a, b) for a, b in pairwise(marks.tolist()) if b > a]
        self.basis = np.ascontiguousarray(phase.basis(self.points).T)
        self.spacing = 1.05 / DIVISIONS.get(phase.size, 6)


class Sample:
    """The samples of all solutions of a system."""

    def __init__(self, system: ManySystem) -> None:
        self.system = system
        self.phases = tuple(PhaseSample(p) for p in system.mixed)

    def heights(self, at: AtT, mu: Floats, number: int) -> Floats:
        """Height of solution `number` over the plane mu (B, n) at its sample points, over RT: (B, points)."""
        phase = self.system.mixed[number]
        weights = np.hstack([at.mixed[number], at.rt[:, None]])
        weights[:, : phase.size] -= mu[:, phase.index]
        found: Floats = (weights / at.rt[:, None]) @ self.phases[number].basis
        return found

    def beside(self, states: States, number: int) -> Flags | None:
        """Which sample points (B, points) lie next to a set of the same solution; None if it has none."""
        sample = self.phases[number]
        found: Flags | None = None
        for k, other in enumerate(states.sets):
            if other != number:
                continue
            x = np.exp(states.logs[k])
            near = np.ones((len(x), len(sample.points)), dtype=np.bool_)
            for i in range(x.shape[1]):
                near &= np.abs(sample.points[:, i] - x[:, i : i + 1]) < sample.spacing
            found = near if found is None else found | near
        return found
