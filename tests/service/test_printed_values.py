"""Fillers outside all data: bounds from what their standard prints, no curve; traces left out on request."""

import pytest

from diagrams.fillers import find_filler


def post(ask, path, **question):
    answer = ask("POST", f"/v1/{path}", json=question)
    assert answer.status_code == 200, answer.text
    return answer.json()


def test_melting_gives_printed_temperatures_and_no_curve(ask):
    asked = [20, 970.9, 971, 985, 999, 1100]
    found = post(ask, "melting", alloy={"designation": "BNi-2"}, temperatures_c=asked)
    printed = find_filler("BNi-2")
    assert found["solidus_c"]["nominal"] == printed.solidus_c == 971
    assert found["liquidus_c"]["nominal"] == printed.liquidus_c == 999
    for span in (found["solidus_c"], found["liquidus_c"]):
        assert span["lowest"] is span["highest"] is span["lowest_at_wt"] is None
    assert [p["liquid_mass_fraction"] for p in found["at_temperatures"]] == [0, 0, None, None, 1, 1]
    between = [p["liquid_mass_fraction"] for p in found["curve"] if 971 < p["temperature_c"] < 999]
    assert between == [None]
    assert found["source"] == {
        "diagram": "fillers",
        "edition": found["standard"]["edition"],
        "method": "standard table",
    }
    assert found["standard"]["solidus_difference_c"] is None
    assert "nominal composition only" in found["tolerance"]
    got = ask("GET", "/v1/melting?alloy=b%20ni-2").json()
    assert got["solidus_c"] == found["solidus_c"]


def test_one_printed_temperature_melts_all_at_once(ask):
    found = post(ask, "melting", alloy={"designation": "BNi-6", "tolerance_wt": {"P": 1}})
    single = post(ask, "melting", alloy={"designation": "BNi-7"})
    assert found["source"]["method"] == "polygon"
    assert single["source"]["method"] == "standard table"
    assert [p["liquid_mass_fraction"] for p in single["curve"]] == [0, 1]
    assert len({p["temperature_c"] for p in single["curve"]}) == 1


@pytest.mark.parametrize("target", [0.2, 0.9, 1.0])
def test_a_window_rests_on_the_bounds(ask, target):
    found = post(
        ask,
        "window",
        alloy={"designation": "BNi-7"},
        target_liquid_fraction=target,
        superheat_c=20,
        sensor_tolerance_c=4,
        earlier_joints=[{"name": "First", "alloy": {"designation": "BNi-2"}, "margin_c": 10}],
    )
    term = next(t for t in found["lower_terms"] if t["name"] == "target liquid fraction")
    assert term["value_c"] == find_filler("BNi-7").liquidus_c + 20 + 4
    assert "for certain" in term["reason"]
    first = next(t for t in found["upper_terms"] if t["name"] == "First")
    assert first["value_c"] == 971 - 10 - 4
    assert "what its tolerance may change is not known" in first["reason"]
    codes = [w["code"] for w in found["warnings"]]
    assert codes.count("printed-values") == 2
    (seen,) = found["earlier_joints"]
    assert seen["source"]["method"] == "standard table"
    assert seen["liquid_mass_fraction"]["worst"] in (None, 0)
    if found["maximum_peak_c"] <= 971:
        assert seen["liquid_mass_fraction"]["nominal"] == 0


def test_an_earlier_joint_that_may_half_melt_is_held_below_its_solidus(ask):
    joint = {"name": "First", "alloy": {"designation": "BNi-2"}, "max_liquid_fraction": 0.5}
    found = post(
        ask,
        "window",
        alloy={"designation": "BAg-8"},
        target_liquid_fraction=1,
        earlier_joints=[joint],
    )
    assert next(t["value_c"] for t in found["upper_terms"] if t["name"] == "First") == 971


def test_no_picture_is_made_up(ask):
    answer = ask("GET", "/v1/melting/figure?alloy=BNi-2")
    assert (answer.status_code, answer.json()["code"]) == (422, "not-covered")
    assert answer.json()["errors"][0]["field"] == "alloy"


def test_a_trace_is_left_out_only_if_the_question_says_so(ask):
    alloy = {"composition_wt": {"Sn": 62.95, "Pb": 36.99, "Fe": 0.06}}
    refused = ask("POST", "/v1/melting", json={"alloy": alloy})
    assert (refused.status_code, refused.json()["code"]) == (422, "not-covered")
    too_low = ask("POST", "/v1/melting", json={"alloy": alloy | {"leave_out_traces_below_wt": 0.05}})
    assert too_low.status_code == 422
    found = post(ask, "melting", alloy=alloy | {"leave_out_traces_below_wt": 0.1})
    assert found["alloy"]["left_out_wt"] == {"Fe": 0.06}
    assert found["alloy"]["composition_wt"]["Sn"] == pytest.approx(62.95 / 0.9994, abs=1e-9)
    rest = {"Sn": 62.95 / 0.9994, "Pb": 36.99 / 0.9994}
    plain = post(ask, "melting", alloy={"composition_wt": rest})
    assert plain["alloy"]["left_out_wt"] == {}
    for name in ("solidus_c", "liquidus_c"):
        assert found[name]["nominal"] == pytest.approx(plain[name]["nominal"], abs=1e-9)
    got = ask("GET", "/v1/melting?alloy=Sn62.95Fe0.06Pb&leave_out_traces_below_wt=0.1").json()
    assert got["alloy"]["left_out_wt"] == {"Fe": 0.06}
    window = ask(
        "GET",
        "/v1/window?alloy=Sn62.95Fe0.06Pb&leave_out_traces_below_wt=0.1&target_liquid_fraction=1",
    ).json()
    assert window["alloy"] == got["alloy"]
    state = ask(
        "GET", "/v1/equilibrium?alloy=Sn62.95Fe0.06Pb&leave_out_traces_below_wt=0.1&temperature_c=200"
    ).json()
    assert state["alloy"] == got["alloy"]


def test_nothing_covered_is_left_out(ask):
    found = post(
        ask,
        "melting",
        alloy={"composition_wt": {"Sn": 99.5, "Ag": 0.5}, "leave_out_traces_below_wt": 1},
    )
    assert found["alloy"]["left_out_wt"] == {}
    assert found["alloy"]["composition_wt"] == {"Ag": 0.5, "Sn": 99.5}


def test_the_limits_of_the_rest_grow_with_it(ask):
    found = post(
        ask,
        "melting",
        alloy={
            "composition_wt": {"Sn": 62.5, "Pb": 37.1, "Fe": 0.4},
            "tolerance_wt": {"Sn": 0.5, "Fe": 0.1},
            "leave_out_traces_below_wt": 0.5,
        },
    )
    assert found["alloy"]["limits_wt"] == {
        "Sn": {
            "lowest": pytest.approx(62 / 0.996, abs=1e-9),
            "highest": pytest.approx(63 / 0.996, abs=1e-9),
        }
    }


@pytest.mark.parametrize("limit", [0, -1, 1.1, "0.1", True, 1e308])
def test_a_trace_is_a_small_share(ask, limit):
    alloy = {"designation": "SAC305", "leave_out_traces_below_wt": limit}
    answer = ask("POST", "/v1/melting", json={"alloy": alloy})
    assert answer.status_code == 422
    assert answer.json()["errors"][0]["field"] == "alloy.leave_out_traces_below_wt"
