"""Freezing without diffusion: against the integral on the stored diagrams, laws, known ends."""

from functools import cache
from itertools import pairwise

import numpy as np
import pytest
from scipy.integrate import quad

from diagrams.alloys import parse_alloy
from diagrams.equilibrium import Isotherm
from diagrams.errors import NotCovered
from diagrams.files.assessments import read_assessment
from diagrams.files.catalog import catalog
from diagrams.questions.melt import melter_for
from diagrams.questions.melter import Melter
from diagrams.solidification.scheil import Frozen, frozen
from diagrams.solidification.states import freezing_of
from diagrams.units import celsius_to_kelvin, x_to_second_wt


def melter_of(name: str) -> Melter:
    return melter_for(catalog(), parse_alloy(name)).melter


def freeze(name: str) -> tuple[Melter, Frozen]:
    melter = melter_of(name)
    data = freezing_of(melter)
    w = np.array([melter.alloy.composition_wt.get(el, 0.0) / 100.0 for el in data.elements])
    return melter, frozen(data, w, melter.range_c[1])


def by_integral(diagram_id: str, second_wt: float, liquidus_c: float, temperature_c: float) -> float:
    """ln f = ∫ dx_L / (x_S − x_L), by quadrature; tie lines from minimising, not from the stored diagram."""
    system = read_assessment(diagram_id).system

    @cache
    def ends(t: float) -> tuple[float, float]:
        """wt% of the second element in liquid and solid, of the tie line nearest to the alloy."""
        found = []
        for tie in Isotherm(system, celsius_to_kelvin(t)).ties:
            kinds = (tie.first.kind, tie.second.kind)
            left, right = (x_to_second_wt(x, *system.elements) for x in (tie.left, tie.right))
            if kinds == ("liquid", "solid"):
                found.append((left, right))
            elif kinds == ("solid", "liquid"):
                found.append((right, left))
        return min(found, key=lambda pair: min(abs(end - second_wt) for end in pair))

    h = 0.05

    def rate(t: float) -> float:
        liquid, solid = ends(t)
        return (ends(t + h)[0] - ends(t - h)[0]) / (2 * h) / (solid - liquid)

    start = liquidus_c - 2 * h
    # across the first tenth of a degree the rate hardly changes
    value, _ = quad(rate, start, temperature_c, limit=100, epsabs=1e-5)
    return float(np.exp(value - rate(start) * 2 * h))


@pytest.mark.parametrize(
    ("name", "diagram_id", "second_wt", "wanted_c"),
    [
        ("Pb90Sn10", "pb-sn", 10.0, 250.0),
        ("Ag20Cu80", "ag-cu", 80.0, 900.0),
        ("Cu80Ni20", "cu-ni", 20.0, 1150.0),
    ],
)
def test_against_the_integral(name: str, diagram_id: str, second_wt: float, wanted_c: float) -> None:
    melter, found = freeze(name)
    step = min(found.steps, key=lambda s: abs(s.temperature_c - wanted_c))
    wanted = by_integral(diagram_id, second_wt, melter.range_c[1], step.temperature_c)
    assert 0.05 < wanted < 0.9
    assert step.liquid == pytest.approx(wanted, abs=5e-4)


NAMES = [
    "Pb90Sn10",
    "Sn5Pb95",
    "Ag20Cu80",
    "Sn63Pb37",
    "SAC305",
    "Sn62Pb36Ag2",
    "Sn90Bi7.5Ag2.5",
    "BAg-5",
    "Sn95Sb5",
]


@pytest.mark.parametrize("name", NAMES)
def test_laws(name: str) -> None:
    melter, found = freeze(name)
    data = freezing_of(melter)
    w = np.array([melter.alloy.composition_wt.get(el, 0.0) / 100.0 for el in data.elements])
    liquid = [s.liquid for s in found.steps]
    assert all(b < a for a, b in pairwise(liquid))
    assert all(b.temperature_c < a.temperature_c for a, b in pairwise(found.steps))
    # mass balance of everything frozen and what is left
    whole = sum(amount for amount, _ in found.solids.values())
    left = 1.0 - whole
    balance = sum((amount * mean for amount, mean in found.solids.values()), left * found.last_w)
    assert np.abs(balance - w).max() < 1e-9
    assert all(abs(mean.sum() - 1.0) < 1e-9 for _, mean in found.solids.values())
    # ends at the solidus of equilibrium or below, and holds more liquid than equilibrium on the way
    assert found.steps[-1].temperature_c <= melter.range_c[0] + 0.02
    curve = melter.curve
    assert curve is not None
    for step in found.steps[1:-1]:
        assert step.liquid >= curve.liquid_fraction(step.temperature_c) - 2e-3


@pytest.mark.parametrize(
    ("name", "end_c", "off"),
    [
        ("Sn5Pb95", 183.0, 0.05),  # any lead-tin alloy that has liquid left at the eutectic
        ("Pb90Sn10", 183.0, 0.05),
        ("Sn63Pb37", 183.0, 0.05),
        ("Ag20Cu80", 779.1, 0.1),
        ("SAC305", 217.66, 0.05),
        (
            "Sn90Bi7.5Ag2.5",
            137.4,
            0.2,
        ),  # the tin-bismuth-silver eutectic, far below its solidus
    ],
)
def test_where_the_last_liquid_freezes(name: str, end_c: float, off: float) -> None:
    _, found = freeze(name)
    assert found.unfrozen == 0.0
    assert found.falls_to(0.001) == pytest.approx(end_c, abs=off)


def test_a_pure_metal_freezes_at_its_melting_point() -> None:
    melter, found = freeze("Sn100")
    assert found.steps[-1].temperature_c == pytest.approx(melter.range_c[1], abs=0.02)
    assert len(found.solids) == 1


def test_shorter_steps_change_little(monkeypatch: pytest.MonkeyPatch) -> None:
    melter, coarse = freeze("Pb90Sn10")
    data = freezing_of(melter)
    monkeypatch.setattr("diagrams.solidification.scheil.MOST_FROZEN", 0.01)
    fine = frozen(data, np.array([0.9, 0.1]), melter.range_c[1])
    assert len(fine.steps) > 2 * len(coarse.steps)
    at = [-s.temperature_c for s in fine.steps]
    for step in coarse.steps[1:-1]:
        told = np.interp(-step.temperature_c, at, [s.liquid for s in fine.steps])
        assert told == pytest.approx(step.liquid, abs=3e-4)


def test_fillers_known_by_printed_values_are_refused() -> None:
    with pytest.raises(NotCovered):
        freezing_of(melter_of("BNi-2"))
