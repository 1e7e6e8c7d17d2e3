"""Alloys of three and more elements over HTTP: measured facts, twins, windows, mixtures, what is refused."""

import pytest

SAC = {"designation": "SAC305"}
SAC_WT = {"composition_wt": {"Ag": 3, "Cu": 0.5, "Sn": 96.5}}


def post(ask, path, **question):
    answer = ask("POST", f"/v1/{path}", json=question)
    assert answer.status_code == 200, answer.text
    return answer.json()


@pytest.fixture(scope="module")
def sac(ask):
    return post(ask, "melting", alloy=SAC, temperatures_c=[100, 216, 218.5, 240])


def test_sac305_melts_between_217_and_220(sac):
    assert sac["source"] == {
        "diagram": "ag-bi-cu-pb-sn",
        "edition": sac["source"]["edition"],
        "method": "minimisation",
    }
    assert sac["solidus_c"]["nominal"] == pytest.approx(217, abs=1)
    assert sac["liquidus_c"]["nominal"] == pytest.approx(220, abs=1)
    printed = sac["standard"]
    assert printed["solidus_difference_c"] == sac["solidus_c"]["nominal"] - 217
    fractions = [p["liquid_mass_fraction"] for p in sac["at_temperatures"]]
    assert (fractions[0], fractions[1], fractions[3]) == (0, 0, 1)
    assert 0.5 < fractions[2] < 1
    assert sac["curve"] == sorted(sac["curve"], key=lambda p: p["temperature_c"])


def test_the_tolerance_is_searched_and_the_answer_says_so(ask, sac):
    for name in ("solidus_c", "liquidus_c"):
        span = sac[name]
        assert span["lowest"] <= span["nominal"] <= span["highest"]
        for end in ("lowest_at_wt", "highest_at_wt"):
            assert sum(span[end].values()) == pytest.approx(100)
            for el, limits in sac["alloy"]["limits_wt"].items():
                assert limits["lowest"] - 1e-6 <= span[end][el] <= limits["highest"] + 1e-6
    assert "by search" in sac["tolerance"]
    assert "compositions" in sac["tolerance"]
    liquidus = sac["liquidus_c"]
    assert liquidus["highest"] - liquidus["lowest"] > 1
    at_end = post(ask, "melting", alloy={"composition_wt": liquidus["highest_at_wt"]})
    assert at_end["liquidus_c"]["nominal"] == pytest.approx(liquidus["highest"], abs=0.01)
    assert at_end["tolerance"] is None


def test_a_state_hangs_together_and_twins_agree(ask):
    found = post(ask, "equilibrium", alloy=SAC_WT, temperature_c=218.5)
    assert found["source"]["method"] == "minimisation"
    assert found["phases"][0]["kind"] == "liquid"
    assert found["field"] == " + ".join(p["name"] for p in found["phases"])
    for el, wt in SAC_WT["composition_wt"].items():
        whole = sum(p["mass_fraction"] * p["composition_wt"].get(el, 0) for p in found["phases"])
        assert whole == pytest.approx(wt, abs=1e-7)
    melted = post(ask, "melting", alloy=SAC_WT, temperatures_c=[218.5])["at_temperatures"][0]
    assert melted["liquid_mass_fraction"] == pytest.approx(found["liquid_mass_fraction"], abs=2e-4)
    got = ask("GET", "/v1/equilibrium?alloy=Ag3Cu0.5Sn&temperature_c=218.5")
    assert got.json() == found
    again = ask("GET", "/v1/equilibrium?alloy=Cu0.5Sn96.5Ag3&temperature_c=218.5")
    assert again.content == got.content


def test_a_window_with_three_elements_on_both_sides(ask, sac):
    found = post(
        ask,
        "window",
        alloy={"designation": "Bi58Sn42"},
        target_liquid_fraction=1,
        superheat_c=15,
        earlier_joints=[{"name": "Lug", "alloy": SAC, "margin_c": 5}],
    )
    (term,) = found["upper_terms"]
    assert term["value_c"] == pytest.approx(sac["solidus_c"]["lowest"] - 5, abs=1e-6)
    assert "system ag-bi-cu-pb-sn" in term["reason"]
    assert "2.8 to 3.2 wt% Ag" in term["reason"]
    assert found["earlier_joints"][0]["liquid_mass_fraction"] == {"nominal": 0, "worst": 0}
    upper = post(
        ask, "window", alloy=SAC, target_liquid_fraction=1, upper_limits=[{"name": "Board", "limit_c": 245}]
    )
    assert upper["minimum_peak_c"] == sac["liquidus_c"]["highest"]
    assert upper["feasible"]


