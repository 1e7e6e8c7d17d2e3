"""Shortlists over HTTP: held against the windows that the same service answers one by one."""

import pytest

COPPER = "cu-c12200-dhp"
SOLDERS = [
    "Sn63Pb37",
    "Sn60Pb40",
    "Sn96.5Ag3.5",
    "Sn95Sb5",
    "Bi58Sn42",
    "Sn99.3Cu0.7",
    "In52Sn48",
    "Au80Sn20",
]
BASE = {
    "base_metals": [COPPER],
    "highest_peak_c": 250,
    "service_temperature_c": 85,
    "superheat_c": 12,
    "sensor_class": "IEC 60584 type K class 1",
    "spread_c": 4,
    "earlier_joints": [{"name": "Die", "alloy": {"designation": "Sn5Pb95"}, "margin_c": 10}],
    "stocked_fillers": SOLDERS,
    "most": 100,
}
SAME = ("superheat_c", "sensor_class", "spread_c", "earlier_joints")


def post(ask, call="shortlists", **body):
    answer = ask("POST", f"/v1/{call}", json=body)
    assert answer.status_code == 200, answer.text
    return answer.json()


def window_of(ask, name, question):
    limits = [{"name": "copper", "known": COPPER}, {"name": "peak", "limit_c": question["highest_peak_c"]}]
    liquidus_c = ask("GET", "/v1/melting", params={"alloy": name}).json()["liquidus_c"]["nominal"]
    limits.append({"name": "most superheat", "limit_c": liquidus_c + 60})  # general practice at most
    body = {field: question[field] for field in SAME} | {"upper_limits": limits}
    return post(ask, "window", alloy={"designation": name}, target_liquid_fraction=1, **body)


def names(found):
    return [one["name"] for one in found["ranked"]]


def test_every_window_is_the_one_that_is_answered_alone(ask):
    found = post(ask, **BASE)
    assert len(found["ranked"]) >= 4
    for one in found["ranked"]:
        alone = window_of(ask, one["name"], BASE)
        for field in ("minimum_peak_c", "maximum_peak_c", "width_c", "setpoint_c", "budget", "source"):
            assert one[field] == alone[field]
    for one in found["excluded"]:
        for reason in one["reasons"]:
            assert reason["code"] == "no-window"
            alone = window_of(ask, one["name"], BASE)
            assert not alone["feasible"]
            assert reason["by_c"] == alone["collision"]["by_c"]
    listed = names(found) + [one["name"] for one in found["excluded"]]
    assert sorted(listed) == sorted(SOLDERS)
    assert (found["ranked_count"], found["excluded_count"]) == (len(found["ranked"]), len(found["excluded"]))


def test_the_widest_comes_first_and_the_list_is_cut_where_asked(ask):
    found = post(ask, **BASE)
    widths = [one["width_c"] for one in found["ranked"]]
    assert widths == sorted(widths, reverse=True)
    assert [one["rank"] for one in found["ranked"]] == list(range(1, len(widths) + 1))
    cut = post(ask, **BASE | {"most": 2})
    assert cut["ranked"] == found["ranked"][:2]
    assert cut["ranked_count"] == found["ranked_count"]


def test_the_order_of_what_is_stocked_does_not_matter(ask):
    assert post(ask, **BASE) == post(ask, **BASE | {"stocked_fillers": SOLDERS[::-1] + SOLDERS[:2]})


@pytest.mark.parametrize(
    "more",
    [
        {"highest_peak_c": 230},
        {"spread_c": 15},
        {"superheat_c": 30},
        {"service_temperature_c": 140},
        {"most_homologous": 0.79},
        {"bans": {"lead": True}},
        {"bans": {"elements": ["Sn"]}},
        {"upper_limits": [{"name": "relay", "limit_c": 205}]},
        {"class": "braze"},
        {"standard": "ISO 9453"},
    ],
    ids=lambda more: next(iter(more)),
)
def test_asking_for_more_never_lets_a_filler_in_and_never_widens(ask, more):
    before, after = post(ask, **BASE), post(ask, **BASE | more)
    widths = {one["name"]: one["width_c"] for one in before["ranked"]}
    assert set(names(after)) < set(widths) or after["ranked"] != before["ranked"]
    for one in after["ranked"]:
        assert one["width_c"] <= widths[one["name"]]
    assert {one["name"] for one in before["excluded"]} <= {one["name"] for one in after["excluded"]}


def test_the_homologous_service_temperature_by_hand(ask):
    """358.15 K over the solidus of tin–lead, 183 °C (456.15 K): 0.785."""
    (one,) = post(ask, **BASE | {"stocked_fillers": ["Sn63Pb37"]})["ranked"]
    assert one["homologous_service_temperature"] == pytest.approx(358.15 / 456.15, abs=5e-4)
    assert one["solid_above_service_c"] == pytest.approx(183 - 85, abs=0.3)
    assert "homologous" not in [reason["code"] for reason in one["reasons_against"]]
    hot = post(ask, **BASE | {"stocked_fillers": ["Sn63Pb37"], "service_temperature_c": 110})["ranked"][0]
    assert hot["homologous_service_temperature"] == pytest.approx(383.15 / 456.15, abs=5e-4)
    assert "homologous" in [reason["code"] for reason in hot["reasons_against"]]


