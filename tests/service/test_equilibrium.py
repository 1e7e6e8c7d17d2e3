"""One point: phases and amounts against the lever rule by hand; naming, errors, repeatability."""

import numpy as np
import pytest

from diagrams.elements import MOLAR_MASS
from diagrams.files.catalog import catalog
from diagrams.units import wt_to_at

DIAGRAMS = list(catalog().diagrams)
TIN_LEAD = {"alloy": {"composition_wt": {"Sn": 40, "Pb": 60}}, "temperature_c": 200}


def topics(answer):
    return {note["topic"] for note in answer.json()["safety"]["notes"]}


def wrong_field(answer):
    return answer.json()["errors"][0]["field"]


@pytest.mark.parametrize("diagram", DIAGRAMS)
def test_phases_and_amounts_are_those_of_the_lever_rule(ask, draw, diagram):
    drawing = draw(diagram)
    first, second = drawing.elements
    for wt, temperature_c in drawing.inner_points(np.random.default_rng(7), 12):
        alloy = {"composition_wt": {first: 100 - wt, second: wt}}
        answer = ask("POST", "/v1/equilibrium", json={"alloy": alloy, "temperature_c": temperature_c}).json()
        expected = drawing.phases(wt, temperature_c)
        assert {phase["name"] for phase in answer["phases"]} == set(expected)
        assert not answer["on_boundary"]
        assert answer["just_below"] is None
        for phase in answer["phases"]:
            kind, amount, end = expected[phase["name"]]
            assert phase["kind"] == kind
            assert phase["mass_fraction"] == pytest.approx(amount, abs=1e-9)
            assert phase["composition_wt"][second] == pytest.approx(end, abs=1e-9)
        liquid = drawing.liquid(wt, temperature_c)
        assert answer["liquid_mass_fraction"] == pytest.approx(liquid, abs=1e-9)


@pytest.mark.parametrize("diagram", DIAGRAMS)
def test_amounts_times_compositions_give_the_alloy_back(ask, draw, diagram):
    drawing = draw(diagram)
    for wt, temperature_c in drawing.inner_points(np.random.default_rng(11), 8, clear=0.0):
        alloy = dict(zip(drawing.elements, (100 - wt, wt), strict=True))
        question = {"alloy": {"composition_wt": alloy}, "temperature_c": temperature_c}
        phases = ask("POST", "/v1/equilibrium", json=question).json()["phases"]
        in_atoms = wt_to_at(alloy)
        assert sum(p["mass_fraction"] for p in phases) == pytest.approx(1, abs=1e-12)
        assert sum(p["mole_fraction"] for p in phases) == pytest.approx(1, abs=1e-12)
        for el in drawing.elements:
            by_mass = sum(p["mass_fraction"] * p["composition_wt"][el] for p in phases)
            by_atoms = sum(p["mole_fraction"] * p["composition_at"][el] for p in phases)
            assert by_mass == pytest.approx(alloy[el], abs=1e-9)
            assert by_atoms == pytest.approx(in_atoms[el], abs=1e-9)


def test_mole_fractions_count_atoms(ask):
    phases = ask("POST", "/v1/equilibrium", json=TIN_LEAD).json()["phases"]
    assert len(phases) == 2
    moles = [
        p["mass_fraction"] * sum(p["composition_wt"][el] / MOLAR_MASS[el] for el in ("Sn", "Pb"))
        for p in phases
    ]
    for phase, mole in zip(phases, moles, strict=True):
        assert phase["mole_fraction"] == pytest.approx(mole / sum(moles), abs=1e-12)


def test_the_ways_of_naming_an_alloy_agree(ask):
    by_mass = ask("POST", "/v1/equilibrium", json=TIN_LEAD).json()
    by_atoms = ask(
        "POST",
        "/v1/equilibrium",
        json={"alloy": {"composition_at": wt_to_at({"Sn": 40.0, "Pb": 60.0})}, "temperature_c": 200},
    ).json()
    by_name = ask(
        "POST", "/v1/equilibrium", json={"alloy": {"designation": "sn 40-pb60"}, "temperature_c": 200}
    ).json()
    for other in (by_atoms, by_name):
        assert other["field"] == by_mass["field"] == "L + (Pb)"
        assert other["liquid_mass_fraction"] == pytest.approx(by_mass["liquid_mass_fraction"], abs=1e-12)
    assert by_name["alloy"]["designation"] == "Sn40Pb60"
    assert by_name["alloy"]["limits_wt"]["Sn"]["lowest"] < 40 < by_name["alloy"]["limits_wt"]["Sn"]["highest"]
    assert by_mass["alloy"] == {
        "composition_wt": {"Pb": 60.0, "Sn": 40.0},
        "designation": None,
        "given_total_wt": 100.0,
        "limits_wt": {},
        "left_out_wt": {},
        "notes": [],
    }


