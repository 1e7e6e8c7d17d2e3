"""Melting curves against brute force over many points, and extremes over a tolerance against dense scans."""

from dataclasses import replace

import numpy as np
import pytest

from diagrams.alloys import alloy_from_designation, alloy_from_wt
from diagrams.borders import Borders
from diagrams.errors import InvalidComposition, InvalidInput, NotCovered, OutsideData
from diagrams.files.catalog import catalog
from diagrams.files.store import stored_ids
from diagrams.questions.locate_many import locate_many
from diagrams.questions.melting import melting_curve
from diagrams.questions.place import place
from diagrams.tolerances import ON_INVARIANT_C
from tests.diagrams.tolerant import tolerant


@pytest.mark.parametrize("diagram_id", stored_ids())
def test_curve_equals_the_state_at_each_point(diagram_id: str) -> None:
    diagram = catalog().get(diagram_id)
    rng = np.random.default_rng(5)
    for wt in rng.uniform(*diagram.composition_range_wt, 12).tolist():
        t = np.sort(rng.uniform(*diagram.temperature_range_c, 300))
        corners = np.array(Borders(diagram).corners_c)
        t = t[np.abs(t[:, None] - corners).min(axis=1) > ON_INVARIANT_C]  # read just above there
        curve = melting_curve(diagram, wt)
        states = locate_many(diagram, np.full_like(t, wt), t).liquid_mass_fraction
        together = curve.liquid_fractions(t)
        assert together == pytest.approx(states, abs=2e-6)  # the boundary rule moves points by 1e-4 wt%
        for k in range(0, t.size, 37):
            assert curve.liquid_fraction(float(t[k])) == pytest.approx(together[k], abs=1e-12)


@pytest.mark.parametrize("diagram_id", stored_ids())
def test_inversion_is_exact(diagram_id: str) -> None:
    """Just above the answer the fraction is reached for good; just below it is not."""
    diagram = catalog().get(diagram_id)
    rng = np.random.default_rng(6)
    for wt in rng.uniform(*diagram.composition_range_wt, 15).tolist():
        curve = melting_curve(diagram, wt)
        top = diagram.temperature_range_c[1]
        for fraction in (0.001, 0.25, 0.5, 0.9, 0.999, 1.0):
            try:
                t = curve.stays_above(fraction)
            except OutsideData:
                assert curve.points[-1][1] < fraction or curve.points[0][1] >= fraction
                continue
            above = np.linspace(t, top, 400)
            assert (curve.liquid_fractions(above) >= fraction - 1e-9).all()
            assert curve.liquid_fraction(t - 1e-6) < fraction + 1e-9
        for fraction in (0.0, 0.25, 0.5, 0.9):
            try:
                t = curve.first_exceeds(fraction)
            except OutsideData:
                continue
            below = np.linspace(diagram.temperature_range_c[0], t - 1e-7, 400)
            assert (curve.liquid_fractions(below) <= fraction + 1e-9).all()
            assert curve.liquid_fraction(t + 1e-6) > fraction - 1e-9


def test_jump_at_the_eutectic_stands_twice_in_the_curve() -> None:
    diagram = catalog().get("pb-sn")
    eutectic = next(i for i in diagram.invariants if i.kind == "eutectic")
    points = melting_curve(diagram, 40.0).points
    at = [f for t, f in points if t == eutectic.temperature_c]
    pb, liquid = eutectic.compositions_wt["(Pb)"], eutectic.compositions_wt["L"]
    assert at[0] == 0.0
    assert at[-1] == pytest.approx((40.0 - pb) / (liquid - pb), abs=1e-9)  # lever rule by hand


INTERVALS = [
    ("pb-sn", 63.0, 62.5, 63.5),
    ("pb-sn", 62.0, 61.0, 63.0),
    ("pb-sn", 18.0, 16.0, 20.0),
    ("ag-cu", 28.0, 27.0, 29.0),
    ("bi-sn", 42.0, 41.0, 43.0),
    ("au-cu", 20.0, 19.0, 21.0),
    ("cu-zn", 41.0, 38.0, 43.0),
    ("ag-sn", 96.5, 96.0, 97.0),
]


@pytest.mark.parametrize(("diagram_id", "nominal", "low", "high"), INTERVALS)
def test_extremes_over_a_tolerance(diagram_id: str, nominal: float, low: float, high: float) -> None:
    diagram = catalog().get(diagram_id)
    second = diagram.elements[1]
    scan = [melting_curve(diagram, wt) for wt in np.linspace(low, high, 301)]
    melter = tolerant(diagram_id, nominal, low, high)
    for found, question in (
        (melter.kept(0.0), lambda c: c.solidus_c),
        (melter.needed(1.0), lambda c: c.liquidus_c),
    ):
        values = [question(c) for c in scan]
        assert found.lowest <= min(values) + 1e-9
        assert found.highest >= max(values) - 1e-9
        # and each is really met by some composition of the interval
        for at, value in ((found.lowest_at, found.lowest), (found.highest_at, found.highest)):
            assert low <= at[second] <= high
            assert question(melting_curve(diagram, at[second])) == pytest.approx(value, abs=1e-9)


