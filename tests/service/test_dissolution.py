"""Metals that dissolve into a joint: amounts by hand, path against polygons, limits, refusals."""

import pytest

TIN = {"composition_wt": {"Sn": 100}}
SILVER = {"alloy": TIN, "solder_mass_g": 0.02, "metal": "Ag", "thickness_um": 6, "area_mm2": 12}
GOLD = {
    "alloy": {"designation": "Sn63Pb37"},
    "solder_volume_mm3": 2.5,
    "metal": "Au",
    "thickness_um": 1.3,
    "area_mm2": 18,
}
RATED = {
    "alloy": {"designation": "Sn60Pb40"},
    "solder_mass_g": 0.5,
    "metal": "Ag",
    "time_above_melting_s": 0.4,
    "temperature_c": 232,
    "area_mm2": 20,
    "leave_out_traces_below_wt": 1,
}


def dissolve(ask, question):
    answer = ask("POST", "/v1/dissolution", json=question)
    assert answer.status_code == 200, answer.text
    return answer.json()


def test_the_path_is_that_reckoned_by_hand(ask, draw):
    found = dissolve(ask, SILVER)
    silver_g = 0.006 * 12 * 10.5 / 1000
    assert found["dissolved"]["mass_g"] == pytest.approx(silver_g, rel=1e-12)
    assert len(found["path"]) == 11
    for k, point in enumerate(found["path"]):
        share_g = silver_g * k / 10
        silver_wt = 100 * share_g / (0.02 + share_g)
        assert point["share"] == pytest.approx(k / 10)
        assert point["mass_g"] == pytest.approx(share_g, abs=1e-15)
        assert point["thickness_um"] == pytest.approx(0.6 * k, abs=1e-12)
        assert point["composition_wt"].get("Ag", 0) == pytest.approx(silver_wt, abs=1e-9)
        if 0 < k < 10:  # the tenth lies over the eutectic, where both sides melt at once
            by_hand = draw("ag-sn").reaches(100 - silver_wt, 1 - 1e-12)
            assert point["liquidus_c"] == pytest.approx(by_hand, abs=1e-5)
            assert point["solidus_c"] == pytest.approx(221, abs=0.5)  # the trade's eutectic
    assert found["path"][0]["solidus_c"] == pytest.approx(231.93, abs=0.05)
    last = found["path"][-1]
    for name in ("composition_wt", "solidus_c", "liquidus_c"):
        assert last[name] == found[name]


def test_the_end_is_the_mixture(ask):
    found = dissolve(ask, SILVER)
    mixed = ask(
        "POST",
        "/v1/mixtures",
        json={
            "parts": [
                {"alloy": TIN, "mass_g": 0.02},
                {"alloy": {"composition_wt": {"Ag": 100}}, "plating_thickness_um": 6, "area_mm2": 12},
            ]
        },
    ).json()
    for name in mixed.keys() - {"safety"}:
        assert found[name] == mixed[name], name
    by_mass = {k: v for k, v in SILVER.items() if k not in ("thickness_um", "area_mm2")}
    same = dissolve(ask, by_mass | {"mass_g": found["dissolved"]["mass_g"]})
    assert same["composition_wt"] == found["composition_wt"]
    assert same["dissolved"]["thickness_um"] is None


