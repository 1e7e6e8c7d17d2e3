"""Recorded runs over HTTP: verdicts against the window, tables against JSON, what is refused."""

import copy

import numpy as np
import pytest

from service.routes.profiles import EXAMPLES, TABLE_EXAMPLE

BARE = TABLE_EXAMPLE.partition("\n")[2]  # without the line that carries the question
HEATED = [24, 118, 161, 212, 213, 120, 55]
RUN = {
    "alloy": {"designation": "Sn63Pb37"},
    "superheat_c": 15,
    "upper_limits": [{"name": "capacitor", "limit_c": 235}],
    "time_s": [0, 50, 140, 175, 190, 240, 300],
    "sensors": [
        {"name": "a", "temperature_c": HEATED},
        {"name": "b", "temperature_c": [24, 112, 156, 206, 209, 124, 58]},
    ],
}


def check(ask, body):
    answer = ask("POST", "/v1/profile-checks", json=body)
    assert answer.status_code == 200, answer.text
    return answer.json()


def changed(**more):
    return copy.deepcopy(RUN) | more


def refused(ask, body, field):
    answer = ask("POST", "/v1/profile-checks", json=body)
    assert answer.status_code == 422, answer.text
    problem = answer.json()
    assert field in [error["field"] for error in problem["errors"]], problem["errors"]
    assert all(error["remedy"] for error in problem["errors"])
    assert problem["safety"]["notes"]
    return problem


@pytest.mark.parametrize("name", EXAMPLES)
def test_examples(ask, name):
    found = check(ask, EXAMPLES[name]["value"])
    assert found["verdict"] in ("pass", "fail")
    assert found["safety"]["notes"]


def test_window_is_that_of_the_window_call(ask):
    asked = {key: RUN[key] for key in ("alloy", "superheat_c", "upper_limits")}
    window = ask("POST", "/v1/window", json=asked | {"target_liquid_fraction": 1}).json()
    found = check(ask, RUN)
    for end in ("minimum_peak_c", "maximum_peak_c"):
        assert found["window"][end] == window[end]
    # runs whose peaks lie on the ends pass without margin, and fail a hair beyond
    for peak, verdict in (
        (window["minimum_peak_c"], "pass"),
        (window["maximum_peak_c"], "pass"),
        (window["minimum_peak_c"] - 1e-6, "fail"),
        (window["maximum_peak_c"] + 1e-6, "fail"),
    ):
        run = changed(sensors=[{"name": "a", "temperature_c": [24, 118, 161, peak, peak, 120, 55]}])
        judged = check(ask, run)
        assert judged["verdict"] == verdict, peak
        assert judged["tightest"]["margin"] == pytest.approx(0.0, abs=2e-6)


def test_earlier_joints_are_seen_and_bound(ask):
    foil = {"name": "foil", "alloy": {"designation": "Bi58Sn42"}, "max_liquid_fraction": 0.0}
    found = check(ask, changed(earlier_joints=[foil]))
    (seen,) = found["earlier_joints"]
    assert seen["liquid_mass_fraction"]["nominal"] == pytest.approx(1.0)
    assert found["verdict"] == "fail"
    assert "no-window" in [w["code"] for w in found["warnings"]]
    lug = {"name": "lug", "alloy": {"designation": "Sn96.5Ag3.5"}}
    found = check(ask, changed(earlier_joints=[lug]))
    assert found["earlier_joints"][0]["liquid_mass_fraction"]["nominal"] == 0.0
    assert found["verdict"] == "pass"
    # a window of one's own does not set the earlier joint aside
    own = changed(window={"minimum_peak_c": 200, "maximum_peak_c": 240}, earlier_joints=[lug])
    del own["superheat_c"], own["upper_limits"]
    assert check(ask, own)["window"]["maximum_peak_c"] < 222.0


def test_a_further_limit_never_helps(ask):
    hot = changed(sensors=[{"name": "a", "temperature_c": [24, 118, 161, 240, 240, 120, 55]}])
    assert check(ask, hot)["verdict"] == "fail"
    hot["limits"] = {"time_above_solidus_s": {"at_most": 500}}
    assert check(ask, hot)["verdict"] == "fail"
    cold = changed(upper_limits=[*RUN["upper_limits"], {"name": "relay", "limit_c": 210}])
    assert check(ask, RUN)["verdict"] == "pass"
    assert check(ask, cold)["verdict"] == "fail"


