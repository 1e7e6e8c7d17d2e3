"""Bounds as sums of named parts, windows without width, and limits that the tables know."""

import pytest
from hypothesis import given
from hypothesis import strategies as st

from diagrams.errors import InvalidInput
from diagrams.files.catalog import catalog
from diagrams.reference import reference_table
from service.process.budget import Budget
from service.process.placed import placed
from service.process.sensors import Stated
from service.process.upper_limits import upper_limit, upper_limits
from service.process.window import Demands, find_window
from service.process.window_terms import EarlierJoint, UpperLimit
from service.schemas.alloy import AlloyAsked

degrees = st.floats(0.0, 60.0)


def eutectic_alloy(diagram_id="pb-sn"):
    """The alloy of a eutectic and its temperature."""
    diagram = catalog().get(diagram_id)
    point = next(i for i in diagram.invariants if i.kind == "eutectic")
    first, second = diagram.elements
    wt = point.compositions_wt["L"]
    return AlloyAsked(composition_wt={first: 100 - wt, second: wt}), point.temperature_c


def earlier(alloy, fraction=0.0, margin_c=0.0):
    return EarlierJoint("first", placed(alloy), fraction, margin_c)


def window(alloy, *, limits=(), joints=(), target=1.0, sensor_tolerance_c=0.0, **more):
    more.setdefault("budget", Budget(Stated(sensor_tolerance_c)))
    named = tuple(limit if isinstance(limit, UpperLimit) else UpperLimit("part", limit) for limit in limits)
    demands = Demands(target_liquid_fraction=target, upper_limits=named, earlier_joints=tuple(joints), **more)
    return find_window(placed(alloy), demands)


@pytest.mark.parametrize("target", [1.0, 0.5])
@pytest.mark.parametrize("fraction", [0.0, 0.3])
def test_a_eutectic_cannot_hold_where_the_same_eutectic_has_to_melt(target, fraction):
    alloy, temperature_c = eutectic_alloy()
    found = window(alloy, joints=[earlier(alloy, fraction)], target=target)
    assert found.minimum_peak_c == found.maximum_peak_c == pytest.approx(temperature_c, abs=1e-4)
    assert found.width_c == 0
    assert not found.feasible
    assert found.setpoint_c is None
    assert (found.collision.lower, found.collision.upper) == ("target liquid fraction", "first")
    assert found.collision.by_c == 0
    assert "melts at once" in found.collision.text
    assert "overlap by 0 °C" in found.collision.text


def test_a_sensor_tolerance_does_not_part_them_and_a_margin_does():
    """Another filler, a limit of the reading right at the eutectic: only what keeps a true distance helps."""
    alloy, temperature_c = eutectic_alloy()
    filler = AlloyAsked(designation="Bi58Sn42")
    for sensor_c, margin_c, feasible in ((0.0, 0.0, False), (2.0, 0.0, False), (0.0, 3.0, True)):
        bare = window(filler, joints=[earlier(alloy, 0.0, margin_c)], sensor_tolerance_c=sensor_c)
        assert bare.feasible
        assert bare.width_c > 1
        closed = window(
            filler,
            joints=[earlier(alloy, 0.0, margin_c)],
            sensor_tolerance_c=sensor_c,
            spread_c=bare.width_c,
        )
        assert closed.width_c == 0
        assert closed.feasible is feasible, (sensor_c, margin_c)
    assert temperature_c == pytest.approx(183, abs=1)


def test_no_width_is_enough_for_a_plain_limit_and_for_a_joint_that_melts_gradually():
    tin_lead = AlloyAsked(composition_wt={"Sn": 30, "Pb": 70})
    needed = window(tin_lead, superheat_c=13.3, sensor_tolerance_c=2.1).minimum_peak_c
    found = window(tin_lead, limits=[needed + 2.1], superheat_c=13.3, sensor_tolerance_c=2.1)
    assert (found.feasible, found.width_c, found.collision) == (True, 0, None)
    assert found.setpoint_c == pytest.approx(needed, abs=1e-9)
    half = window(tin_lead, joints=[earlier(tin_lead, 0.6)], target=0.6)
    assert (half.feasible, half.width_c) == (True, 0)
    eutectic, _ = eutectic_alloy()
    plain = window(eutectic, limits=[window(eutectic).minimum_peak_c])
    assert (plain.feasible, plain.width_c) == (True, 0)


def test_of_two_equal_bounds_the_one_that_excludes_itself_decides():
    alloy, _ = eutectic_alloy()
    bound = window(alloy).minimum_peak_c
    found = window(alloy, limits=[bound], joints=[earlier(alloy)])
    assert not found.feasible
    assert found.binding_upper == found.collision.upper == "first"