def test_gold_limits_are_reached_where_reckoned_by_hand(ask):
    found = dissolve(ask, GOLD)
    solder_g = 2.5 * 100 / (63 / 7.29 + 37 / 11.34) / 1000
    gold_g = 0.0013 * 18 * 19.3 / 1000
    by_mass, by_volume, removal = found["limits"]
    assert by_mass["value"] == pytest.approx(100 * gold_g / (gold_g + solder_g), rel=1e-9)
    assert by_mass["at_mass_g"] == pytest.approx(solder_g * 3 / 97, rel=1e-9)
    assert by_mass["at_thickness_um"] == pytest.approx(solder_g * 3 / 97 / 19.3 / 18 * 1e6, rel=1e-9)
    assert by_volume["value"] == pytest.approx(100 * 0.0234 / (2.5 + 0.0234), rel=1e-9)
    assert by_volume["at_thickness_um"] == pytest.approx(2.5 * 1.4 / 98.6 / 18 * 1000, rel=1e-9)
    assert (removal["limit"], removal["value"], removal["reached"]) == (2.54, 1.3, False)
    assert removal["at_thickness_um"] == pytest.approx(2.54)
    assert [by_mass["reached"], by_volume["reached"]] == [False, False]
    assert all(limit["reference"]["how"] == "from memory" for limit in found["limits"])
    assert found["warnings"] == []
    thick = dissolve(ask, GOLD | {"thickness_um": by_mass["at_thickness_um"] * 1.001})
    assert thick["limits"][0]["reached"]
    assert [w["code"] for w in thick["warnings"]] == ["gold-embrittlement"]
    assert dissolve(ask, GOLD | {"thickness_um": 2.54})["limits"][2]["reached"]


def test_gold_in_tin_lead_has_a_path_without_melting(ask):
    found = dissolve(ask, GOLD)
    assert found["solidus_c"] is None
    assert found["melting_unknown"]
    first, *rest = found["path"]
    assert first["solidus_c"] == pytest.approx(183, abs=0.1)
    assert first["unknown"] is None
    assert all(point["solidus_c"] is None and point["unknown"] for point in rest)


def test_gold_already_there_counts(ask):
    found = dissolve(
        ask,
        {
            "alloy": {"composition_wt": {"Sn": 98, "Au": 2}},
            "solder_mass_g": 1,
            "metal": "au",
            "mass_g": 0.005,
        },
    )
    by_mass = found["limits"][0]
    assert by_mass["value"] == pytest.approx(100 * 0.025 / 1.005, abs=1e-9)
    assert by_mass["at_mass_g"] == pytest.approx(1 / 97, abs=1e-12)
    assert found["composition_wt"]["Au"] == pytest.approx(by_mass["value"], abs=1e-9)
    assert found["solidus_c"] is not None


@pytest.mark.parametrize(("metal", "limit"), [("Pb", 0.1), ("Cd", 0.01)])
def test_poisons_have_their_limits(ask, metal, limit):
    question = {
        "alloy": TIN,
        "solder_mass_g": 2,
        "metal": metal,
        "mass_g": 0.001,
        "leave_out_traces_below_wt": 0.2,
    }
    (found,) = dissolve(ask, question)["limits"]
    assert found["limit"] == limit
    assert found["value"] == pytest.approx(100 * 0.001 / 2.001)
    assert found["at_mass_g"] == pytest.approx(2 * limit / (100 - limit))
    assert found["reached"] is (limit <= 100 * 0.001 / 2.001)
    assert found["at_thickness_um"] is None


@pytest.mark.parametrize(
    ("metal", "microinch_per_s"), [("Au", 117.9), ("Ag", 43.6), ("Cu", 4.1), ("Pd", 1.4)]
)
def test_published_rates_hold_where_they_were_measured(ask, metal, microinch_per_s):
    """Bader 1969 as reprinted, in microinch a second; 0.0254 µm each."""
    found = dissolve(ask, RATED | {"metal": metal})
    dissolved = found["dissolved"]
    assert dissolved["by"] == "published rate"
    assert dissolved["rate"]["um_per_s"] == pytest.approx(microinch_per_s * 0.0254, abs=6e-5)
    assert dissolved["thickness_um"] == pytest.approx(0.4 * microinch_per_s * 0.0254, rel=2e-3)
    assert "1969" in dissolved["rate"]["reference"]["text"]
    assert dissolved["used_up"] is None
    assert found["left_out_wt"].keys() | found["composition_wt"].keys() == {metal, "Sn", "Pb"}


