"""The window over HTTP: a case reckoned by hand, reasons in full, twins, errors."""

import pytest

QUESTION = {
    "alloy": {"designation": "Sn63Pb37"},
    "target_liquid_fraction": 1,
    "superheat_c": 15,
    "sensor_tolerance_c": 2,
    "spread_c": 6,
    "upper_limits": [{"name": "Connector", "limit_c": 225}, {"name": "Board", "limit_c": 260}],
    "earlier_joints": [{"name": "Lug", "alloy": {"designation": "Sn96.5Ag3.5"}, "margin_c": 5}],
}


def ask_window(ask, question):
    answer = ask("POST", "/v1/window", json=question)
    assert answer.status_code == 200, answer.text
    return answer.json()


def test_a_window_reckoned_by_hand(ask, draw):
    found = ask_window(ask, QUESTION)
    tin_lead, tin_silver = draw("pb-sn"), draw("ag-sn")
    molten = max(tin_lead.reaches(wt, 1 - 1e-12) for wt in (62.5, 63.0, 63.5))
    melting = min(tin_silver.reaches(wt, 1e-12) for wt in (96.3, 96.5, 96.7))
    assert found["minimum_peak_c"] == pytest.approx(molten + 15 + 2, abs=1e-5)
    assert found["maximum_peak_c"] == pytest.approx(melting - 5 - 2, abs=1e-5)
    assert found["width_c"] == pytest.approx(melting - 7 - (molten + 17) - 6, abs=1e-5)
    assert found["setpoint_c"] == pytest.approx((molten + 17 + melting - 7) / 2, abs=1e-5)
    assert found["feasible"]
    assert found["minimum_peak_c"] == pytest.approx(183 + 17, abs=4)  # the trade's eutectics, 183 and 221 °C
    assert found["maximum_peak_c"] == pytest.approx(221 - 7, abs=1)
    assert (found["binding_lower"], found["binding_upper"]) == ("target liquid fraction", "Lug")
    upper = {term["name"]: term["value_c"] for term in found["upper_terms"]}
    assert upper["Connector"] == 223
    assert upper["Board"] == 258
    assert found["collision"] is None


def test_reasons_tell_composition_edition_tolerance_and_additions(ask):
    found = ask_window(ask, QUESTION)
    (lower,) = found["lower_terms"]
    for part in ("Sn63Pb37", "62.5 to 63.5 wt% Sn", "pb-sn", found["source"]["edition"], "15 °C", "2 °C"):
        assert part in lower["reason"]
    lug = next(term for term in found["upper_terms"] if term["name"] == "Lug")
    for part in ("Sn96.5Ag3.5", "96.3 to 96.7 wt% Sn", "ag-sn", "margin 5 °C", f"{lug['value_c']:.2f} °C"):
        assert part in lug["reason"]


def test_the_earlier_joint_stands_in_the_answer(ask):
    (seen,) = ask_window(ask, QUESTION)["earlier_joints"]
    assert seen["name"] == "Lug"
    assert seen["alloy"]["designation"] == "Sn96.5Ag3.5"
    assert seen["liquid_mass_fraction"] == {"nominal": 0, "worst": 0}
    assert seen["starts_to_melt_c"]["lowest"] == pytest.approx(221, abs=1)
    assert seen["source"]["diagram"] == "ag-sn"


def test_no_window_tells_what_collides(ask):
    foil = {"name": "Foil", "alloy": {"designation": "Bi58Sn42"}, "max_liquid_fraction": 0.1}
    found = ask_window(ask, QUESTION | {"earlier_joints": [foil]})
    assert not found["feasible"]
    assert found["setpoint_c"] is None
    collision = found["collision"]
    assert (collision["lower"], collision["upper"]) == ("target liquid fraction", "Foil")
    assert collision["by_c"] == pytest.approx(
        found["minimum_peak_c"] + QUESTION["spread_c"] - found["maximum_peak_c"], abs=1e-9
    )
    assert collision["by_c"] == pytest.approx(183 + 17 + 6 - (139 - 2), abs=4)
    assert found["width_c"] == -collision["by_c"]


def test_where_no_data_reach_an_earlier_joint_nothing_is_guessed(ask):
    question = {
        "alloy": {"designation": "Sn63Pb37"},
        "target_liquid_fraction": 1,
        "upper_limits": [{"name": "Board", "limit_c": 500}],
        "earlier_joints": [{"name": "Foil", "alloy": {"designation": "Bi58Sn42"}, "max_liquid_fraction": 1}],
    }
    (seen,) = ask_window(ask, question)["earlier_joints"]
    assert seen["liquid_mass_fraction"] == {"nominal": None, "worst": None}


def test_the_address_line_gives_the_same_answer(ask):
    got = ask(
        "GET", "/v1/window?alloy=sn63pb37&target_liquid_fraction=0.95&superheat_c=10&spread_c=4&limit_c=230"
    )
    posted = ask(
        "POST",
        "/v1/window",
        json={
            "alloy": {"designation": "Sn63Pb37"},
            "target_liquid_fraction": 0.95,
            "superheat_c": 10,
            "spread_c": 4,
            "upper_limits": [{"name": "limit", "limit_c": 230}],
        },
    )
    assert got.status_code == 200
    assert got.content == posted.content
    again = ask("GET", str(got.request.url), headers={"If-None-Match": got.headers["etag"]})
    assert (again.status_code, again.content) == (304, b"")


