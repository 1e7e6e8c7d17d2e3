"""The uncertainty budget over HTTP: one set of fields, counted alike by window, check and plan."""

import pytest

CLASS = "IEC 60584 type K class 1"
BUDGET = {"sensor_class": CLASS, "spread_c": 4, "count_data": True, "combination": "root-sum-square"}
LUG = {"name": "lug", "alloy": {"designation": "Sn96.5Ag3.5"}, "margin_c": 2}
JOINT = {"alloy": {"designation": "Sn63Pb37"}, "target_liquid_fraction": 1, "superheat_c": 15}
RUN = {
    "time_s": [0, 100, 200, 300],
    "sensors": [{"name": "corner", "temperature_c": [25, 207, 206, 60]}],
}


def post(ask, call, **body):
    answer = ask("POST", f"/v1/{call}", json=body)
    assert answer.status_code == 200, answer.text
    return answer.json()


@pytest.mark.parametrize("combination", ["worst case", "root-sum-square"])
def test_window_check_and_plan_count_one_budget(ask, combination):
    budget = BUDGET | {"combination": combination}
    window = post(ask, "window", **JOINT, **budget, earlier_joints=[LUG])
    check = post(ask, "profile-checks", **JOINT, **budget, earlier_joints=[LUG], **RUN)
    later = {"name": "later", **JOINT}
    first = {"name": "lug", "alloy": LUG["alloy"], "margin_later_c": 2}
    plan = post(ask, "step-plans", joints=[later, first], **budget)
    assert plan["order"] == ["lug", "later"]
    assert window["budget"] == check["budget"] == plan["steps"][1]["budget"]
    assert check["window"]["minimum_peak_c"] == window["minimum_peak_c"]
    chosen = "worst_case" if combination == "worst case" else "root_sum_square"
    own = {k: window[k] for k in ("minimum_peak_c", "maximum_peak_c", "width_c", "feasible")}
    assert own == window["budget"][chosen]
    assert window["budget"]["combination"] == combination
    assert window["budget"]["sensor"]["sensor_class"] == CLASS
    assert window["budget"]["worst_case"]["width_c"] < window["budget"]["root_sum_square"]["width_c"]


def test_each_uncertainty_stands_by_itself_with_its_reason(ask):
    window = post(ask, "window", **JOINT, **BUDGET, earlier_joints=[LUG])
    for term in window["lower_terms"] + window["upper_terms"]:
        named = {one["name"]: one for one in term["uncertainties"]}
        assert list(named) == ["alloy tolerance", "data", "sensor tolerance"]
        assert all(one["reason"] and one["size_c"] >= 0 for one in named.values())
        assert named["sensor tolerance"]["size_c"] == pytest.approx(1.5)
        assert named["data"]["size_c"] >= 0.5
        assert "comparison 2026-12-01" in named["data"]["reason"]
        total = sum(one["size_c"] for one in named.values())
        root = sum(one["size_c"] ** 2 for one in named.values()) ** 0.5
        assert abs(term["worst_case_c"] - term["root_sum_square_c"]) == pytest.approx(total - root, abs=1e-9)
        assert term["value_c"] == term["root_sum_square_c"]


def test_a_profile_at_the_ends_of_its_window_has_margin_nought(ask):
    window = post(ask, "window", **JOINT, **BUDGET, earlier_joints=[LUG])
    for end in ("minimum_peak_c", "maximum_peak_c"):
        peak_c = window[end]
        sensors = [{"name": "a", "temperature_c": [25, 150, peak_c, peak_c, 40]}]
        times = [0, 100, 200, 210, 400]
        run = post(
            ask, "profile-checks", **JOINT, **BUDGET, earlier_joints=[LUG], time_s=times, sensors=sensors
        )
        assert run["verdict"] == "pass"
        assert run["tightest"]["margin"] == 0


