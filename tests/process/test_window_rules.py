"""The laws of the window, held against a second reckoning from melting curves alone."""

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from diagrams.errors import InvalidInput
from diagrams.files.catalog import catalog
from diagrams.questions.melting import melting_curve
from service.process.budget import Budget
from service.process.placed import placed
from service.process.sensors import Stated
from service.process.window import Demands, find_window
from service.process.window_terms import EarlierJoint, UpperLimit
from service.schemas.alloy import AlloyAsked

TIN_LEAD = AlloyAsked(designation="Sn63Pb37")
TIN_SILVER = AlloyAsked(designation="Sn96.5Ag3.5")
SOFT = AlloyAsked(composition_wt={"Pb": 75, "Sn": 25}, tolerance_wt={"Sn": 1.5})
BISMUTH = AlloyAsked(designation="Bi58Sn42")

fractions = st.floats(0.01, 1.0)
degrees = st.floats(0.0, 40.0)
limits = st.lists(st.floats(100.0, 400.0), max_size=4)


def window(alloy=TIN_LEAD, *, limits=(), joints=(), target=1.0, sensor_tolerance_c=0.0, **more):
    more.setdefault("budget", Budget(Stated(sensor_tolerance_c)))
    return find_window(
        placed(alloy),
        Demands(
            target_liquid_fraction=target,
            upper_limits=tuple(UpperLimit(f"part {k}", limit) for k, limit in enumerate(limits)),
            earlier_joints=tuple(joints),
            **more,
        ),
    )


def joint(alloy, *, name="lug", fraction=0.0, margin_c=0.0):
    return EarlierJoint(name, placed(alloy), fraction, margin_c)


def alloys_within(diagram, low_wt, high_wt):
    """Curves of 61 alloys across a tolerance, both ends among them."""
    return [melting_curve(catalog().get(diagram), wt) for wt in np.linspace(low_wt, high_wt, 61)]


@pytest.mark.parametrize("target", [0.2, 0.5, 0.8, 1.0])
def test_the_minimum_serves_every_alloy_in_tolerance(target):
    found = window(SOFT, target=target, superheat_c=12, sensor_tolerance_c=3)
    curves = alloys_within("pb-sn", 23.5, 26.5)
    reached = [curve.liquid_fraction(found.minimum_peak_c - 15 + 1e-9) for curve in curves]
    assert min(reached) >= target - 1e-9
    short = [curve.liquid_fraction(found.minimum_peak_c - 15 - 0.01) for curve in curves]
    assert min(short) < target  # nothing lower would do


@pytest.mark.parametrize("fraction", [0.0, 0.15, 0.4, 0.9])
def test_the_maximum_spares_every_earlier_alloy_in_tolerance(fraction):
    found = window(BISMUTH, joints=[joint(SOFT, fraction=fraction, margin_c=4)], sensor_tolerance_c=2.5)
    curves = alloys_within("pb-sn", 23.5, 26.5)
    reached = [curve.liquid_fraction(found.maximum_peak_c + 6.5 - 1e-9) for curve in curves]
    assert max(reached) <= fraction + 1e-9
    beyond = [curve.liquid_fraction(found.maximum_peak_c + 6.5 + 0.01) for curve in curves]
    assert max(beyond) > fraction  # nothing higher would do


@given(limits=limits, more=st.floats(100.0, 400.0), spread_c=degrees, target=fractions)
def test_one_more_upper_limit_never_widens(limits, more, spread_c, target):
    before = window(limits=limits, spread_c=spread_c, target=target)
    after = window(limits=[*limits, more], spread_c=spread_c, target=target)
    assert after.minimum_peak_c == before.minimum_peak_c
    assert before.maximum_peak_c is None or after.maximum_peak_c <= before.maximum_peak_c
    assert before.width_c is None or after.width_c <= before.width_c
    assert before.feasible or not after.feasible


@given(a=degrees, b=degrees, field=st.sampled_from(["superheat_c", "sensor_tolerance_c", "spread_c"]))
def test_asking_for_more_never_widens(a, b, field):
    less, more = sorted((a, b))
    joints = [joint(TIN_SILVER)]
    assert (
        window(joints=joints, limits=[240], **{field: more}).width_c
        <= window(joints=joints, limits=[240], **{field: less}).width_c
    )