def test_limits_by_key_are_listed_and_bound_the_window(ask):
    listed = ask("GET", "/v1/known-limits").json()
    brass = next(limit for limit in listed["limits"] if limit["key"] == "brass-c36000-free-cutting")
    assert (brass["kind"], brass["limit_c"], brass["reference"]["how"]) == ("base metal", 885, "from memory")
    posted = ask_window(
        ask,
        {
            "alloy": {"designation": "CuP 182"},
            "target_liquid_fraction": 1,
            "upper_limits": [{"name": "Body", "known": "BRASS C36000 free cutting", "margin_c": 10}],
        },
    )
    body = next(term for term in posted["upper_terms"] if term["name"] == "Body")
    assert body["value_c"] == 875
    assert [part["value_c"] for part in body["parts"]] == [885, -10, 0]
    assert {"lead", "zinc fume"} <= {note["topic"] for note in posted["safety"]["notes"]}
    got = ask("GET", "/v1/window?alloy=CuP182&target_liquid_fraction=1&known_limit=brass-c36000-free-cutting")
    assert got.json()["upper_terms"][0]["name"] == "known limit"
    assert got.json()["upper_terms"][0]["value_c"] == 885


def test_the_spread_is_a_part_of_the_width(ask):
    found = ask_window(ask, QUESTION)
    parts = {part["name"]: part["value_c"] for part in found["width_parts"]}
    assert parts["spread"] == -6
    assert sum(parts.values()) == pytest.approx(found["width_c"], abs=1e-9)
    assert "6 °C more than the coldest" in found["width_parts"][-1]["reason"]


def test_the_same_question_gives_the_same_bytes(ask):
    assert (
        ask("POST", "/v1/window", json=QUESTION).content == ask("POST", "/v1/window", json=QUESTION).content
    )


def test_cautions_follow_all_alloys_named(ask):
    lead_below = QUESTION | {
        "alloy": {"designation": "Bi58Sn42"},
        "earlier_joints": [{"name": "Old", "alloy": {"designation": "Sn63Pb37"}}],
    }
    assert "lead" in {n["topic"] for n in ask_window(ask, lead_below)["safety"]["notes"]}
    lead_free = QUESTION | {"alloy": {"designation": "Bi58Sn42"}}
    assert "lead" not in {n["topic"] for n in ask_window(ask, lead_free)["safety"]["notes"]}


@pytest.mark.parametrize(
    ("change", "field"),
    [
        ({"target_liquid_fraction": 0}, "target_liquid_fraction"),
        ({"target_liquid_fraction": 1.01}, "target_liquid_fraction"),
        ({"target_liquid_fraction": None}, "target_liquid_fraction"),
        ({"superheat_c": -1}, "superheat_c"),
        ({"sensor_tolerance_c": -0.1}, "sensor_tolerance_c"),
        ({"spread_c": -5}, "spread_c"),
        ({"spread_c": "6"}, "spread_c"),
        ({"upper_limits": [{"name": "a", "limit_c": 1}, {"name": "a", "limit_c": 2}]}, "upper_limits.1.name"),
        ({"upper_limits": [{"name": "a", "limit_c": True}]}, "upper_limits.0.limit_c"),
        ({"upper_limits": [{"name": "", "limit_c": 200}]}, "upper_limits.0.name"),
        ({"upper_limits": [{"name": "a"}]}, "upper_limits.0.limit_c"),
        ({"upper_limits": [{"name": "a", "limit_c": 250, "known": "al-6061"}]}, "upper_limits.0.known"),
        ({"upper_limits": [{"name": "a", "known": "al-6016"}]}, "upper_limits.0.known"),
        ({"upper_limits": [{"name": "a", "known": "al-6061", "margin_c": -1}]}, "upper_limits.0.margin_c"),
        ({"earlier_joints": [{"name": "a"}]}, "earlier_joints.0.alloy"),
        (
            {"earlier_joints": [{"name": "a", "alloy": {"composition_wt": {"Fe": 90, "C": 10}}}]},
            "earlier_joints.0.alloy.composition_wt",
        ),
        (
            {"earlier_joints": [QUESTION["earlier_joints"][0] | {"margin_c": -1}]},
            "earlier_joints.0.margin_c",
        ),
        (
            {"earlier_joints": [QUESTION["earlier_joints"][0] | {"max_liquid_fraction": 1.5}]},
            "earlier_joints.0.max_liquid_fraction",
        ),
        (
            {
                "earlier_joints": [
                    {
                        "name": "a",
                        "alloy": {"composition_wt": {"Cu": 39, "Sn": 61}, "tolerance_wt": {"Sn": 2}},
                    }
                ]
            },
            "earlier_joints.0.alloy.tolerance_wt",
        ),
        ({"alloy": {"composition_wt": {"Fe": 90, "C": 10}}}, "alloy.composition_wt"),
        ({"colour": "red"}, "colour"),
    ],
)
def test_what_is_wrong_is_named(ask, change, field):
    answer = ask("POST", "/v1/window", json=QUESTION | change)
    assert answer.status_code == 422
    assert answer.json()["errors"][0]["field"] == field
    assert answer.json()["errors"][0]["detail"]


@pytest.mark.parametrize(
    ("query", "field"),
    [
        ("alloy=Sn63Pb37", "target_liquid_fraction"),
        ("alloy=Fe90C&target_liquid_fraction=1", "alloy"),
        ("alloy=Cu39Sn61&target_liquid_fraction=1&limit_c=nan", "limit_c"),
        ("alloy=Sn63Pb37&target_liquid_fraction=1&superheat_c=-3", "superheat_c"),
        ("alloy=Sn63Pb37&target_liquid_fraction=1&earlier_joints=x", "earlier_joints"),
        ("alloy=Sn63Pb37&target_liquid_fraction=1&known_limit=al-6016", "known_limit"),
    ],
)
def test_what_is_wrong_in_the_address_is_named(ask, query, field):
    answer = ask("GET", f"/v1/window?{query}")
    assert answer.status_code == 422
    assert answer.json()["errors"][0]["field"] == field