def test_hold_still_and_times_by_hand(ask):
    found = check(ask, RUN)
    solidus, frozen = found["levels"]["solidus_c"], found["levels"]["hold_still_c"]
    assert frozen == pytest.approx(183.0, abs=0.02)
    from_s = 140 + 35 * (solidus - 161) / (212 - 161)
    to_s = 190 + 50 * max((213 - frozen) / (213 - 120), (209 - frozen) / (209 - 124))
    assert found["hold_still_from_s"] == pytest.approx(from_s)
    assert found["hold_still_s"] == pytest.approx(to_s - from_s)
    assert found["peak_spread_c"] == pytest.approx(4.0)


@pytest.mark.parametrize("separator", [",", ";"])
@pytest.mark.parametrize("carried", [True, False])
def test_a_table_says_the_same(ask, separator, carried):
    table = (
        TABLE_EXAMPLE if separator == "," else TABLE_EXAMPLE.replace(",", ";").replace("24;24", "24,0;24,0")
    )
    if carried:
        answer = ask("POST", "/v1/profile-checks", content=table, headers={"content-type": "text/csv"})
    else:
        address = "/v1/profile-checks?alloy=sn63pb37&superheat_c=15&limit_c=235"
        table = table.partition("\n")[2]
        answer = ask("POST", address, content=table, headers={"content-type": "text/csv"})
    assert answer.status_code == 200, answer.text
    found, other = answer.json(), check(ask, RUN)
    assert [s["name"] for s in found["sensors"]] == ["Corner joint", "Ground joint"]
    for sensor, same in zip(found["sensors"], other["sensors"], strict=True):
        assert sensor["peak_c"] == same["peak_c"]
        assert sensor["liquid"] == same["liquid"]
    assert found["verdict"] == other["verdict"]
    assert found["hold_still_s"] == other["hold_still_s"]


@pytest.mark.parametrize(
    ("query", "table", "field"),
    [
        ("", BARE, "alloy"),
        ("alloy=Sn63Pb37", TABLE_EXAMPLE, "alloy"),
        ("alloy=unobtainium", BARE, "alloy"),
        ("alloy=sn63pb37&superheat_c=abc", BARE, "superheat_c"),
        ("alloy=sn63pb37&superheat=5", BARE, "superheat"),
        ("alloy=sn63pb37&repairs=everything", BARE, "repairs"),
        ("alloy=sn63pb37", "time,a\n0,warm\n", "table"),
        ("alloy=sn63pb37", "time,a\n0,20\n5,30\n4,40\n", "sensors.0.time_s.2"),
    ],
)
def test_tables_that_are_refused(ask, query, table, field):
    headers = {"content-type": "text/csv"}
    answer = ask("POST", f"/v1/profile-checks?{query}", content=table, headers=headers)
    assert answer.status_code == 422, answer.text
    assert [error["field"] for error in answer.json()["errors"]] == [field]


@pytest.mark.parametrize("kind", ["text/plain", "text/csv; charset=latin-1", "application/xml"])
def test_other_bodies_are_refused_with_what_is_taken(ask, kind):
    answer = ask("POST", "/v1/profile-checks", content=TABLE_EXAMPLE.encode(), headers={"content-type": kind})
    assert answer.status_code == 415
    assert "text/csv" in answer.json()["detail"]


def test_parameters_beside_json_are_refused(ask):
    answer = ask("POST", "/v1/profile-checks?alloy=sn63pb37", json=RUN)
    assert answer.status_code == 422
    assert answer.json()["errors"][0]["field"] == "alloy"