@given(superheat_c=degrees, sensor_c=degrees, margin_c=degrees, spread_c=degrees)
def test_parts_add_up_to_the_last_digit(superheat_c, sensor_c, margin_c, spread_c):
    found = window(
        AlloyAsked(designation="BAg-8"),
        limits=[UpperLimit("part", 900.0, margin_c)],
        joints=[earlier(AlloyAsked(designation="CuP 182"), 0.0, margin_c)],
        superheat_c=superheat_c,
        sensor_tolerance_c=sensor_c,
        spread_c=spread_c,
    )
    for term in (*found.lower_terms, *found.upper_terms):
        total = 0.0
        for part in term.parts:
            total += part.value_c
            assert part.reason
        assert total == term.value_c
    lower = {part.name: part.value_c for part in found.lower_terms[0].parts}
    assert list(lower) == ["liquidus", "superheat", "alloy tolerance", "data", "sensor tolerance"]
    assert (lower["superheat"], lower["sensor tolerance"]) == (superheat_c, sensor_c)
    alloy_and_data = ["alloy tolerance", "data"]
    for term, start, more in zip(
        found.upper_terms[:1] + found.upper_terms[2:],
        ("limit", "solidus"),
        ([], alloy_and_data),
        strict=True,
    ):
        upper = {part.name: part.value_c for part in term.parts}
        assert list(upper) == [start, "margin", *more, "sensor tolerance"]
        assert (upper["margin"], upper["sensor tolerance"]) == (-margin_c, -sensor_c)
    width = {part.name: part.value_c for part in found.width_parts}
    assert width == {
        "maximum peak": found.maximum_peak_c,
        "minimum peak": -found.minimum_peak_c,
        "spread": -spread_c,
    }
    assert found.width_c == pytest.approx(sum(width.values()), abs=1e-9)


def test_every_base_metal_and_classification_of_the_table_is_a_known_limit():
    rows = reference_table("process_limits.csv")
    metals = {float(r["min"]) for r in rows if r["topic"] == "Base metal solidus / liquidus"}
    limits = upper_limits().values()
    assert {limit.limit_c for limit in limits if limit.kind == "base metal"} == metals
    classes = [r for r in rows if r["topic"] == "J-STD-020 classification temperature Tc"]
    assert len([limit for limit in limits if limit.kind == "component"]) == len(classes) == 17
    assert upper_limits()["al-6061"].limit_c == 582
    assert upper_limit("Brass C26000 70 30", "x").limit_c == 915
    assert (
        upper_limit("J-STD-020 Pb-free process thickness 1.6-2.5 mm volume over 2000 mm3", "x").limit_c == 245
    )


def test_a_key_that_is_none_is_refused_with_its_neighbours():
    with pytest.raises(InvalidInput) as refused:
        upper_limit("al-6016", "upper_limits.0.known")
    assert refused.value.field == "upper_limits.0.known"
    assert "al-6061" in refused.value.remedy
    with pytest.raises(InvalidInput) as refused:
        upper_limit("C36000", "known")
    assert "Near: brass-c36000-free-cutting" in refused.value.remedy
    with pytest.raises(InvalidInput) as refused:
        upper_limit("- -", "known")
    assert "Near" not in refused.value.remedy


def test_a_base_metal_bounds_the_window_and_says_that_it_begins_to_melt():
    brass = UpperLimit("body", 885.0, 0.0, upper_limit("brass-c36000-free-cutting", "x"))
    found = window(AlloyAsked(composition_wt={"Ag": 72, "Cu": 28}), limits=[brass])
    (term,) = found.upper_terms
    for told in ("body", "begins to melt at 885 °C", "ASM", "from memory", "process limits"):
        assert told in term.reason
    codes = [w.code for w in found.warnings]
    assert "base-metal-solidus" in codes
    assert any("“body” stands in the table from memory" in w.text for w in found.warnings)
    distant = window(
        AlloyAsked(composition_wt={"Ag": 72, "Cu": 28}), limits=[UpperLimit("body", 885.0, 25.0, brass.known)]
    )
    assert distant.maximum_peak_c == 860
    assert "base-metal-solidus" not in [w.code for w in distant.warnings]


def test_reasons_say_plus_or_minus_once():
    found = window(
        AlloyAsked(designation="Sn63Pb37"),
        limits=[UpperLimit("board", 260.0, 5.0), UpperLimit("part", 250.0)],
        superheat_c=15,
        sensor_tolerance_c=2,
    )
    assert found.lower_terms[0].reason.endswith(
        f". 183.97 °C plus superheat 15 °C, alloy tolerance 0.4856 °C and sensor tolerance 2 °C: "
        f"{found.minimum_peak_c:.2f} °C."
    )
    assert found.upper_terms[0].reason == (
        "board may reach 260 °C. 260.00 °C minus margin 5 °C and sensor tolerance 2 °C: 253.00 °C."
    )
    assert found.upper_terms[1].reason == (
        "part may reach 250 °C. 250.00 °C minus sensor tolerance 2 °C: 248.00 °C."
    )
    assert window(AlloyAsked(designation="Sn63Pb37"), limits=[250.0]).upper_terms[0].reason == (
        "part may reach 250 °C."
    )


def test_a_flux_says_where_its_range_begins():
    flux = upper_limit("flux FH10", "x")
    assert flux.limit_c == 800
    assert "begins at 550 °C" in flux.told


def test_the_distance_advised_below_aluminium_stands_in_the_warning():
    sheet = UpperLimit("sheet", 643.0, 0.0, upper_limit("al-3003", "x"))
    found = window(AlloyAsked(composition_wt={"Al": 88, "Si": 12}), limits=[sheet])
    (text,) = (w.text for w in found.warnings if w.code == "base-metal-solidus")
    assert "40 °C are advised" in text