def test_the_sum_as_given_is_told(ask):
    alloy = {"composition_wt": {"Sn": 40, "Pb": 60.05}}
    used = ask("POST", "/v1/equilibrium", json={"alloy": alloy, "temperature_c": 200}).json()["alloy"]
    assert used["given_total_wt"] == pytest.approx(100.05)
    assert sum(used["composition_wt"].values()) == pytest.approx(100, abs=1e-12)


def test_at_the_eutectic_both_sides_are_told(ask):
    published = ask("GET", "/v1/diagrams/pb-sn").json()
    eutectic = next(i for i in published["invariants"] if i["kind"] == "eutectic")
    assert eutectic["temperature_c"] == pytest.approx(183, abs=0.5)
    question = {"alloy": {"composition_wt": {"Sn": 40, "Pb": 60}}, "temperature_c": eutectic["temperature_c"]}
    answer = ask("POST", "/v1/equilibrium", json=question).json()
    assert answer["on_boundary"]
    assert answer["field"] == "L + (Pb)"
    assert answer["just_below"]["field"] == "(Pb) + (Sn)"
    assert answer["just_below"]["liquid_mass_fraction"] == 0
    ends = eutectic["compositions_wt"]
    by_hand = (40 - ends["(Pb)"]) / (ends["L"] - ends["(Pb)"])
    assert answer["liquid_mass_fraction"] == pytest.approx(by_hand, abs=1e-6)
    assert answer["coexisting"] == ["L", "(Pb)", "(Sn)"]
    assert "three phases coexist: L, (Pb) and (Sn)" in answer["note"]


@pytest.mark.parametrize("diagram", ["pb-sn", "cu-zn", "au-sn", "ag-sn"])
def test_at_every_invariant_its_phases_coexist_and_beside_it_none_do(ask, diagram):
    """Between the outermost phases of each reaction; a degree above or below only the field is there."""
    published = ask("GET", f"/v1/diagrams/{diagram}").json()
    first, second = published["elements"]
    tried = 0
    for invariant in published["invariants"]:
        ends = sorted(invariant["compositions_wt"].values())
        if len(ends) != 3 or ends[2] - ends[0] < 0.5:
            continue
        tried += 1
        wt = 0.3 * ends[0] + 0.7 * ends[2]
        alloy = {"composition_wt": {first: 100 - wt, second: wt}}
        at_c = invariant["temperature_c"]
        found = ask("POST", "/v1/equilibrium", json={"alloy": alloy, "temperature_c": at_c}).json()
        assert found["on_boundary"]
        assert set(found["coexisting"]) == set(invariant["compositions_wt"]), invariant
        for there_c in (at_c - 0.01, at_c + 0.01):
            beside = ask("POST", "/v1/equilibrium", json={"alloy": alloy, "temperature_c": there_c}).json()
            assert (beside["coexisting"], beside["note"], beside["just_below"]) == ([], None, None)
    assert tried


@pytest.mark.parametrize("diagram", ["pb-sn", "cu-zn", "ag-cu", "al-si"])
def test_a_melting_point_is_where_two_phases_coexist(ask, diagram):
    published = ask("GET", f"/v1/diagrams/{diagram}").json()
    first, second = published["elements"]
    melting = [i for i in published["invariants"] if len(set(i["compositions_wt"].values())) == 1]
    assert melting
    for point in melting:
        wt = point["compositions_wt"]["L"]
        alloy = {"composition_wt": {first: 100 - wt, second: wt}}
        question = {"alloy": alloy, "temperature_c": point["temperature_c"]}
        found = ask("POST", "/v1/equilibrium", json=question).json()
        assert (found["field"], found["on_boundary"]) == ("L", True)
        assert set(found["coexisting"]) == set(point["compositions_wt"])
        assert found["just_below"]["liquid_mass_fraction"] == 0
        assert "two phases coexist" in found["note"]


def test_the_source_is_named(ask):
    source = ask("POST", "/v1/equilibrium", json=TIN_LEAD).json()["source"]
    listed = ask("GET", "/v1/diagrams/pb-sn").json()
    assert source == {"diagram": "pb-sn", "edition": listed["edition"], "method": "polygon"}


def test_the_address_line_gives_the_same_answer(ask):
    question = {"alloy": {"designation": "BAg-8"}, "temperature_c": 790.5}
    posted = ask("POST", "/v1/equilibrium", json=question)
    got = ask("GET", "/v1/equilibrium", params={"alloy": "bag 8", "temperature_c": 790.5})
    assert got.status_code == 200
    assert got.content == posted.content
    assert posted.content == ask("POST", "/v1/equilibrium", json=question).content


def test_an_answer_that_is_known_is_not_sent_again(ask):
    address = "/v1/equilibrium?alloy=Sn63Pb&temperature_c=190"
    first = ask("GET", address)
    tag = first.headers["etag"]
    assert not tag.startswith("W/")
    again = ask("GET", address, headers={"If-None-Match": tag})
    assert (again.status_code, again.content) == (304, b"")
    other = ask("GET", "/v1/equilibrium?alloy=Sn63Pb&temperature_c=191", headers={"If-None-Match": tag})
    assert other.status_code == 200