@given(a=fractions, b=fractions)
def test_a_higher_target_never_lowers_the_minimum(a, b):
    low, high = sorted((a, b))
    assert window(SOFT, target=low).minimum_peak_c <= window(SOFT, target=high).minimum_peak_c


@given(a=st.floats(0, 0.99), b=st.floats(0, 0.99))
def test_a_joint_that_may_melt_more_never_lowers_the_maximum(a, b):
    low, high = sorted((a, b))
    first, second = (window(BISMUTH, joints=[joint(SOFT, fraction=f)]).maximum_peak_c for f in (low, high))
    assert first <= second


@given(limits=limits.filter(bool), superheat_c=degrees, sensor_c=degrees, spread_c=degrees)
def test_the_numbers_hang_together(limits, superheat_c, sensor_c, spread_c):
    joints = [joint(TIN_SILVER, margin_c=5)]
    found = window(
        limits=limits, joints=joints, superheat_c=superheat_c, sensor_tolerance_c=sensor_c, spread_c=spread_c
    )
    lower, upper = found.lower_terms, found.upper_terms
    assert len(upper) == len(limits) + 1
    assert found.minimum_peak_c == max(t.value_c for t in lower)
    assert found.maximum_peak_c == min(t.value_c for t in upper)
    assert found.minimum_peak_c in {t.value_c for t in lower if t.name == found.binding_lower}
    assert found.maximum_peak_c in {t.value_c for t in upper if t.name == found.binding_upper}
    assert found.width_c == pytest.approx(found.maximum_peak_c - found.minimum_peak_c - spread_c, abs=1e-9)
    assert found.feasible is (found.width_c >= 0)
    if found.feasible:
        coldest, hottest = found.setpoint_c - spread_c / 2, found.setpoint_c + spread_c / 2
        assert coldest - found.minimum_peak_c == pytest.approx(found.width_c / 2, abs=1e-9)
        assert found.maximum_peak_c - hottest == pytest.approx(found.width_c / 2, abs=1e-9)
        assert found.collision is None
    else:
        assert found.setpoint_c is None
        assert found.collision.by_c == pytest.approx(-found.width_c, abs=1e-9)


def test_a_collision_names_the_pair_and_the_degrees():
    found = window(
        limits=[230, 210],
        joints=[joint(BISMUTH, name="foil", margin_c=5)],
        superheat_c=10,
        sensor_tolerance_c=1,
        spread_c=8,
    )
    tin_lead = max(c.stays_above(1.0) for c in alloys_within("pb-sn", 62.5, 63.5))
    bismuth = min(c.first_exceeds(0.0) for c in alloys_within("bi-sn", 41, 43))
    missing = (tin_lead + 10 + 1) + 8 - (bismuth - 5 - 1)
    assert (found.collision.lower, found.collision.upper) == ("target liquid fraction", "foil")
    assert found.collision.by_c == pytest.approx(missing, abs=1e-6)
    assert not found.feasible
    assert f"{missing:.2f}" in found.collision.text


def test_the_spread_alone_can_close_a_window():
    open_ = window(limits=[200], spread_c=0)
    ajar = window(limits=[200], spread_c=open_.width_c - 0.5)
    shut = window(limits=[200], spread_c=open_.width_c + 0.5)
    assert open_.feasible
    assert ajar.feasible
    assert ajar.width_c == pytest.approx(0.5, abs=1e-9)
    assert not shut.feasible
    assert shut.collision.by_c == pytest.approx(0.5, abs=1e-9)
    assert "hottest joint lies" in shut.collision.text


def test_without_an_upper_term_the_window_is_open_above():
    found = window()
    assert found.feasible
    assert found.maximum_peak_c is found.width_c is found.setpoint_c is found.binding_upper is None
    assert [w.code for w in found.warnings] == ["no-upper-limit"]


def test_an_earlier_joint_that_may_melt_altogether_sets_no_limit():
    found = window(limits=[245], joints=[joint(BISMUTH, fraction=1.0)])
    assert [t.name for t in found.upper_terms] == ["part 0"]
    assert found.earlier_joints[0].nominal == found.earlier_joints[0].worst == 1