def test_lead_free_balls_in_leaded_paste(ask):
    parts = [{"alloy": {"designation": "Sn63Pb37"}, "mass_g": 1}, {"alloy": SAC, "mass_g": 1}]
    found = post(ask, "mixtures", parts=parts, temperature_c=250)
    assert found["composition_wt"] == pytest.approx({"Ag": 1.5, "Cu": 0.25, "Pb": 18.5, "Sn": 79.75})
    assert found["solidus_c"] == pytest.approx(178, abs=2)  # tin, lead and silver melt together at 179 °C
    assert found["shift"]["liquidus_c"] > 0
    assert found["at_temperature"]["field"] == "L"
    assert [w["code"] for w in found["warnings"]] == ["lead-in-lead-free"]
    whole = post(ask, "melting", alloy={"composition_wt": found["composition_wt"]})
    assert found["liquidus_c"] == pytest.approx(whole["liquidus_c"]["nominal"], abs=1e-3)


def test_bismuth_in_tin_lead_melts_near_the_ternary_eutectic(ask):
    parts = [
        {"alloy": {"designation": "Bi58Sn42"}, "mass_g": 1},
        {"alloy": {"designation": "Sn63Pb37"}, "mass_g": 1},
    ]
    found = post(ask, "mixtures", parts=parts)
    assert found["solidus_c"] == pytest.approx(96, abs=4)
    assert "bismuth-and-lead" in [w["code"] for w in found["warnings"]]
    assert f"{found['solidus_c']:.1f} °C" in found["warnings"][-1]["text"]


def test_copper_dissolves_into_sac305(ask):
    found = post(ask, "dissolution", alloy=SAC, solder_mass_g=0.01, metal="Cu", thickness_um=2, area_mm2=5)
    copper_g = 0.002 * 5 * 8.96 / 1000
    assert found["composition_wt"]["Cu"] == pytest.approx(100 * (5e-5 + copper_g) / (0.01 + copper_g))
    liquidus = [p["liquidus_c"] for p in found["path"]]
    assert (found["path"][-1]["solidus_c"], liquidus[-1]) == (found["solidus_c"], found["liquidus_c"])
    third = post(ask, "melting", alloy={"composition_wt": found["path"][3]["composition_wt"]})
    assert third["liquidus_c"]["nominal"] == pytest.approx(liquidus[3], abs=1e-3)
    assert liquidus[-1] > liquidus[0]
    assert found["source"]["method"] == "minimisation"


def test_a_picture_can_be_had(ask):
    answer = ask("GET", "/v1/melting/figure?alloy=Ag3Cu0.5Sn&format=svg")
    assert answer.status_code == 200
    assert "system Ag–Cu–Sn" in answer.text


@pytest.mark.parametrize(
    ("alloy", "code"),
    [
        ({"composition_wt": {"Sn": 90, "Fe": 5, "Al": 5}}, "not-covered"),
        ({"composition_wt": {"Ag": 20, "Cu": 20, "Zn": 60}}, "outside-data"),
        ({"composition_wt": {"Ag": 3, "Cu": 0.5, "Sn": 97}}, "invalid-composition"),
    ],
)
def test_what_no_data_tell_is_refused(ask, alloy, code):
    for path, more in (("melting", {}), ("equilibrium", {"temperature_c": 600})):
        answer = ask("POST", f"/v1/{path}", json={"alloy": alloy} | more)
        assert (answer.status_code, answer.json()["code"]) == (422, code)
        assert answer.json()["errors"][0]["field"] == "alloy.composition_wt"
    beyond = ask("POST", "/v1/equilibrium", json={"alloy": SAC, "temperature_c": 2000})
    assert (beyond.status_code, beyond.json()["errors"][0]["field"]) == (422, "temperature_c")


def test_questions_that_would_take_long_are_refused_beforehand(ask):
    alloys = [{"composition_wt": {"Ag": 3 + 0.1 * k, "Cu": 0.5, "Sn": 96.5 - 0.1 * k}} for k in range(7)]
    joints = [
        {"name": str(k), "alloy": alloy, "max_liquid_fraction": 1} for k, alloy in enumerate(alloys[1:])
    ]
    question = {"alloy": alloys[0], "target_liquid_fraction": 1, "earlier_joints": joints}
    answer = ask("POST", "/v1/window", json=question)
    assert (answer.status_code, answer.json()["code"]) == (422, "invalid-input")
    assert answer.json()["errors"][0]["field"] == "earlier_joints.5.alloy"
    mixture = ask("POST", "/v1/mixtures", json={"parts": [{"alloy": a, "mass_g": 1} for a in alloys]})
    assert (mixture.status_code, mixture.json()["errors"][0]["field"]) == (422, "parts.6.alloy")