@pytest.mark.parametrize(
    ("alloy", "field", "code"),
    [
        ({}, "alloy", "invalid-input"),
        (
            {"designation": "Sn63Pb37", "composition_wt": {"Sn": 63, "Pb": 37}},
            "alloy.composition_wt",
            "invalid-input",
        ),
        ({"designation": "Nothing 7"}, "alloy.designation", "unknown-alloy"),
        ({"composition_wt": {"Sn": 63, "Pb": 36}}, "alloy.composition_wt", "invalid-composition"),
        ({"composition_at": {"Sn": 63, "Xx": 37}}, "alloy.composition_at.Xx", "invalid-composition"),
        ({"composition_wt": {"Sn": 163, "Pb": -63}}, "alloy.composition_wt.Sn", "invalid-composition"),
        ({"composition_wt": {"Sn": True, "Pb": 37}}, "alloy.composition_wt.Sn", "invalid-request"),
        ({"composition_wt": {"Sn": 63, "Pb": 37}, "colour": 1}, "alloy.colour", "invalid-request"),
        (
            {"designation": "Sn63Pb37", "tolerance_wt": {"Ag": 1}},
            "alloy.tolerance_wt.Ag",
            "invalid-composition",
        ),
        ({"composition_wt": {" Sn": 63, "Pb": 37}}, "alloy.composition_wt. Sn", "invalid-composition"),
        ({"composition_wt": {"Fe": 50, "C": 50}}, "alloy.composition_wt", "not-covered"),
        ({"composition_wt": {"Cu": 60, "Sn": 40}}, "alloy.composition_wt", "outside-data"),
        ({"composition_at": {"Fe": 50, "C": 50}}, "alloy.composition_at", "not-covered"),
    ],
)
def test_what_is_wrong_with_an_alloy_is_named(ask, alloy, field, code):
    answer = ask("POST", "/v1/equilibrium", json={"alloy": alloy, "temperature_c": 200})
    assert answer.status_code == 422
    assert (answer.json()["code"], wrong_field(answer)) == (code, field)
    assert answer.json()["errors"][0]["remedy"]


@pytest.mark.parametrize(
    ("temperature_c", "field", "liquid", "phases"),
    [(970.9, "solid", 0, 0), (971, "L + solid", None, 0), (998.9, "L + solid", None, 0), (999, "L", 1, 1)],
)
def test_a_filler_outside_all_data_is_answered_by_what_its_standard_prints(
    ask, temperature_c, field, liquid, phases
):
    asked = {"alloy": {"designation": "BNi-2"}, "temperature_c": temperature_c}
    answer = ask("POST", "/v1/equilibrium", json=asked)
    found = answer.json()
    assert (found["field"], found["liquid_mass_fraction"]) == (field, liquid)
    assert len(found["phases"]) == phases
    assert all(phase["composition_wt"] == found["alloy"]["composition_wt"] for phase in found["phases"])
    assert found["source"]["method"] == "standard table"
    assert "971 °C" in found["note"]
    got = ask("GET", f"/v1/equilibrium?alloy=BNi-2&temperature_c={temperature_c}")
    assert got.content == answer.content


@pytest.mark.parametrize("temperature_c", [-300, 24.9, 5000, 1e300])
def test_outside_the_temperatures_of_the_data_nothing_is_guessed(ask, temperature_c):
    answer = ask("POST", "/v1/equilibrium", json=TIN_LEAD | {"temperature_c": temperature_c})
    assert answer.status_code == 422
    assert (answer.json()["code"], wrong_field(answer)) == ("outside-data", "temperature_c")
    assert "lead" in topics(answer)


@pytest.mark.parametrize("text", [b"NaN", b"Infinity", b"1e999", b'"200"', b"true", b"null"])
def test_a_temperature_is_a_finite_number(ask, text):
    body = b'{"alloy": {"designation": "Sn63Pb37"}, "temperature_c": ' + text + b"}"
    answer = ask("POST", "/v1/equilibrium", content=body, headers={"Content-Type": "application/json"})
    assert answer.status_code == 422
    assert wrong_field(answer) == "temperature_c"
    assert "lead" in topics(answer)


def test_cautions_follow_the_alloy_and_the_process(ask):
    soldering = topics(ask("POST", "/v1/equilibrium", json=TIN_LEAD))
    assert {"fume", "lead", "rosin flux fume"} <= soldering
    assert "fluoride and borate flux" not in soldering
    question = {"alloy": {"composition_wt": {"Ag": 60, "Cu": 40}}, "temperature_c": 790}
    brazing = topics(ask("POST", "/v1/equilibrium", json=question))
    assert "fluoride and borate flux" in brazing
    assert not {"lead", "rosin flux fume"} & brazing