@pytest.mark.parametrize(
    ("change", "field"),
    [
        ({"sensors": []}, "sensors"),
        ({"time_s": None}, "sensors.0.time_s"),
        ({"time_s": [0, 1]}, "sensors.0.temperature_c"),
        ({"time_s": [0, 50, 50, 175, 190, 240, 300]}, "sensors.0.time_s.2"),
        ({"limits": {"averaging_s": 0}}, "limits.averaging_s"),
        ({"limits": {"rise_c_per_s": {}}}, "limits.rise_c_per_s"),
        ({"limits": {"rise_c_per_s": {"at_least": 3, "at_most": 1}}}, "limits.rise_c_per_s"),
        ({"limits": {"soak": {"from_c": 160, "to_c": 120, "time_s": {"at_most": 9}}}}, "limits.soak.to_c"),
        ({"window": {"minimum_peak_c": 205}}, "superheat_c"),
        ({"standard_profile": "J-STD-999"}, "standard_profile"),
        ({"classification": "brass-c26000-70-30"}, "classification"),
        ({"repairs": ["all"]}, "repairs.0"),
        ({"target_liquid_fraction": 0}, "target_liquid_fraction"),
        ({"sensors": [{"name": "a", "on": "part", "temperature_c": HEATED}]}, "sensors"),
        ({"sensors": [{"name": "a", "limit_c": 9, "temperature_c": [1] * 7}]}, "sensors.0.limit_c"),
        ({"sensors": [{"name": "a", "temperature_c": [24.0] * 7}]}, "sensors.0"),
        ({"sensors": [{"name": "a", "temperature_c": [None] * 7}]}, "sensors.0"),
        ({"sensors": [{"name": "a", "temperature_c": ["24"] * 7}]}, "sensors.0.temperature_c.0"),
    ],
)
def test_what_is_wrong_is_named(ask, change, field):
    refused(ask, changed(**change), field)


def test_a_window_without_an_end_is_refused(ask):
    bare = {key: RUN[key] for key in ("alloy", "time_s", "sensors")}
    refused(ask, bare | {"window": {}}, "window")
    upside_down = {"minimum_peak_c": 230, "maximum_peak_c": 220}
    refused(ask, bare | {"window": upside_down}, "window.maximum_peak_c")


def test_other_units_are_noticed(ask):
    for convert in (lambda c: c + 273.15, lambda c: c * 1.8 + 32.0):
        sensors = [
            {"name": s["name"], "temperature_c": [convert(c) for c in s["temperature_c"]]}
            for s in RUN["sensors"]
        ]
        problem = refused(ask, changed(sensors=sensors), "sensors")
        assert "readings_are_celsius" in problem["errors"][0]["remedy"]
        assert check(ask, changed(sensors=sensors, readings_are_celsius=True))["verdict"] == "fail"


def test_repairs_are_listed(ask):
    sensors = copy.deepcopy(RUN["sensors"])
    sensors[0]["temperature_c"][2] = None
    sensors.append({"name": "spare", "temperature_c": [24.0] * 7})
    refused(ask, changed(sensors=sensors), "sensors.0.temperature_c.2")
    found = check(
        ask, changed(sensors=sensors, repairs=["leave out missing samples", "leave out dead sensors"])
    )
    assert found["repairs"] == [
        {"repair": "leave out missing samples", "sensor": "a", "count": 1},
        {"repair": "leave out dead sensors", "sensor": "spare", "count": 7},
    ]
    assert [s["name"] for s in found["sensors"]] == ["a", "b"]


def test_verdict_does_not_depend_on_sampling_or_order(ask):
    dense = np.linspace(0.0, 300.0, 3001)
    sensors = [
        {"name": s["name"], "temperature_c": np.interp(dense, RUN["time_s"], s["temperature_c"]).tolist()}
        for s in reversed(RUN["sensors"])
    ]
    found = check(ask, changed(sensors=sensors, time_s=dense.tolist()))
    sparse = check(ask, RUN)
    assert found["verdict"] == sparse["verdict"]
    assert found["tightest"] == sparse["tightest"]
    assert found["hold_still_s"] == pytest.approx(sparse["hold_still_s"], abs=1e-6)
    for sensor in found["sensors"]:
        same = next(s for s in sparse["sensors"] if s["name"] == sensor["name"])
        assert sensor["time_above_solidus_s"] == pytest.approx(same["time_above_solidus_s"], abs=1e-6)


def test_a_filler_known_by_printed_values_only(ask):
    """No curve, so no liquid against time; bounds and times all the same."""
    run = changed(
        alloy={"designation": "BNi-2"},
        upper_limits=[],
        sensors=[{"name": "a", "temperature_c": [24, 500, 900, 1050, 1050, 600, 100]}],
        fastest_c_per_s=20,
    )
    run["time_s"] = [0, 500, 1400, 1750, 1900, 2400, 3000]
    found = check(ask, run)
    assert found["sensors"][0]["liquid"] == []
    assert found["source"]["method"] == "standard table"
