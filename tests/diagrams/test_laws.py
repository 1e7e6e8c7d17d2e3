"""Laws that hold for every stored diagram, whatever its data."""

from itertools import pairwise

import numpy as np
import pytest

from diagrams.borders import Borders
from diagrams.elements import MOLAR_MASS
from diagrams.errors import InvalidInput, OutsideData
from diagrams.files.catalog import catalog
from diagrams.files.store import stored_ids
from diagrams.questions.lever import equilibrium
from diagrams.questions.locate import locate
from diagrams.questions.locate_many import OUTSIDE, locate_many
from diagrams.questions.melting import melting_curve
from diagrams.tolerances import ON_BORDER_WT
from diagrams.units import wt_to_at
from tests.diagrams.random_points import random_points

ALL = stored_ids()


@pytest.mark.parametrize("diagram_id", ALL)
def test_fractions_and_mass_balance(diagram_id: str) -> None:
    diagram = catalog().get(diagram_id)
    first, second = diagram.elements
    for t, compositions in random_points(diagram):
        for wt in compositions:
            answer = equilibrium(diagram, wt, t)
            assert sum(p.mass_fraction for p in answer.phases) == pytest.approx(1.0, abs=1e-12)
            assert sum(p.mole_fraction for p in answer.phases) == pytest.approx(1.0, abs=1e-12)
            assert all(0.0 <= p.mass_fraction <= 1.0 for p in answer.phases)
            back = sum(p.mass_fraction * p.composition_wt[second] for p in answer.phases)
            assert back == pytest.approx(wt, abs=1e-9 * 100)
            # the same balance in atoms
            alloy_at = wt_to_at({first: 100.0 - wt, second: wt})[second]
            atoms = sum(p.mole_fraction * p.composition_at[second] for p in answer.phases)
            assert atoms == pytest.approx(alloy_at, abs=1e-9 * 100)


@pytest.mark.parametrize("diagram_id", ALL)
def test_mole_shares_follow_from_mass_shares(diagram_id: str) -> None:
    """Moles counted by hand: grams over the mean atomic mass of each phase."""
    diagram = catalog().get(diagram_id)
    first, second = diagram.elements
    for t, compositions in list(random_points(diagram))[:20]:
        answer = equilibrium(diagram, compositions[0], t)
        moles = []
        for p in answer.phases:
            x = p.composition_at[second] / 100.0
            moles.append(p.mass_fraction / (x * MOLAR_MASS[second] + (1 - x) * MOLAR_MASS[first]))
        for p, n in zip(answer.phases, moles, strict=True):
            assert p.mole_fraction == pytest.approx(n / sum(moles), abs=1e-12)


@pytest.mark.parametrize("diagram_id", ALL)
def test_scalar_equals_array(diagram_id: str) -> None:
    diagram = catalog().get(diagram_id)
    points = [(wt, t) for t, compositions in random_points(diagram) for wt in compositions]
    corners = [(wt, c) for wt in diagram.composition_range_wt for c in Borders(diagram).corners_c]
    levels = [(sum(diagram.composition_range_wt) / 2, c) for c in Borders(diagram).corners_c]
    points += corners + levels
    x, t = np.array([p[0] for p in points]), np.array([p[1] for p in points])
    together = locate_many(diagram, x, t)
    assert not together.outside.any()
    for k, (wt, temperature) in enumerate(points):
        one = locate(diagram, wt, temperature)
        assert together.fields[k] == one.field if k % 50 == 0 else True
        assert together.names[together.codes[k]] == one.field
        assert together.liquid_mass_fraction[k] == pytest.approx(one.liquid_mass_fraction, abs=1e-12)


def test_array_marks_what_lies_outside() -> None:
    diagram = catalog().get("pb-sn")
    x = np.array([-1.0, 40.0, 40.0, 101.0, 40.0])
    t = np.array([200.0, 200.0, 5000.0, 200.0, -300.0])
    found = locate_many(diagram, x, t)
    assert found.outside.tolist() == [True, False, True, True, True]
    assert [f == OUTSIDE for f in found.fields] == found.outside.tolist()
    assert np.isnan(found.liquid_mass_fraction[found.outside]).all()
    with pytest.raises(InvalidInput):
        locate_many(diagram, np.array([1.0, 2.0]), np.array([100.0]))
    with pytest.raises(InvalidInput):
        locate_many(diagram, np.array([np.nan]), np.array([100.0]))
    empty = locate_many(diagram, np.array([]), np.array([]))
    assert empty.fields == []


