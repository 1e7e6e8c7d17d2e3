"""Melting by minimisation: binaries against the stored polygons, three elements against measured facts."""

import itertools

import numpy as np
import pytest

from diagrams.alloys import alloy_from_designation, alloy_from_wt
from diagrams.errors import NotCovered, OutsideData
from diagrams.files.catalog import catalog
from diagrams.questions.by_minimisation import ByMinimisation
from diagrams.questions.lever import equilibrium
from diagrams.questions.melting import melting_curve

BINARIES = [("pb-sn", 40.0), ("pb-sn", 63.0), ("ag-sn", 96.5), ("bi-sn", 42.0), ("bi-pb", 30.0)]


def binary(diagram_id: str, wt: float, tolerance: float = 0.0) -> ByMinimisation:
    first, second = catalog().get(diagram_id).elements
    return ByMinimisation(alloy_from_wt({first: 100 - wt, second: wt}, {second: tolerance}))


@pytest.mark.parametrize(("diagram_id", "wt"), BINARIES)
def test_binaries_melt_as_their_polygons_say(diagram_id: str, wt: float) -> None:
    found, stored = binary(diagram_id, wt), melting_curve(catalog().get(diagram_id), wt)
    assert found.curve.solidus_c == pytest.approx(stored.solidus_c, abs=0.02)
    assert found.curve.liquidus_c == pytest.approx(stored.liquidus_c, abs=0.05)
    low, high = stored.solidus_c, stored.liquidus_c
    for t in np.random.default_rng(4).uniform(low - 15, high + 15, 40).tolist():
        if min(abs(t - low), abs(t - high)) > 0.1:
            assert found.curve.liquid_fraction(t) == pytest.approx(stored.liquid_fraction(t), abs=2e-3)
    for fraction in (0.3, 0.8):
        known = stored.stays_above(fraction)
        assert found.curve.stays_above(fraction) == pytest.approx(known, abs=0.1)


@pytest.mark.parametrize(
    ("diagram_id", "wt", "t"), [("pb-sn", 40, 200), ("pb-sn", 40, 150), ("bi-sn", 60, 145)]
)
def test_states_are_those_of_the_lever_rule(diagram_id: str, wt: float, t: float) -> None:
    found, known = binary(diagram_id, wt).equilibrium(t), equilibrium(catalog().get(diagram_id), wt, t)
    assert {p.name for p in found.phases} == {p.name for p in known.phases}
    assert found.liquid_mass_fraction == pytest.approx(known.liquid_mass_fraction, abs=1e-3)
    for phase in found.phases:
        (other,) = (p for p in known.phases if p.name == phase.name)
        assert phase.kind == other.kind
        assert phase.mass_fraction == pytest.approx(other.mass_fraction, abs=1e-3)
        assert phase.mole_fraction == pytest.approx(other.mole_fraction, abs=1e-3)
        assert phase.composition_wt == pytest.approx(other.composition_wt, abs=0.05)


def test_the_tin_silver_copper_eutectic_is_where_it_was_measured() -> None:
    """217.2 °C at 3.57 Ag and 0.9 Cu (wt%), published; SAC305 melts at 217 to 220 °C (ISO 9453)."""
    sac = ByMinimisation(alloy_from_designation("SAC305"))
    assert sac.curve.solidus_c == pytest.approx(217.2, abs=0.6)
    assert sac.curve.liquidus_c == pytest.approx(220, abs=1)
    state = sac.equilibrium(sac.curve.solidus_c)
    assert state.on_boundary
    assert state.below is not None
    assert {p.name for p in state.below.phases} == {"(Sn)", "Ag3Sn", "Cu6Sn5"}
    below, above = sac.curve.solidus_c - 0.01, sac.curve.solidus_c + 0.01
    assert sac.curve.liquid_fraction(below) == 0
    assert sac.curve.liquid_fraction(above) > 0.5
    assert sac.jump(sac.curve.solidus_c, sac.alloy.composition_wt) > 0.5


@pytest.mark.parametrize("t", [150.0, 217.0, 218.5, 230.0])
def test_amounts_times_compositions_give_the_alloy(t: float) -> None:
    alloy = alloy_from_wt({"Sn": 80, "Pb": 15, "Ag": 4, "Cu": 1})
    state = ByMinimisation(alloy).equilibrium(t)
    for el, wt in alloy.composition_wt.items():
        whole = sum(p.mass_fraction * p.composition_wt.get(el, 0.0) for p in state.phases)
        assert whole == pytest.approx(wt, abs=1e-7)
    assert sum(p.mole_fraction for p in state.phases) == pytest.approx(1)
    assert len(state.phases) <= 4


def test_no_alloy_in_tolerance_melts_outside_the_extremes() -> None:
    """Against a grid of 25 whole curves."""
    tolerance = {"Ag": 0.25, "Sn": 0.5}
    found = ByMinimisation(alloy_from_wt({"Sn": 62, "Pb": 36, "Ag": 2}, tolerance))
    solidus, liquidus = found.kept(0.0), found.needed(1.0)
    seen: dict[str, list[float]] = {"solidus": [], "liquidus": []}
    for silver, tin in itertools.product(np.linspace(1.75, 2.25, 5), np.linspace(61.5, 62.5, 5)):
        wt = {"Ag": float(silver), "Sn": float(tin), "Pb": float(100 - silver - tin)}
        curve = ByMinimisation(alloy_from_wt(wt)).curve
        seen["solidus"].append(curve.solidus_c)
        seen["liquidus"].append(curve.liquidus_c)
    for span, values in ((solidus, seen["solidus"]), (liquidus, seen["liquidus"])):
        assert span.lowest is not None
        assert span.highest is not None
        assert span.lowest <= min(values) + 0.02
        assert span.highest >= max(values) - 0.02
        assert span.lowest <= span.nominal <= span.highest
        assert 9 < span.tried < 150
    assert liquidus.highest is not None
    assert liquidus.highest - liquidus.nominal > 1


def test_extremes_of_binaries_are_the_exact_ones() -> None:
    found, diagram = binary("pb-sn", 40.0, 2.0), catalog().get("pb-sn")
    span = found.needed(1.0)
    exact = [melting_curve(diagram, wt).liquidus_c for wt in (38, 42)]
    assert [span.highest, span.lowest] == pytest.approx(exact, abs=0.05)
    worst = max(melting_curve(diagram, wt).liquid_fraction(200) for wt in (38.0, 40.0, 42.0))
    assert found.most_liquid_up_to(200) == pytest.approx(worst, abs=2e-3)


def test_what_no_system_holds_is_refused() -> None:
    with pytest.raises(NotCovered):
        ByMinimisation(alloy_from_wt({"Sn": 90, "Fe": 5, "Al": 5}))
    with pytest.raises(OutsideData):
        ByMinimisation(alloy_from_wt({"Ag": 10, "Cu": 30, "Zn": 60}))
    sac = ByMinimisation(alloy_from_designation("SAC305"))
    with pytest.raises(OutsideData):
        sac.equilibrium(2000)
    with pytest.raises(OutsideData):
        sac.liquid_fractions([2000])
    assert sac.liquid_up_to(2000) is None
    assert sac.most_liquid_up_to(2000) is None