def test_a_joint_that_would_melt_in_use_is_excluded_by_degrees(ask):
    found = post(ask, **BASE | {"service_temperature_c": 150})
    reasons = {one["name"]: one["reasons"] for one in found["excluded"]}
    (bismuth,) = reasons["Bi58Sn42"]
    assert bismuth["code"] == "service-temperature"
    assert bismuth["by_c"] == pytest.approx(150 - 139, abs=1)
    wanted = post(ask, **BASE | {"most_homologous": 0.75})
    codes = {one["name"]: [r["code"] for r in one["reasons"]] for one in wanted["excluded"]}
    assert codes["Sn63Pb37"] == ["homologous"]
    by_c = next(one for one in wanted["excluded"] if one["name"] == "Sn63Pb37")["reasons"][0]["by_c"]
    assert by_c == pytest.approx(358.15 / 0.75 - 273.15 - 183, abs=0.3)


def test_bans_name_every_element_and_look_at_what_a_standard_allows(ask):
    body = {"highest_peak_c": 1000, "class": "braze", "bans": {"cadmium": True, "elements": ["Zn", "Sn"]}}
    found = post(ask, **body, stocked_fillers=["BAg-1", "RBCuZn-A", "BAg-8"])
    reasons = {one["name"]: [r["text"] for r in one["reasons"]] for one in found["excluded"]}
    assert names(found) == ["BAg-8"]
    assert len(reasons["BAg-1"]) == 2  # cadmium and zinc
    assert any("allows Sn" in text for text in reasons["RBCuZn-A"])  # in its limits, not in its nominal
    kept = post(ask, **BASE | {"bans": {"fillers": ["sn63 pb37"]}})
    assert "Sn63Pb37" not in names(kept)


def test_practice_bars_speaks_for_and_against(ask):
    body = {
        "highest_peak_c": 900,
        "class": "braze",
        "stocked_fillers": ["CuP 182", "BAg-8", "BAg-24", "BAlSi-4"],
    }
    copper = post(ask, **body, base_metals=[COPPER])
    assert set(names(copper)) == {"CuP 182", "BAg-8", "BAg-24"}
    cup = next(one for one in copper["ranked"] if one["name"] == "CuP 182")
    assert any("no flux on copper" in r["text"] for r in cup["reasons_for"] if r["code"] == "practice")
    steel = post(ask, **body, base_metals=[COPPER, "low-carbon-steel-1010-1020"])
    barred = {one["name"]: one["reasons"] for one in steel["excluded"]}
    assert [r["code"] for r in barred["CuP 182"]] == ["practice"]
    assert "phosphides" in barred["CuP 182"][0]["text"]
    assert [base["key"] for base in steel["base_metals"]] == [COPPER, "low-carbon-steel-1010-1020"]
    aluminium = post(ask, **body, base_metals=["al-3003"], base_metal_margin_c=20)
    assert names(aluminium) == ["BAlSi-4"]
    assert aluminium["ranked"][0]["maximum_peak_c"] <= 643 - 20


def test_a_target_under_one_computes_six_and_says_so_of_the_others(ask):
    body = {"highest_peak_c": 260, "class": "solder", "most": 167, "superheat_c": 10}
    all_liquid = post(ask, **body)
    codes = {reason["code"] for one in all_liquid["ranked"] for reason in one["reasons_against"]}
    assert "not-computed" not in codes
    body["target_liquid_fraction"] = 0.9
    found = post(ask, **body)
    assert found["ranked_count"] == len(found["ranked"]) > 20
    assert found["ranked_count"] + found["excluded_count"] == 167
    computed = [one["name"] for one in found["ranked"] if one["source"]["method"] == "minimisation"]
    assert 1 <= len(computed) <= 6
    for one in found["ranked"]:
        codes = [reason["code"] for reason in one["reasons_against"]]
        assert one["source"]["method"] == "standard table" or "not-computed" not in codes
        assert {"window"} <= {reason["code"] for reason in one["reasons_for"]}
        assert ("lead" in codes) is ("Pb" in one["composition_wt"])
    late = [one for one in found["ranked"] if "not-computed" in [r["code"] for r in one["reasons_against"]]]
    assert late
    for one in late[:2]:
        printed = ask("GET", f"/v1/fillers/{one['name']}").json()
        assert one["liquidus_c"] >= printed["liquidus_c"]
        assert one["solidus_c"] <= printed["solidus_c"]
    assert any(note["topic"] == "lead" for note in found["safety"]["notes"])


def test_a_sensor_class_that_ends_below_keeps_a_filler_off(ask):
    body = {"highest_peak_c": 900, "sensor_class": "IEC 60584 type T class 1"}
    found = post(ask, **body, stocked_fillers=["BAg-8", "Sn63Pb37"])
    assert names(found) == ["Sn63Pb37"]
    assert found["excluded"][0]["reasons"][0]["code"] == "sensor-class"


