"""Gibbs-energy minimisation of a binary: the reference every polygon must agree with.

At one temperature the lower convex hull over all phases finds every tie line (global), Newton's method
sharpens each (tie.py), and every phase is then checked to lie on or above every common tangent.
"""

from itertools import pairwise

import numpy as np

from diagrams.errors import NotConverged
from diagrams.gibbs import GAS_CONSTANT, Compound, Floats, Phase, Solution, SolutionAtT, System, logit
from diagrams.tie import FixedAtT, PhaseAtT, Tie, solve_tie

BELOW_TANGENT = 1e-8  # of RT: how far a phase may lie under a tangent before the answer is refused
NEAR_TANGENT = 1e-3  # of RT: a phase this near a tangent at a grid point may dip under it between two
MOST_ROUNDS = 8


def _base_grid() -> Floats:
    tail = 1.0 / (1.0 + np.exp(np.arange(4.0, 37.0)))
    grid = np.concatenate([[0.0, 1.0], tail, 1.0 - tail, np.linspace(0.0, 1.0, 401)[1:-1]])
    return np.unique(grid)


GRID = _base_grid()


class Isotherm:
    """All equilibria of a system at one temperature: `ties`, left to right.

    Raises NotConverged if no set of tangents can be proven to be the lowest.
    """

    def __init__(self, system: System, temperature_k: float) -> None:
        self.temperature_k = temperature_k
        self._range = system.x_range
        self._rt = GAS_CONSTANT * temperature_k
        self._solutions = [p.at(temperature_k) for p in system.phases if isinstance(p, Solution)]
        self._compounds = [
            FixedAtT(p, self._rt, p.energy(temperature_k))
            for p in system.phases
            if isinstance(p, Compound) and self._range[0] <= p.x <= self._range[1]
        ]
        self.ties = self._search()

    def single(self, x: float) -> Phase:
        """The stable phase at mole fraction x, where no tie line passes."""
        best: tuple[float, Phase] | None = None
        for solution in self._solutions:
            low, high = solution.phase.window
            if low <= x <= high:
                g = solution.energy(x)
                if best is None or g < best[0]:
                    best = (g, solution.phase)
        for compound in self._compounds:
            if compound.phase.x == x and (best is None or compound.g < best[0]):
                best = (compound.g, compound.phase)
        if best is None:
            raise NotConverged(f"no phase is described at x = {x}")
        return best[1]

    def _search(self) -> list[Tie]:
        grid = GRID
        windows = [w for s in self._solutions for w in s.phase.window if 0.0 < w < 1.0]
        if windows:
            grid = np.unique(np.concatenate([grid, np.array(windows)]))
        low, high = self._range
        if (low, high) != (0.0, 1.0):
            grid = np.unique(np.concatenate([grid[(grid > low) & (grid < high)], [low, high]]))
        for _ in range(MOST_ROUNDS):
            energies = self._energies(grid)
            narrow = self._narrow(grid, energies)
            if narrow.size:
                grid = np.unique(np.concatenate([grid, narrow]))
                energies = self._energies(grid)
            ties = self._hull_ties(grid, energies)
            missing = self._below(grid, energies, ties)
            if not missing.size:
                return ties
            grid = np.unique(np.concatenate([grid, missing]))
        raise NotConverged(f"no lowest set of tangents found at {self.temperature_k:.3f} K")

    def _energies(self, grid: Floats) -> Floats:
        rows = []
        for solution in self._solutions:
            low, high = solution.phase.window
            g = solution.energies(grid)
            rows.append(np.where((grid >= low) & (grid <= high), g, np.inf))
        return np.vstack(rows)

    def _narrow(self, grid: Floats, energies: Floats) -> Floats:
        """Compositions where one solution dips under another between two grid points."""
        found: list[float] = []
        h1, h2 = grid[1:-1] - grid[:-2], grid[2:] - grid[1:-1]
        for i in range(len(energies)):
            for j in range(len(energies)):
                if i == j:
                    continue
                with np.errstate(invalid="ignore", divide="ignore"):
                    d = energies[i] - energies[j]
                    s1, s2 = (d[1:-1] - d[:-2]) / h1, (d[2:] - d[1:-1]) / h2
                    curve = (s2 - s1) / (h1 + h2)
                    slope = s1 + curve * h1
                    lowest = d[1:-1] - slope**2 / (4 * curve)
                    dips = (d[1:-1] > 0) & (s1 <= 0) & (s2 >= 0) & (curve > 0) & (lowest < 1e-6 * self._rt)
                for k in np.flatnonzero(dips):
                    found.append(float(grid[k + 1] - slope[k] / (2 * curve[k])))
        return np.array(found)

    def _hull_ties(self, grid: Floats, energies: Floats) -> list[Tie]:
        owner = np.argmin(energies, axis=0)
        lowest = energies[owner, np.arange(grid.size)]
        points: list[tuple[float, float, PhaseAtT]] = [
            (x, g, self._solutions[k])
            for x, g, k in zip(grid.tolist(), lowest.tolist(), owner.tolist(), strict=True)
            if g < np.inf
        ]
        points += [(c.phase.x, c.g, c) for c in self._compounds]
        points.sort(key=lambda p: (p[0], p[1]))
        hull: list[tuple[float, float, PhaseAtT]] = []
        for p in points:
            if hull and p[0] == hull[-1][0]:
                continue  # the lower of two at one composition came first
            while len(hull) > 1 and (hull[-1][0] - hull[-2][0]) * (p[1] - hull[-2][1]) <= (
                hull[-1][1] - hull[-2][1]
            ) * (p[0] - hull[-2][0]):
                hull.pop()
            hull.append(p)
        middles = 0.5 * (grid[1:] + grid[:-1])
        unstable = [s for s in self._solutions if np.any(s.curvatures(middles) < 0.0)]
        ties: list[Tie] = []
        ends: list[tuple[PhaseAtT, PhaseAtT]] = []
        for (x1, _, a), (x2, _, b) in pairwise(hull):
            if a is not b or (a in unstable and isinstance(a, SolutionAtT) and self._is_gap(a, x1, x2)):
                ties.append(solve_tie(a, b, x1, x2))
                ends.append((a, b))
        k = 0
        while k + 1 < len(ties):
            one, two = ties[k], ties[k + 1]
            if one.right <= two.left and one.mu2 - one.mu1 <= two.mu2 - two.mu1:
                k += 1
                continue
            # Not convex: the phase between the two tangents lies just above their common one.
            outer = (ends[k][0], ends[k + 1][1])
            ties[k : k + 2] = [solve_tie(*outer, ties[k].left, ties[k + 1].right)]
            ends[k : k + 2] = [outer]
            k = max(0, k - 1)
        return ties

    @staticmethod
    def _is_gap(solution: SolutionAtT, x1: float, x2: float) -> bool:
        inside = x1 + (x2 - x1) * np.linspace(0.02, 0.98, 49)
        return bool(np.any(solution.curvatures(inside) < 0.0))

    def _below(self, grid: Floats, energies: Floats, ties: list[Tie]) -> Floats:
        """Compositions at which some phase lies under a tangent; refuses compounds under one."""
        missing: list[float] = []
        for tie in ties:
            depth = energies - (tie.mu1 * (1.0 - grid) + tie.mu2 * grid)
            for solution, row in zip(self._solutions, depth, strict=True):
                low = row[1:-1] < NEAR_TANGENT * self._rt
                dips = low & (row[1:-1] <= row[:-2]) & (row[1:-1] <= row[2:])
                for k in np.flatnonzero(dips) + 1:
                    x = parallel_tangent(solution, float(grid[k]), tie.mu2 - tie.mu1)
                    above = solution.energy(x) - tie.mu1 * (1.0 - x) - tie.mu2 * x
                    if above < -BELOW_TANGENT * self._rt:
                        missing.append(x)
            for c in self._compounds:
                if c.g < tie.mu1 * (1.0 - c.phase.x) + tie.mu2 * c.phase.x - BELOW_TANGENT * self._rt:
                    raise NotConverged(f"{c.phase.model} lies under a tangent at {self.temperature_k:.3f} K")
        return np.array(missing)


def parallel_tangent(solution: SolutionAtT, x: float, slope: float) -> float:
    """Where the solution's own tangent has the given slope (J/mol), started at x: its deepest point."""
    u = logit(x)
    for _ in range(20):
        mu1, mu2, d1, d2, x = solution.potentials(u)
        if d2 - d1 <= 0.0:
            break
        step = (mu2 - mu1 - slope) / (d2 - d1)
        u -= max(-1.0, min(1.0, step))
        if abs(step) < 1e-12:
            break
    low, high = solution.phase.window
    return min(max(x, low), high)
