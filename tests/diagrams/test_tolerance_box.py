"""Search over a tolerance: corners by hand, extremes against binaries and plain functions."""

import math

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from diagrams.alloys import alloy_from_designation, alloy_from_wt
from diagrams.errors import InvalidComposition, InvalidInput, OutsideData
from diagrams.files.catalog import catalog
from diagrams.questions.melting import melting_curve
from diagrams.questions.tolerance_box import Box, box_of, span_over
from tests.diagrams.tolerant import tolerant


def as_rows(box: Box, elements: str) -> list[tuple[float, ...]]:
    return sorted(
        tuple(round(c.get(el, 0.0), 6) for el in elements.split()) for c in map(box.composition, box.corners)
    )


def test_corners_of_two_tolerances_and_a_balance() -> None:
    box = box_of(alloy_from_wt({"Sn": 96.5, "Ag": 3, "Cu": 0.5}, {"Ag": 0.2, "Cu": 0.1}))
    assert as_rows(box, "Ag Cu Sn") == [
        (2.8, 0.4, 96.8),
        (2.8, 0.6, 96.6),
        (3.2, 0.4, 96.4),
        (3.2, 0.6, 96.2),
    ]


def test_corners_where_every_element_is_limited() -> None:
    box = box_of(alloy_from_wt({"Ag": 40, "Cu": 30, "Zn": 30}, {"Ag": 1, "Cu": 1, "Zn": 1}))
    assert as_rows(box, "Ag Cu Zn") == [
        (39, 30, 31), (39, 31, 30), (40, 29, 31), (40, 31, 29), (41, 29, 30), (41, 30, 29),
    ]  # fmt: skip


def test_elements_without_limits_share_the_rest() -> None:
    box = box_of(alloy_from_wt({"Ag": 10, "Cu": 30, "Zn": 60}, {"Ag": 1}))
    assert as_rows(box, "Ag Cu Zn") == [
        (9, pytest.approx(91 / 3), pytest.approx(182 / 3)),
        (11, pytest.approx(89 / 3), pytest.approx(178 / 3)),
    ]


def test_a_limit_may_reach_zero() -> None:
    box = box_of(alloy_from_wt({"Sn": 99.9, "Ag": 0.1}, {"Ag": 0.3}))
    assert {"Sn": 100.0} in [box.composition(corner) for corner in box.corners]


def test_without_tolerance_there_is_one_composition() -> None:
    alloy = alloy_from_wt({"Sn": 60, "Pb": 40}, {"Sn": 0})
    assert [box_of(alloy).composition(corner) for corner in box_of(alloy).corners] == [alloy.composition_wt]
    span = span_over(box_of(alloy), lambda c: c["Sn"])
    assert (span.nominal, span.lowest, span.highest, span.tried) == (60, 60, 60, 1)


def test_limits_that_miss_the_nominal_are_refused() -> None:
    lithium = alloy_from_designation("BAg-8a")
    with pytest.raises(InvalidComposition):
        box_of(lithium)


def test_too_many_corners_are_refused_beforehand() -> None:
    elements = ["Ag", "Bi", "Cu", "In", "Pb", "Sb", "Sn", "Zn"]
    alloy = alloy_from_wt(dict.fromkeys(elements, 12.5), dict.fromkeys(elements, 1.0))
    with pytest.raises(InvalidInput) as refused:
        box_of(alloy)
    assert refused.value.field == "tolerance_wt"


@given(
    weights=st.lists(st.floats(-3, 3), min_size=4, max_size=4),
    tolerances=st.lists(st.floats(0.1, 3), min_size=3, max_size=3),
)
def test_a_plane_has_its_extremes_at_corners(weights: list[float], tolerances: list[float]) -> None:
    elements = ("Ag", "Cu", "Pb", "Sn")
    alloy = alloy_from_wt(
        {"Ag": 10, "Cu": 20, "Pb": 30, "Sn": 40}, dict(zip(elements[:3], tolerances, strict=True))
    )
    slope = dict(zip(elements, weights, strict=True))
    span = span_over(box_of(alloy), lambda c: math.fsum(slope[el] * wt for el, wt in c.items()))
    reach = math.fsum(
        t * abs(slope[el] - slope["Sn"]) for el, t in zip(elements[:3], tolerances, strict=True)
    )
    assert span.highest == pytest.approx(span.nominal + reach, abs=1e-6)
    assert span.lowest == pytest.approx(span.nominal - reach, abs=1e-6)


@given(silver=st.floats(2.85, 3.15), copper=st.floats(0.42, 0.58))
def test_a_dip_inside_is_found(silver: float, copper: float) -> None:
    """A valley as of a eutectic, 40 and 100 °C a percent steep, anywhere inside."""
    box = box_of(alloy_from_wt({"Sn": 96.5, "Ag": 3, "Cu": 0.5}, {"Ag": 0.2, "Cu": 0.1}))
    span = span_over(box, lambda c: 217 + 40 * abs(c["Ag"] - silver) + 100 * abs(c["Cu"] - copper))
    assert span.lowest is not None
    assert span.lowest - 217 < 1.0
    assert span.tried <= 14 + 2 * 61


@pytest.mark.parametrize(
    ("diagram_id", "wt", "tolerance"),
    [
        ("pb-sn", 63.0, 0.5),
        ("pb-sn", 62.0, 1.0),
        ("ag-cu", 28.0, 1.0),
        ("bi-sn", 42.0, 1.0),
        ("pb-sn", 18, 2),
    ],
)
def test_extremes_of_binaries_are_the_exact_ones(diagram_id: str, wt: float, tolerance: float) -> None:
    diagram = catalog().get(diagram_id)
    first, second = diagram.elements
    box = box_of(alloy_from_wt({first: 100 - wt, second: wt}, {second: tolerance}))
    exact = tolerant(diagram_id, wt, wt - tolerance, wt + tolerance)
    for known, name in ((exact.kept(0.0), "solidus_c"), (exact.needed(1.0), "liquidus_c")):
        span = span_over(box, lambda c, name=name: getattr(melting_curve(diagram, c.get(second, 0.0)), name))
        assert span.lowest is not None
        assert span.highest is not None
        assert span.nominal == known.nominal
        assert known.lowest - 1e-9 <= span.lowest <= known.lowest + 0.15
        assert known.highest - 0.15 <= span.highest <= known.highest + 1e-9


def test_data_that_end_within_the_tolerance_are_told() -> None:
    def question(composition: object) -> float:
        raise OutsideData("No.", remedy="Ask less.")

    box = box_of(alloy_from_wt({"Sn": 60, "Pb": 40}, {"Sn": 1}))
    with pytest.raises(OutsideData):
        span_over(box, question)
    with pytest.raises(OutsideData) as refused:
        span_over(box, lambda c: 1.0 if c == box.composition(box.nominal) else question(c))
    assert refused.value.field == "tolerance_wt"
    assert "Within the tolerance" in str(refused.value)


def test_every_composition_tried_is_allowed() -> None:
    box = box_of(alloy_from_wt({"Ag": 40, "Cu": 30, "Zn": 30}, {"Ag": 1, "Cu": 1, "Zn": 1}))
    seen = []
    rng = np.random.default_rng(3)
    span_over(box, lambda c: seen.append(c) or float(rng.normal()))
    for composition in seen:
        assert math.fsum(composition.values()) == pytest.approx(100, abs=1e-9)
        for el, nominal in (("Ag", 40), ("Cu", 30), ("Zn", 30)):
            assert abs(composition[el] - nominal) <= 1 + 1e-6
    assert len(seen) > 10