def test_the_earlier_joint_is_told_what_it_goes_through():
    found = window(BISMUTH, joints=[joint(SOFT, fraction=0.6)], sensor_tolerance_c=3)
    (seen,) = found.earlier_joints
    curves = alloys_within("pb-sn", 23.5, 26.5)
    assert seen.worst == pytest.approx(0.6, abs=1e-9)
    assert seen.worst == pytest.approx(
        max(c.liquid_fraction(found.maximum_peak_c + 3) for c in curves), abs=1e-9
    )
    nominal = melting_curve(catalog().get("pb-sn"), 25.0)
    assert seen.nominal == pytest.approx(nominal.liquid_fraction(found.maximum_peak_c), abs=1e-9)
    assert seen.starts_to_melt.lowest == pytest.approx(min(c.solidus_c for c in curves), abs=1e-6)


def test_right_on_the_eutectic_the_joint_is_still_solid_and_a_warning_tells():
    found = window(BISMUTH, joints=[joint(TIN_LEAD)])
    (seen,) = found.earlier_joints
    assert (seen.nominal, seen.worst) == (0, 0)
    assert "melts-at-once" in [w.code for w in found.warnings]
    read_low = window(BISMUTH, joints=[joint(TIN_LEAD)], sensor_tolerance_c=2)
    assert "melts-at-once" in [w.code for w in read_low.warnings]  # a wrong reading keeps no distance
    distant = window(BISMUTH, joints=[joint(TIN_LEAD, margin_c=1)])
    assert "melts-at-once" not in [w.code for w in distant.warnings]
    # a tolerance taken off and put back on must not tip the joint over its eutectic
    (eutectic,) = {t.value_c for t in found.upper_terms}
    tried = np.random.default_rng(1).uniform(0.1, 5, 20_000).tolist()
    tipping = [s for s in tried if (eutectic - s) + s > eutectic][:5]
    assert tipping
    for sensor_c in tipping:
        (seen,) = window(BISMUTH, joints=[joint(TIN_LEAD)], sensor_tolerance_c=sensor_c).earlier_joints
        assert seen.worst == 0


def test_the_brazing_range_of_the_standard_counts_for_its_designation_alone():
    by_name = window(AlloyAsked(designation="BAg-8"), sensor_tolerance_c=5)
    low_c, high_c = placed(AlloyAsked(designation="BAg-8")).alloy.filler.brazing_range_c
    terms = {t.name: t.value_c for t in (*by_name.lower_terms, *by_name.upper_terms)}
    assert (terms["brazing range minimum"], terms["brazing range maximum"]) == (low_c + 5, high_c - 5)
    by_wt = window(AlloyAsked(composition_wt={"Ag": 72, "Cu": 28}), sensor_tolerance_c=5)
    assert [t.name for t in (*by_wt.lower_terms, *by_wt.upper_terms)] == ["target liquid fraction"]
    # molten does not mean flowing: copper is brazed well above its melting point
    assert window(AlloyAsked(designation="BCu-1")).binding_lower == "brazing range minimum"


def test_what_to_mind_is_told():
    partly = window(target=0.7, limits=[300])
    assert [w.code for w in partly.warnings] == ["partly-liquid"]
    low = window(limits=[150])
    assert [w.code for w in low.warnings] == ["limit-below-solidus"]
    assert "part 0" in low.warnings[0].text
    remembered = window(AlloyAsked(composition_wt={"Ag": 72, "Cu": 28}), limits=[900])
    how = {source.how for source in catalog().get("ag-cu").sources}
    assert ("from-memory" in [w.code for w in remembered.warnings]) is ("from memory" in how)


@pytest.mark.parametrize(
    ("limit_names", "joint_names", "field"),
    [
        (["a", "b", "A "], [], "upper_limits.2.name"),
        (["a"], ["a"], "earlier_joints.0.name"),
        ([], ["x", "y", "x"], "earlier_joints.2.name"),
        (["  "], [], "upper_limits.0.name"),
        (["Target liquid  fraction"], [], "upper_limits.0.name"),
        ([], ["brazing range maximum"], "earlier_joints.0.name"),
    ],
)
def test_a_name_stands_for_one_thing(limit_names, joint_names, field):
    demands = Demands(
        target_liquid_fraction=1.0,
        upper_limits=tuple(UpperLimit(name, 250.0) for name in limit_names),
        earlier_joints=tuple(joint(TIN_SILVER, name=name) for name in joint_names),
    )
    with pytest.raises(InvalidInput) as refused:
        find_window(placed(TIN_LEAD), demands)
    assert refused.value.field == field
