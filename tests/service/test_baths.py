"""Baths over HTTP: limits as printed, drift by hand, exchange by mixing, melting as melting has it."""

import copy

import pytest

from service.routes.baths import EXAMPLES
from tests.truth import truth

WAVE = EXAMPLES["copper in a wave"]["value"]


def bath(ask, body):
    answer = ask("POST", "/v1/baths", json=body)
    assert answer.status_code == 200, answer.text
    return answer.json()


def changed(**more):
    return copy.deepcopy(WAVE) | more


def limit(found, element, side="at most"):
    return next(row for row in found["limits"] if (row["element"], row["side"]) == (element, side))


@pytest.mark.parametrize("name", EXAMPLES)
def test_examples(ask, name):
    assert bath(ask, EXAMPLES[name]["value"])["safety"]["notes"]


@pytest.mark.parametrize("row", truth("bath_limits"), ids=lambda r: f"{r['kind']} {r['element']} {r['side']}")
def test_limits_are_those_printed(ask, row):
    pot = {
        "kind": row["kind"],
        "mass_kg": 10,
        "balance": "Sn",
        "analyses": [{"day": 0, "composition_wt": {"Cu": 0.2}}],
    }
    assert limit(bath(ask, pot), row["element"], row["side"])["bound_wt"] == float(row["bound_wt"])


def test_drift_and_the_day_by_hand(ask):
    """0.12, 0.17, 0.20, 0.25 at days 0, 14, 28, 42: 0.42 per 140 days, 0.185 at day 21."""
    copper = limit(bath(ask, WAVE), "Cu")
    slope = (-21 * 0.12 - 7 * 0.17 + 7 * 0.20 + 21 * 0.25) / (2 * (21**2 + 7**2))
    assert copper["drift"]["wt_per_day"] == pytest.approx(slope, rel=1e-9)
    assert copper["meets"]["outlook"] == "will meet it"
    assert copper["meets"]["day"] == pytest.approx(21 + (0.30 - 0.185) / slope, rel=1e-9)
    assert copper["meets"]["earliest_day"] < copper["meets"]["day"] < copper["meets"]["latest_day"]
    assert copper["margin_wt"] == pytest.approx(0.05)
    total = limit(bath(ask, WAVE), "Cu + Au + Cd + Zn + Al")
    assert total["value_wt"] == pytest.approx(0.25)


def test_exchange_is_what_mixing_gives(ask):
    found = bath(ask, WAVE)
    change = found["exchange"]
    assert change["element"] == "Cu"
    assert change["share"] == pytest.approx(1 - 0.15 / 0.25)
    assert change["draw_off_kg"] == pytest.approx(change["share"] * found["mass_kg"])
    parts = [
        {"alloy": {"composition_wt": WAVE["analyses"][-1]["composition_wt"] | {"Pb": 36.92}}, "mass_g": 60},
        {"alloy": {"designation": "Sn63Pb37"}, "mass_g": 40},
    ]
    mixed = ask("POST", "/v1/mixtures", json={"parts": parts}).json()["composition_wt"]
    for element, wt in change["after_wt"].items():
        assert wt == pytest.approx(mixed[element], abs=1e-9)


def test_mass_of_a_volume(ask):
    """25 litres of Sn63Pb37 by adding the elements' volumes."""
    found = bath(ask, changed(analyses=[{"day": 0, "composition_wt": {"Sn": 63}}]))
    assert found["mass_kg"] == pytest.approx(25 * 100 / (63 / 7.287 + 37 / 11.34), rel=2e-3)


def test_melting_is_that_of_the_melting_call(ask):
    found = bath(ask, WAVE)
    last = found["melting"][-1]
    alloy = {"composition_wt": WAVE["analyses"][-1]["composition_wt"] | {"Pb": 36.92}}
    melted = ask("POST", "/v1/melting", json={"alloy": alloy}).json()
    assert last["solidus_c"] == pytest.approx(melted["solidus_c"]["nominal"], abs=1e-3)
    assert last["liquidus_c"] == pytest.approx(melted["liquidus_c"]["nominal"], abs=1e-3)
    # copper drove the liquidus up, and what swims first is the compound
    assert last["first_solid"] == "Cu6Sn5"
    assert last["sludge_c"] == last["liquidus_c"] > found["melting"][0]["liquidus_c"]


def test_elements_without_data_are_said_or_left_out_on_request(ask):
    iron = [{"day": 0, "composition_wt": {"Sn": 63, "Fe": 0.01}}]
    found = bath(ask, changed(analyses=iron))
    assert found["melting"][0]["solidus_c"] is None
    assert "Fe" in found["melting"][0]["unknown"]
    found = bath(ask, changed(analyses=iron, leave_out_traces_below_wt=0.05))
    assert found["melting"][0]["alloy"]["left_out_wt"] == {"Fe": pytest.approx(0.01)}
    assert limit(found, "Fe")["value_wt"] == pytest.approx(0.01)


def test_too_few_and_not_analysed_are_said(ask):
    found = bath(ask, changed(analyses=WAVE["analyses"][:2]))
    assert limit(found, "Cu")["meets"]["outlook"] == "too few analyses"
    assert {"too-few-analyses", "not-analysed"} <= {w["code"] for w in found["warnings"]}
    assert limit(found, "Fe")["analysed"] is False


def test_a_replacement_that_cannot_help_is_named(ask):
    dirty = {"composition_wt": {"Sn": 62.8, "Pb": 37.0, "Cu": 0.2}}
    found = bath(ask, changed(replacement=dirty))
    assert found["exchange"]["possible"] is False
    assert found["exchange"]["element"] == "Cu"


@pytest.mark.parametrize(
    ("change", "field"),
    [
        ({"kind": "zinc pot"}, "kind"),
        ({"mass_kg": 100}, "volume_l"),
        ({"volume_l": None}, "mass_kg"),
        ({"analyses": []}, "analyses"),
        ({"balance": "Xx"}, "balance"),
        ({"balance": "Sn"}, "analyses.0.composition_wt.Sn"),
        ({"balance": None}, "analyses.0.composition_wt"),
        ({"analyses": [{"day": 0, "composition_wt": {"Sn": 163}}]}, "analyses.0.composition_wt"),
        ({"analyses": [{"day": 0, "composition_wt": {"Xx": 1}}]}, "analyses.0.composition_wt.Xx"),
        ({"analyses": [*reversed(WAVE["analyses"])]}, "analyses.1.day"),
        ({"replacement": {"designation": "none"}}, "replacement.designation"),
        ({"targets_wt": {"Cu": {}}}, "targets_wt.Cu"),
        ({"targets_wt": {"Cu": {"at_least": 2, "at_most": 1}}}, "targets_wt.Cu"),
        ({"target_share": 0}, "target_share"),
    ],
)
def test_what_is_wrong_is_named(ask, change, field):
    answer = ask("POST", "/v1/baths", json=changed(**change))
    assert answer.status_code == 422, answer.text
    assert field in [error["field"] for error in answer.json()["errors"]], answer.json()["errors"]
    assert all(error["remedy"] for error in answer.json()["errors"])