@pytest.mark.parametrize(("diagram_id", "nominal", "low", "high"), INTERVALS)
@pytest.mark.parametrize("fraction", [0.2, 0.8])
def test_extremes_of_a_fraction(
    diagram_id: str, nominal: float, low: float, high: float, fraction: float
) -> None:
    diagram = catalog().get(diagram_id)
    scan = [melting_curve(diagram, wt).stays_above(fraction) for wt in np.linspace(low, high, 301)]
    found = tolerant(diagram_id, nominal, low, high).needed(fraction)
    assert found.lowest <= min(scan) + 1e-9
    assert found.highest >= max(scan) - 1e-9


@pytest.mark.parametrize("diagram_id", ["ag-pb", "ag-zn", "au-sn", "bi-in", "cu-pb", "cu-zn", "in-sn"])
@pytest.mark.parametrize("fraction", [0.0, 0.35, 1.0])
def test_wide_tolerances_need_few_compositions_and_miss_none(diagram_id: str, fraction: float) -> None:
    """Against vertices of the stored polygons and other compositions at random."""
    diagram = catalog().get(diagram_id)
    low, high = diagram.composition_range_wt
    melter = tolerant(diagram_id, 0.5 * (low + high), low, high)
    vertices = np.concatenate([np.array(r.polygon.exterior.coords)[:, 0] for r in diagram.regions])
    rng = np.random.default_rng(8)
    scan = np.concatenate([rng.choice(np.unique(vertices), 300), rng.uniform(low, high, 150)])
    curves = [melting_curve(diagram, wt) for wt in np.unique(scan).tolist()]
    for ask, possible in (("kept", fraction < 1.0), ("needed", fraction > 0.0)):
        if possible:
            found = getattr(melter, ask)(fraction)
            question = {"kept": "first_exceeds", "needed": "stays_above"}[ask]
            values = [getattr(curve, question)(fraction) for curve in curves]
            assert found.lowest <= min(values) + 1e-9
            assert found.highest >= max(values) - 1e-9
            assert found.tried <= 120


def test_an_extreme_inside_the_interval_is_found() -> None:
    """Across the eutectic both ends have a higher liquidus than the middle."""
    found = tolerant("pb-sn", 62.0, 60.0, 64.0).needed(1.0)
    eutectic = next(i for i in catalog().get("pb-sn").invariants if i.kind == "eutectic")
    assert found.lowest == pytest.approx(eutectic.temperature_c, abs=1e-6)
    assert found.lowest_at["Sn"] == pytest.approx(eutectic.compositions_wt["L"], abs=1e-5)


def test_place_meets_the_limits_of_both_elements() -> None:
    where = place(catalog(), alloy_from_designation("Sn63Pb37"))
    assert (where.low_wt, where.high_wt) == (62.5, 63.5)
    where = place(catalog(), alloy_from_wt({"Sn": 60, "Pb": 40}, {"Sn": 2, "Pb": 0.5}))
    assert (where.low_wt, where.high_wt) == (59.5, 60.5)
    where = place(catalog(), alloy_from_wt({"Sn": 100}))
    assert where.second_wt in (0.0, 100.0)
    with pytest.raises(NotCovered):
        place(catalog(), alloy_from_wt({"Sn": 50, "Ag": 25, "Cu": 25}))


def test_limits_of_a_third_element_alone_leave_the_alloy_as_it_is() -> None:
    brass = replace(alloy_from_wt({"Cu": 60, "Zn": 40}), limits_wt={"Sn": (0.25, 1.0)})
    where = place(catalog(), brass)
    assert (where.second_wt, where.low_wt, where.high_wt) == (40.0, 40.0, 40.0)
    with_zinc = replace(brass, limits_wt={"Sn": (0.25, 1.0), "Zn": (39.0, 42.0)})
    assert place(catalog(), with_zinc).low_wt == 39.0


def test_impossible_questions_are_refused() -> None:
    diagram = catalog().get("pb-sn")
    curve = melting_curve(diagram, 63.0)
    for fraction in (-0.1, 1.1, float("nan")):
        with pytest.raises(InvalidInput):
            curve.stays_above(fraction)
        with pytest.raises(InvalidInput):
            curve.first_exceeds(fraction)
    with pytest.raises(OutsideData):
        curve.first_exceeds(1.0)
    with pytest.raises(OutsideData):
        curve.liquid_fraction(1e4)
    with pytest.raises(OutsideData):
        curve.liquid_fractions(np.array([100.0, 1e4]))
    with pytest.raises(OutsideData):
        melting_curve(diagram, 101.0)
    with pytest.raises(OutsideData, match="data"):
        tolerant("cu-sn", 61.0, 59.0, 62.0).needed(1.0)
    with pytest.raises(InvalidComposition):
        alloy_from_wt({"Sn": 50, "Pb": 40})