def test_the_address_line_and_the_table_take_it_too(ask):
    line = "/v1/window?alloy=Sn63Pb37&target_liquid_fraction=1&superheat_c=15&limit_c=240"
    line += "&sensor_class=iec60584%20k%20class1&spread_c=4&count_data=true&combination=root-sum-square"
    got = ask("GET", line)
    assert got.status_code == 200, got.text
    limits = [{"name": "limit", "limit_c": 240}]
    assert got.json()["budget"] == post(ask, "window", **JOINT, **BUDGET, upper_limits=limits)["budget"]
    table = "time,corner\n0,25\n100,207\n200,206\n300,60\n"
    checked = ask(
        "POST",
        line.replace("/v1/window", "/v1/profile-checks"),
        content=table,
        headers={"content-type": "text/csv"},
    )
    assert checked.status_code == 200, checked.text
    assert checked.json()["budget"] == got.json()["budget"]


def test_an_open_window_and_printed_values_say_what_is_not_known(ask):
    body = {"alloy": {"designation": "BAg-1"}, "target_liquid_fraction": 1, "count_data": True}
    window = post(ask, "window", **body)
    assert "data-not-compared" in [w["code"] for w in window["warnings"]]
    assert {"name": "data", "size_c": 0}.items() <= window["lower_terms"][0]["uncertainties"][1].items()
    assert "data-not-compared" not in [
        w["code"] for w in post(ask, "window", **body | {"count_data": False})["warnings"]
    ]


@pytest.mark.parametrize(
    ("wrong", "field"),
    [
        ({"sensor_class": CLASS, "sensor_tolerance_c": 0.1}, "sensor_class"),
        ({"sensor_class": "type K"}, "sensor_class"),
        ({"sensor_class": "IEC 60584 type B class 2"}, "sensor_class"),
        ({"count_data": True, "data_tolerance_c": 1}, "count_data"),
        ({"data_tolerance_c": -1}, "data_tolerance_c"),
        ({"combination": "average"}, "combination"),
    ],
)
@pytest.mark.parametrize("call", ["window", "profile-checks", "step-plans"])
def test_what_is_given_twice_or_wrongly_is_refused(ask, call, wrong, field):
    body = {
        "window": JOINT,
        "profile-checks": JOINT | RUN,
        "step-plans": {"joints": [{"name": "a", **JOINT}]},
    }
    answer = ask("POST", f"/v1/{call}", json=body[call] | wrong)
    assert answer.status_code == 422
    assert [error["field"] for error in answer.json()["errors"]] == [field]
    assert answer.json()["errors"][0]["remedy"]


def test_the_classes_are_listed(ask):
    listed = ask("GET", "/v1/sensor-classes").json()["sensor_classes"]
    assert len(listed) == 30
    by_name = {one["name"]: one for one in listed}
    at = {p["temperature_c"]: p["tolerance_c"] for p in by_name["ASTM E230 type K special"]["tolerances"]}
    assert at[1000] == pytest.approx(4.0)  # 0.4 % (ASTM E230/E230M-12)
    for one in listed:
        body = JOINT | {"sensor_class": one["name"]}
        answer = ask("POST", "/v1/window", json=body)
        assert (answer.status_code == 200) is (one["lowest_c"] <= 199 <= one["highest_c"]), answer.text


def test_a_given_window_shows_what_counts_for_earlier_joints_and_says_where_nothing_does(ask):
    given = {"alloy": JOINT["alloy"], "window": {"minimum_peak_c": 195, "maximum_peak_c": 240}, **RUN}
    budget = {"sensor_class": CLASS, "count_data": True}
    unused = post(ask, "profile-checks", **given, **budget)
    assert "budget-unused" in [warning["code"] for warning in unused["warnings"]]
    assert "budget-unused" not in [w["code"] for w in post(ask, "profile-checks", **given)["warnings"]]
    seen = post(ask, "profile-checks", **given, **budget, earlier_joints=[LUG])
    assert "budget-unused" not in [warning["code"] for warning in seen["warnings"]]
    (bound,) = (joint["bound"] for joint in seen["earlier_joints"])
    assert bound["value_c"] == seen["window"]["maximum_peak_c"]
    assert [one["name"] for one in bound["uncertainties"]] == ["alloy tolerance", "data", "sensor tolerance"]
