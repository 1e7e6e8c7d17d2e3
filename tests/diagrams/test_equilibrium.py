"""The minimiser against brute force: a linear programme over a grid, then every pair, closing in."""

import numpy as np
import pytest
from scipy.optimize import linprog

from diagrams.equilibrium import Isotherm
from diagrams.files.assessments import assessment_ids, read_assessment
from diagrams.gibbs import Compound, Solution, System
from tests.diagrams.minimised import phases_at

GRID = 3000
PAIR = 161
ROUNDS = 9

Points = list[tuple[str, float, float]]  # model, mole fraction, share


def brute_force(system: System, x: float, temperature_k: float) -> Points:
    """The least energy over points of every phase: a linear programme finds which, then every pair is tried.

    The programme is global but coarse; the pairs are searched on grids that close in on the best one.
    """
    found = coarse(system, x, temperature_k)
    if len(found) == 1:
        return found
    assert len(found) == 2
    phases = {p.model: p for p in system.phases}
    step = 1.0 / (GRID - 1)
    spans = [(v, v) if isinstance(phases[m], Compound) else (v - 3 * step, v + 3 * step) for m, v, _ in found]
    for _ in range(ROUNDS):
        grids, energies = [], []
        for (model, _, _), (low, high) in zip(found, spans, strict=True):
            phase = phases[model]
            if isinstance(phase, Compound):
                grids.append(np.array([phase.x]))
                energies.append(np.array([phase.energy(temperature_k)]))
                continue
            inside = max(low, phase.window[0]), min(high, phase.window[1])
            grids.append(np.linspace(*inside, PAIR))
            energies.append(phase.at(temperature_k).energies(grids[-1]))
        left, right = grids[0][:, None], grids[1][None, :]
        right_share = (x - left) / (right - left)
        mixed = energies[0][:, None] * (1 - right_share) + energies[1][None, :] * right_share
        mixed = np.where((right_share >= 0) & (right_share <= 1), mixed, np.inf)
        i, j = np.unravel_index(int(np.argmin(mixed)), mixed.shape)
        best = (float(grids[0][i]), float(grids[1][j]))
        share = float(right_share[i, j])
        found = [(found[0][0], best[0], 1 - share), (found[1][0], best[1], share)]
        spans = [
            (v - 5 * (g[-1] - g[0]) / PAIR, v + 5 * (g[-1] - g[0]) / PAIR)
            for v, g in zip(best, grids, strict=True)
        ]
    return found


def coarse(system: System, x: float, temperature_k: float) -> Points:
    """Which phases, from a linear programme over a grid of compositions of all of them."""
    models, xs, gs = [], [], []
    low, high = system.x_range
    for phase in system.phases:
        if isinstance(phase, Solution):
            grid = np.linspace(0.0, 1.0, GRID)
            grid = grid[(grid >= max(phase.window[0], low)) & (grid <= min(phase.window[1], high))]
            models += [phase.model] * grid.size
            xs.append(grid)
            gs.append(phase.at(temperature_k).energies(grid))
        elif low <= phase.x <= high:
            models.append(phase.model)
            xs.append(np.array([phase.x]))
            gs.append(np.array([phase.energy(temperature_k)]))
    all_x, all_g = np.concatenate(xs), np.concatenate(gs)
    solved = linprog(
        all_g / 1000.0, A_eq=np.vstack([np.ones_like(all_x), all_x]), b_eq=[1.0, x], method="highs-ds"
    )
    assert solved.success
    points = [(models[k], float(all_x[k]), float(solved.x[k])) for k in np.flatnonzero(solved.x > 1e-9)]
    if len(points) == 2 and points[0][0] == points[1][0] and abs(points[0][1] - points[1][1]) < 2.5 / GRID:
        return [(points[0][0], x, 1.0)]  # two neighbouring points of one phase are that phase
    return sorted(points, key=lambda p: p[1])


@pytest.mark.parametrize("system_id", assessment_ids())
def test_agrees_with_brute_force(system_id: str) -> None:
    assessment = read_assessment(system_id)
    system = assessment.system
    rng = np.random.default_rng(20261201)
    low, high = assessment.temperature_range_c
    for _ in range(12):
        temperature_k = float(rng.uniform(low, high)) + 273.15
        x = float(rng.uniform(*system.x_range))
        ours = phases_at(Isotherm(system, temperature_k), x)
        if any(a.moles < 1e-3 for a in ours):
            continue  # so near a border that the grid cannot tell
        outside = brute_force(system, x, temperature_k)
        assert [a.phase.model for a in ours] == [m for m, _, _ in outside], (x, temperature_k)
        for amount, (_, there, share) in zip(ours, outside, strict=True):
            assert amount.x == pytest.approx(there, abs=1e-6)
            assert amount.moles == pytest.approx(share, abs=1e-6)


@pytest.mark.parametrize("system_id", assessment_ids())
def test_ties_share_potentials_and_nothing_lies_below(system_id: str) -> None:
    assessment = read_assessment(system_id)
    low, high = assessment.temperature_range_c
    grid = np.linspace(1e-6, 1 - 1e-6, 4001)
    for temperature_c in np.linspace(low + 1, high - 1, 9):
        isotherm = Isotherm(assessment.system, float(temperature_c) + 273.15)
        for tie in isotherm.ties:
            for phase, x in ((tie.first, tie.left), (tie.second, tie.right)):
                tangent = tie.mu1 * (1 - x) + tie.mu2 * x
                energy = (
                    phase.energy(isotherm.temperature_k)
                    if isinstance(phase, Compound)
                    else phase.at(isotherm.temperature_k).energy(x)
                )
                assert energy == pytest.approx(tangent, abs=1e-5)
            for phase in assessment.system.phases:
                if isinstance(phase, Solution):
                    low_x, high_x = max(phase.window[0], assessment.system.x_range[0]), phase.window[1]
                    inside = grid[(grid >= low_x) & (grid <= min(high_x, assessment.system.x_range[1]))]
                    if not inside.size:
                        continue  # a phase wholly outside what is described here
                    depth = phase.at(isotherm.temperature_k).energies(inside) - (
                        tie.mu1 * (1 - inside) + tie.mu2 * inside
                    )
                    assert depth.min() > -1e-3, (phase.model, temperature_c)
