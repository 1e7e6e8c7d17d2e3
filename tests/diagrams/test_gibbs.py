"""Phase models: derivatives against differences, energies against fixed points of the temperature scale."""

import numpy as np
import pytest

from diagrams.errors import DataFault
from diagrams.files.assessments import assessment_from, assessment_ids, melting_points_c, read_assessment
from diagrams.gibbs import Solution, logit
from tests.truth import truth

SOLUTIONS = [
    (i, phase)
    for i in assessment_ids()
    for phase in read_assessment(i).system.phases
    if isinstance(phase, Solution)
]


@pytest.mark.parametrize(("system", "phase"), SOLUTIONS, ids=[f"{i} {p.model}" for i, p in SOLUTIONS])
def test_potentials_are_the_derivatives_of_the_energy(system: str, phase: Solution) -> None:
    low_c, high_c = read_assessment(system).temperature_range_c
    frozen = phase.at(0.5 * (low_c + high_c) + 273.15)
    low, high = phase.window
    for share in (0.1, 0.37, 0.5, 0.81):
        x = low + share * (high - low)
        h = 1e-3 * x * (1 - x)
        g = frozen.energy(x)
        # five-point difference, error of order h⁴
        e = [frozen.energy(x + k * h) for k in (-2, -1, 1, 2)]
        slope = (e[0] - 8 * e[1] + 8 * e[2] - e[3]) / (12 * h)
        mu1, mu2, d1, d2, back = frozen.potentials(logit(x))
        assert back == pytest.approx(x, abs=1e-14)
        assert mu1 == pytest.approx(g - x * slope, abs=1e-6 * frozen.rt)
        assert mu2 == pytest.approx(g + (1 - x) * slope, abs=1e-6 * frozen.rt)
        # Gibbs–Duhem: x₁ dμ₁ + x₂ dμ₂ = 0
        assert (1 - x) * d1 + x * d2 == pytest.approx(0.0, abs=1e-9 * frozen.rt)
        up, down = frozen.potentials(logit(x) + 1e-5), frozen.potentials(logit(x) - 1e-5)
        assert d2 == pytest.approx((up[1] - down[1]) / 2e-5, rel=1e-5, abs=1e-3)


@pytest.mark.parametrize(("system", "phase"), SOLUTIONS, ids=[f"{i} {p.model}" for i, p in SOLUTIONS])
def test_array_equals_scalars(system: str, phase: Solution) -> None:
    frozen = phase.at(700.0)
    x = np.concatenate([[0.0, 1.0, 1e-12, 1 - 1e-12], np.linspace(0.01, 0.99, 30)])
    together = frozen.energies(x)
    assert together.shape == x.shape
    for value, one in zip(together, x, strict=True):
        assert frozen.energy(float(one)) == pytest.approx(value, abs=1e-8)


def test_melting_points_are_those_of_the_temperature_scale() -> None:
    outside = {
        row["system"].capitalize(): row["temperature_c"]
        for row in truth("invariants_handbook")
        if row["kind"] == "melting point" and row["source"].startswith("ITS-90")
    }
    ours = melting_points_c()
    common = sorted(set(outside) & set(ours))
    assert len(common) >= 8
    for element in common:
        decimals = len(outside[element].partition(".")[2])
        printed = max(0.01, 0.5 * 10.0**-decimals)  # half the last printed digit, fixed points to 0.01
        assert ours[element] == pytest.approx(float(outside[element]), abs=printed), element


def test_unknown_terms_are_refused() -> None:
    document = {
        "id": "pb-sn",
        "elements": ["Pb", "Sn"],
        "edition": "test",
        "served": {"temperature_c": [20, 400], "second_wt": [0, 100]},
        "sources": [],
        "changes": "none",
        "fitted_to": [],
        "notes": [],
        "phases": [
            {
                "model": "x",
                "kind": "solid",
                "names": [[1, "x"]],
                "type": "compound",
                "x": 0.5,
                "energy": [{"terms": {"sin T": 1.0}}],
            }
        ],
    }
    with pytest.raises(DataFault, match="sin T"):
        assessment_from(document)