def test_no_more_dissolves_than_there_is(ask):
    thin = dissolve(ask, RATED | {"metal": "Au", "thickness_um": 0.05})["dissolved"]
    assert (thin["thickness_um"], thin["used_up"]) == (0.05, True)
    thick = dissolve(ask, RATED | {"metal": "Au", "thickness_um": 5})["dissolved"]
    assert thick["thickness_um"] == pytest.approx(0.4 * 2.9947)
    assert thick["used_up"] is False
    by_wt = RATED | {"alloy": {"composition_wt": {"Sn": 60.4, "Pb": 39.6}}}
    assert dissolve(ask, by_wt)["dissolved"]["by"] == "published rate"


@pytest.mark.parametrize(
    ("change", "field"),
    [
        ({"temperature_c": 240}, "temperature_c"),
        ({"temperature_c": 231.4}, "temperature_c"),
        ({"temperature_c": None}, "temperature_c"),
        ({"alloy": {"designation": "Sn63Pb37"}}, "alloy"),
        ({"alloy": {"designation": "SAC305"}}, "alloy"),
        ({"metal": "Ni"}, "metal"),
        ({"metal": "Zn"}, "metal"),
        ({"area_mm2": None}, "area_mm2"),
        ({"time_above_melting_s": 0}, "time_above_melting_s"),
        ({"time_above_melting_s": 1e9}, "time_above_melting_s"),
    ],
)
def test_no_law_is_made_up(ask, change, field):
    answer = ask("POST", "/v1/dissolution", json=RATED | change)
    assert answer.status_code == 422
    assert answer.json()["errors"][0]["field"] == field
    if field in ("alloy", "metal"):
        assert "no law is made up" in answer.json()["errors"][0]["remedy"]


@pytest.mark.parametrize(
    ("change", "field"),
    [
        ({"solder_mass_g": None}, "solder_mass_g"),
        ({"solder_volume_mm3": 1}, "solder_volume_mm3"),
        ({"solder_mass_g": -1}, "solder_mass_g"),
        ({"solder_mass_g": 1e7}, "solder_mass_g"),
        ({"metal": "Xx"}, "metal"),
        ({"metal": ""}, "metal"),
        ({"metal": "Silver"}, "metal"),
        ({"metal": "Fe"}, "metal"),
        ({"metal": "Al"}, "metal"),
        ({"thickness_um": None}, "thickness_um"),
        ({"thickness_um": 0}, "thickness_um"),
        ({"area_mm2": None}, "area_mm2"),
        ({"area_mm2": "12"}, "area_mm2"),
        ({"mass_g": 1}, "thickness_um"),
        ({"thickness_um": 1e-9}, "metal"),
        ({"temperature_c": 5000}, "temperature_c"),
        ({"alloy": {"composition_wt": {"Fe": 100}}}, "metal"),
        ({"alloy": {"composition_wt": {"Sn": 90}}}, "alloy.composition_wt"),
        ({"colour": "red"}, "colour"),
    ],
)
def test_what_is_wrong_is_named(ask, change, field):
    answer = ask("POST", "/v1/dissolution", json=SILVER | change)
    assert answer.status_code == 422
    assert answer.json()["errors"][0]["field"] == field
    assert answer.json()["errors"][0]["detail"]


def test_the_state_at_a_temperature_is_answered_besides(ask):
    found = dissolve(ask, SILVER | {"temperature_c": 221.5})
    single = ask(
        "POST",
        "/v1/equilibrium",
        json={"alloy": {"composition_wt": found["composition_wt"]}, "temperature_c": 221.5},
    ).json()
    assert found["at_temperature"]["liquid_mass_fraction"] == pytest.approx(single["liquid_mass_fraction"])


def test_the_same_question_gives_the_same_bytes(ask):
    assert len({ask("POST", "/v1/dissolution", json=GOLD).content for _ in range(3)}) == 1
