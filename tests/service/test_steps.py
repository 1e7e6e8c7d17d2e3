"""Step plans over HTTP: orders of the trade, windows that agree with the window call, collisions."""

from itertools import pairwise, permutations

import pytest

from service.routes.steps import EXAMPLES


def plan(ask, joints, **more):
    answer = ask("POST", "/v1/step-plans", json={"joints": joints} | more)
    assert answer.status_code == 200, answer.text
    return answer.json()


def joint(name, alloy, **more):
    named = alloy if isinstance(alloy, dict) else {"designation": alloy}
    return {"name": name, "alloy": named, "superheat_c": 10} | more


GOLD_TIN = {"composition_wt": {"Au": 80, "Sn": 20}}
# common practice: gold-tin first, then tin-antimony or tin-silver, then tin-lead, then bismuth-tin
CHAIN = [("a", GOLD_TIN), ("b", "Sn95Sb5"), ("c", "Sn63Pb37"), ("d", "Bi58Sn42")]


@pytest.mark.parametrize("shuffle", list(permutations(range(4)))[::5])
def test_the_chain_of_the_trade(ask, shuffle):
    found = plan(ask, [joint(*CHAIN[k]) for k in shuffle])
    assert found["feasible"] is True
    assert found["order"] == ["a", "b", "c", "d"]
    assert [len(step["earlier_joints"]) for step in found["steps"]] == [0, 1, 2, 3]
    for step in found["steps"]:
        for seen in step["earlier_joints"]:
            # null where the maximum lies below what the data of gold-tin reach down to
            liquid = seen["liquid_mass_fraction"]
            assert liquid is None or liquid["nominal"] in (0.0, None)


def test_windows_are_those_of_the_window_call_and_pass_the_profile_check(ask):
    found = plan(ask, [joint(*each) for each in CHAIN], sensor_tolerance_c=2, spread_c=4)
    asked = dict(CHAIN)
    for k, step in enumerate(found["steps"]):
        earlier = [{"name": name, "alloy": joint(name, asked[name])["alloy"]} for name in found["order"][:k]]
        question = {
            "alloy": joint("x", asked[step["name"]])["alloy"],
            "target_liquid_fraction": 1,
            "superheat_c": 10,
            "sensor_tolerance_c": 2,
            "spread_c": 4,
            "earlier_joints": earlier,
        }
        window = ask("POST", "/v1/window", json=question).json()
        for key in ("minimum_peak_c", "maximum_peak_c", "width_c", "setpoint_c", "binding_upper"):
            assert step[key] == window[key]
        if step["maximum_peak_c"] is None:
            continue
        for peak in (step["minimum_peak_c"], step["maximum_peak_c"]):
            run = question | {
                "time_s": [0, 100, 200],
                "sensors": [{"name": "s", "temperature_c": [25, peak, 25]}],
            }
            judged = ask("POST", "/v1/profile-checks", json=run).json()
            assert judged["verdict"] == "pass"
            assert judged["tightest"]["margin"] == 0


def test_two_of_one_eutectic_collide_and_the_shelf_helps(ask):
    found = plan(
        ask,
        [joint("strap", "Sn63Pb37"), joint("pins", "Sn63Pb37")],
        stocked_fillers=["Sn96.5Ag3.5", "Sn60Pb40", "Bi58Sn42"],
    )
    assert found["feasible"] is False
    assert (found["order"], found["steps"]) == ([], [])
    assert {found["collision"]["one"], found["collision"]["other"]} == {"strap", "pins"}
    assert found["collision"]["by_c"] > 10.0
    helps = {(a["filler"], tuple(a["order"])) for a in found["alternatives"]}
    assert ("Sn96.5Ag3.5", ("strap", "pins")) in helps
    assert ("Bi58Sn42", ("strap", "pins")) in helps
    assert not any(filler == "Sn60Pb40" for filler, _ in helps)
    widths = [a["narrowest_width_c"] for a in found["alternatives"]]
    assert all(a >= b for a, b in pairwise(widths))


def test_without_superheat_one_eutectic_twice_still_collides(ask):
    """Both need and bear the same temperature, but at it the first joint melts at once."""
    pure = {"composition_wt": {"Sn": 61.9, "Pb": 38.1}, "tolerance_wt": {}}
    found = plan(ask, [joint("one", pure, superheat_c=0), joint("two", pure, superheat_c=0)])
    assert found["feasible"] is False


def test_a_joint_that_may_melt_again_bounds_nothing(ask):
    twice = [joint("one", "Sn63Pb37", max_liquid_fraction_later=1), joint("two", "Sn63Pb37")]
    assert plan(ask, twice)["order"] == ["one", "two"]


def test_own_limits_that_leave_no_window_are_named(ask):
    hot = joint("hot", "Sn63Pb37", upper_limits=[{"name": "foil", "limit_c": 150}])
    found = plan(ask, [hot])
    assert found["feasible"] is False
    assert (found["collision"]["one"], found["collision"]["other"]) == ("hot", None)
    assert "foil" in found["collision"]["text"]


@pytest.mark.parametrize("name", EXAMPLES)
def test_examples(ask, name):
    found = plan(ask, EXAMPLES[name]["value"].pop("joints", None) or [], **EXAMPLES[name]["value"])
    assert found["safety"]["notes"]


@pytest.mark.parametrize(
    ("change", "field"),
    [
        ({"joints": []}, "joints"),
        ({"joints": [joint("a", "Sn63Pb37"), joint(" A ", "Sn63Pb37")]}, "joints.1.name"),
        ({"joints": [joint("a", "Unobtainium")]}, "joints.0.alloy.designation"),
        ({"joints": [joint("a", "Sn63Pb37")], "stocked_fillers": ["x"]}, None),
        (
            {"joints": [joint("a", "Sn63Pb37"), joint("b", "Sn63Pb37")], "stocked_fillers": ["x"]},
            "stocked_fillers.0.designation",
        ),
        (
            {"joints": [joint("a", "Sn63Pb37", upper_limits=[{"name": "a", "limit_c": 250}])]},
            "joints.0.upper_limits.0.name",
        ),
        (
            {"joints": [joint("a", "Sn63Pb37", upper_limits=[{"name": "p"}])]},
            "joints.0.upper_limits.0.limit_c",
        ),
    ],
)
def test_what_is_wrong_is_named(ask, change, field):
    answer = ask("POST", "/v1/step-plans", json=change)
    if field is None:
        assert answer.status_code == 200
        return
    assert answer.status_code == 422, answer.text
    assert field in [error["field"] for error in answer.json()["errors"]]
