"""Nothing about an alloy is left out, cut off or put aside without a word."""

import pytest

from diagrams.fillers import fillers


def melting(ask, alloy):
    return ask("POST", "/v1/melting", json={"alloy": alloy})


def notes(ask, alloy):
    answer = melting(ask, alloy)
    assert answer.status_code == 200, answer.text
    return answer.json()["alloy"]["notes"]


def test_an_element_that_the_standard_requires_and_the_nominal_leaves_out_is_named(ask):
    required = [
        filler.name
        for filler in fillers()
        if any(low > 0 and el not in filler.composition_wt for el, (low, _) in filler.limits_wt.items())
    ]
    assert "RBCuZn-A" in required
    for name in required:
        (note,) = notes(ask, {"designation": name})
        assert name in note
    (note,) = notes(ask, {"designation": "RBCuZn-A"})
    assert "0.25 to 1 wt% Sn" in note
    used = melting(ask, {"designation": "RBCuZn-A"}).json()["alloy"]
    assert set(used["limits_wt"]) <= set(used["composition_wt"])  # only what the answer reckons with
    assert ask("GET", "/v1/equilibrium?alloy=RBCuZn-A&temperature_c=800").json()["alloy"]["notes"] == [note]
    window = ask("GET", "/v1/window?alloy=RBCuZn-A&target_liquid_fraction=1&limit_c=1000").json()
    assert [w["text"] for w in window["warnings"] if w["code"] == "alloy-note"] == [f"RBCuZn-A: {note}"]


@pytest.mark.parametrize("alloy", [{"designation": "Sn63Pb37"}, {"composition_wt": {"Sn": 60, "Pb": 40}}])
def test_where_nothing_is_amiss_nothing_is_said(ask, alloy):
    assert notes(ask, alloy) == []
    assert notes(ask, alloy | {"tolerance_wt": {"Sn": 1}}) == []


def test_a_pure_metal_with_a_tolerance_is_refused(ask):
    for alloy in ({"composition_wt": {"Sn": 100}}, {"designation": "Sn100"}):
        refused = melting(ask, alloy | {"tolerance_wt": {"Sn": 0.5}})
        assert refused.status_code == 422
        assert refused.json()["errors"][0]["field"] == "alloy.tolerance_wt"
        assert notes(ask, alloy | {"tolerance_wt": {"Sn": 0}}) == []
    refused = ask("GET", "/v1/melting?alloy=Sn100&tolerance_wt=Sn:0.5")
    assert refused.json()["errors"][0]["field"] == "tolerance_wt"
    joint = {"name": "a", "alloy": {"composition_wt": {"Sn": 100}, "tolerance_wt": {"Sn": 1}}}
    refused = ask(
        "POST",
        "/v1/window",
        json={
            "alloy": {"designation": "Bi58Sn42"},
            "target_liquid_fraction": 1,
            "earlier_joints": [joint],
        },
    )
    assert refused.json()["errors"][0]["field"] == "earlier_joints.0.alloy.tolerance_wt"


def test_copper_by_its_standard_is_said_to_be_taken_as_pure(ask):
    (note,) = notes(ask, {"designation": "BCu-1"})
    assert "99.9 to 100 wt% Cu" in note
    assert "taken as pure" in note


def test_a_tolerance_beyond_nothing_or_all_is_said_to_be_cut(ask):
    (note,) = notes(ask, {"composition_wt": {"Sn": 97, "Pb": 3}, "tolerance_wt": {"Sn": 5}})
    assert note == "The tolerance of Sn, 97 ± 5 wt%, is cut at 100 wt%."
    (note,) = notes(ask, {"composition_wt": {"Sn": 97, "Pb": 3}, "tolerance_wt": {"Pb": 4}})
    assert note == "The tolerance of Pb, 3 ± 4 wt%, is cut at 0 wt%."
    (note,) = notes(ask, {"composition_wt": {"Sn": 50, "Pb": 50}, "tolerance_wt": {"Pb": 60}})
    assert note.endswith("is cut at 0 wt% and 100 wt%.")
    assert notes(ask, {"composition_wt": {"Sn": 97, "Pb": 3}, "tolerance_wt": {"Pb": 3}}) == []


def test_a_tolerance_that_printed_values_cannot_heed_is_said_to_be_left_aside(ask):
    (note,) = notes(ask, {"designation": "BNi-2", "tolerance_wt": {"Cr": 1}})
    assert "left aside" in note
    assert notes(ask, {"designation": "BNi-2"}) == []


def test_a_tolerance_beyond_the_diagram_is_refused(ask):
    refused = melting(ask, {"composition_wt": {"Cu": 91, "P": 9}, "tolerance_wt": {"P": 8}})
    assert refused.status_code == 422
    assert refused.json()["errors"][0]["field"] == "alloy.tolerance_wt"