@pytest.mark.parametrize("diagram_id", ALL)
def test_outside_is_refused_with_the_range(diagram_id: str) -> None:
    diagram = catalog().get(diagram_id)
    (wt_low, wt_high), (t_low, t_high) = diagram.composition_range_wt, diagram.temperature_range_c
    for wt, t in ((wt_low - 0.1, t_low), (wt_high + 0.1, t_low), (wt_low, t_low - 1), (wt_low, t_high + 1)):
        with pytest.raises(OutsideData) as caught:
            locate(diagram, wt, t)
        assert caught.value.field in ("temperature_c", "composition_wt")
        assert f"{t_low:g}" in str(caught.value) or f"{wt_low:g}" in str(caught.value)


@pytest.mark.parametrize("diagram_id", ALL)
def test_liquid_fraction_rises_on_heating_unless_solubility_is_retrograde(diagram_id: str) -> None:
    """A fall is allowed only where a solid's own border shows it dissolves less on cooling and on heating.

    Real in silver–lead, cadmium-free germanium and silicon ends: a solid first melts, then takes it back.
    """
    diagram = catalog().get(diagram_id)
    low, high = diagram.composition_range_wt
    rng = np.random.default_rng(11)
    for wt in [low, high, *rng.uniform(low, high, 60).tolist()]:
        points = melting_curve(diagram, wt).points
        for (t0, f0), (t1, f1) in pairwise(points):
            assert t1 >= t0
            assert 0.0 <= f0 <= 1.0
            if f1 < f0 - 1e-9:
                assert border_turns_back(diagram_id, wt, t0, t1), (wt, t0, t1, f0, f1)


def border_turns_back(diagram_id: str, wt: float, t0: float, t1: float) -> bool:
    """Whether the tie line over this stretch moves so that the lever rule gives less liquid when hotter."""
    for strip in Borders(catalog().get(diagram_id)).strips:
        if (
            sorted(strip.region.kinds) != ["liquid", "solid"]
            or t0 < strip.low_c - 1e-9
            or t1 > strip.high_c + 1e-9
        ):
            continue
        liquid, solid = (
            (strip.left, strip.right) if strip.region.kinds[0] == "liquid" else (strip.right, strip.left)
        )
        middle = 0.5 * (t0 + t1)
        if not min(liquid.at(middle), solid.at(middle)) <= wt <= max(liquid.at(middle), solid.at(middle)):
            continue
        before, after = ((wt - solid.at(t)) / (liquid.at(t) - solid.at(t)) for t in (t0 + 1e-9, t1 - 1e-9))
        away = abs(solid.at(t1) - liquid.at(t1)) > abs(solid.at(t0) - liquid.at(t0)) or abs(
            solid.at(t1) - wt
        ) < abs(solid.at(t0) - wt)
        return bool(after < before and away)
    return False


@pytest.mark.parametrize("diagram_id", ALL)
def test_points_on_a_border_read_as_the_single_phase(diagram_id: str) -> None:
    diagram = catalog().get(diagram_id)
    for strip in Borders(diagram).strips:
        t = 0.4 * strip.low_c + 0.6 * strip.high_c
        if any(abs(t - c) < 0.01 for c in Borders(diagram).corners_c):
            continue
        for border, end in ((strip.edge_left, 0), (strip.edge_right, 1)):
            wt = border.at(t)
            low, high = diagram.composition_range_wt
            if wt in (low, high):
                continue  # the frame is no border between regions
            reading = locate(diagram, wt, t)
            assert reading.on_boundary
            assert [p.name for p in reading.phases] == [strip.region.phases[end]] or len(reading.phases) == 1
            inwards = ON_BORDER_WT * (3 if end == 0 else -3)
            if strip.right.at(t) - strip.left.at(t) > 10 * ON_BORDER_WT:
                assert len(locate(diagram, wt + inwards, t).phases) == 2
                assert not locate(diagram, wt + inwards, t).on_boundary


@pytest.mark.parametrize("diagram_id", ALL)
def test_at_an_invariant_both_readings_are_given(diagram_id: str) -> None:
    diagram = catalog().get(diagram_id)
    seen = 0
    low, high = diagram.composition_range_wt
    for invariant in diagram.invariants:
        inside = [c for c in invariant.compositions_wt.values() if low <= c <= high]
        if len(set(inside)) < 2:
            continue
        wt = 0.7 * min(inside) + 0.3 * max(inside)
        reading = locate(diagram, wt, invariant.temperature_c)
        if reading.below is None:
            continue
        seen += 1
        assert reading.on_boundary
        assert reading.field == locate(diagram, wt, invariant.temperature_c + 0.02).field
        assert reading.below.field == locate(diagram, wt, invariant.temperature_c - 0.02).field
    three_phase = [i for i in diagram.invariants if len(set(i.compositions_wt.values())) > 2]
    assert seen >= min(1, len(three_phase))