@pytest.mark.parametrize(
    ("wrong", "field"),
    [
        ({"base_metals": ["copper"]}, "base_metals.0"),
        ({"base_metals": [COPPER, "flux-fh10"]}, "base_metals.1"),
        ({"stocked_fillers": ["Sn63Pb37", "Sn63Pb38x"]}, "stocked_fillers.1"),
        ({"bans": {"fillers": ["Unknown"]}}, "bans.fillers.0"),
        ({"bans": {"elements": ["Pb", "Xx"]}}, "bans.elements.1"),
        ({"upper_limits": [{"name": "Highest peak", "limit_c": 240}]}, "upper_limits.0.name"),
        ({"upper_limits": [{"name": "part"}]}, "upper_limits.0.limit_c"),
        ({"earlier_joints": [{"name": "x", "alloy": {"designation": "Sn63Pb38x"}}]}, None),
        ({"most": 0}, "most"),
        ({"most_homologous": 1.5}, "most_homologous"),
        ({"sensor_tolerance_c": 1}, "sensor_class"),
        ({"colour": "red"}, "colour"),
    ],
)
def test_what_is_wrong_is_named(ask, wrong, field):
    answer = ask("POST", "/v1/shortlists", json=BASE | wrong)
    assert answer.status_code == 422
    named = answer.json()["errors"][0]
    assert named["field"] == (field or "earlier_joints.0.alloy.designation")
    assert named["remedy"]


def test_something_has_to_bound_the_peak_and_homologous_needs_a_service_temperature(ask):
    for body, field in (
        ({"service_temperature_c": 85}, "highest_peak_c"),
        ({"highest_peak_c": 250, "most_homologous": 0.8}, "most_homologous"),
    ):
        answer = ask("POST", "/v1/shortlists", json=body)
        assert answer.status_code == 422
        assert answer.json()["errors"][0]["field"] == field


def test_cautions_speak_of_joints_and_limits_too(ask):
    topics = {note["topic"] for note in post(ask, **BASE, bans={"lead": True})["safety"]["notes"]}
    assert "lead" in topics  # of the die's solder
    base = {"stocked_fillers": ["Sn100"], "base_metals": ["beryllium-copper-c17200"]}
    assert "beryllium" in {note["topic"] for note in post(ask, **base)["safety"]["notes"]}
    limits = [{"name": "body", "known": "brass-c36000-free-cutting"}]
    leaded = post(ask, stocked_fillers=["Sn100"], upper_limits=limits)
    assert "lead" in {note["topic"] for note in leaded["safety"]["notes"]}


def test_without_a_brazing_range_usual_superheat_keeps_a_filler_from_overheating(ask):
    """Ag 156 and BAg-7 are one alloy; only the latter's row has a brazing range, 652 to 760 °C."""
    body = {"base_metals": ["low-carbon-steel-1010-1020"], "stocked_fillers": ["Ag 156", "BAg-7", "Sn100"]}
    found = {one["name"]: one for one in post(ask, **body)["ranked"]}
    assert found["BAg-7"]["binding_upper"] == "brazing range maximum"
    assert found["Ag 156"]["binding_upper"] == "most superheat"
    assert found["Ag 156"]["maximum_peak_c"] == 655 + 60
    assert found["Sn100"]["width_c"] == pytest.approx(60, abs=0.1)
    wide = {one["name"]: one for one in post(ask, **body, most_superheat_c=200)["ranked"]}
    assert wide["Sn100"]["width_c"] == pytest.approx(200, abs=0.1)
    assert wide["BAg-7"] == found["BAg-7"] | {"rank": wide["BAg-7"]["rank"]}
    banned = post(ask, **body, bans={"fillers": ["BAg-7"]})
    assert names(banned) == ["Sn100"]  # one alloy, whatever it is called


def test_a_print_is_not_trusted_where_the_data_know_worse(ask):
    """Sn60Pb39Cu1 is printed without its last crystals of Cu6Sn5, which melt 140 °C higher."""
    body = {"highest_peak_c": 320, "count_data": True, "class": "solder", "superheat_c": 15, "most": 167}
    assert not {"Sn60Pb39Cu1", "Sn50Pb49Cu1"} & set(names(post(ask, **body)))


@pytest.mark.parametrize(
    ("body", "field"),
    [
        (
            {
                "earlier_joints": [
                    {"name": "a", "alloy": {"designation": "CuP 182"}, "max_liquid_fraction": 1}
                ]
            },
            "highest_peak_c",
        ),
        ({"highest_peak_c": 250, "service_temperature_c": 100, "most_homologous": 1e-300}, "most_homologous"),
        ({"highest_peak_c": 250, "sensor_class": "IEC 60584 type B class 2"}, "sensor_class"),
        ({"highest_peak_c": 250, "base_metal_margin_c": 5}, "base_metal_margin_c"),
        ({"highest_peak_c": 250, "most": 1.5}, "most"),
    ],
)
def test_what_cannot_be_asked_is_refused_once(ask, body, field):
    answer = ask("POST", "/v1/shortlists", json=body)
    assert answer.status_code == 422
    assert [error["field"] for error in answer.json()["errors"]] == [field]
    assert "without quotes" not in answer.json()["errors"][0]["remedy"]
