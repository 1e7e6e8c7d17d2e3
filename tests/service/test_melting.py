"""Melting range and curve: against trade values, the lever rule by hand, and all alloys in tolerance."""

from itertools import pairwise

import numpy as np
import pytest


def melt(ask, alloy, **more):
    answer = ask("POST", "/v1/melting", json={"alloy": alloy} | more)
    assert answer.status_code == 200, answer.text
    return answer.json()


# Trade values in whole degrees, from memory of the standards and handbooks; the diagrams are assessed apart.
@pytest.mark.parametrize(
    ("alloy", "solidus_c", "liquidus_c", "within"),
    [
        ({"designation": "Sn63Pb37"}, 183, 183, 1.5),
        ({"designation": "Sn60Pb40"}, 183, 190, 2),
        ({"designation": "Sn50Pb50"}, 183, 215, 3),
        ({"designation": "Bi58Sn42"}, 138.5, 139, 4),
        ({"designation": "Sn96.5Ag3.5"}, 221, 221, 2),
        ({"designation": "BAg-8"}, 779, 779, 3),
        ({"composition_wt": {"Sn": 100}}, 231.93, 231.93, 0.05),
        ({"composition_wt": {"Ag": 100}}, 961.78, 961.78, 0.05),
    ],
)
def test_melting_ranges_are_those_of_the_trade(ask, alloy, solidus_c, liquidus_c, within):
    found = melt(ask, alloy)
    assert found["solidus_c"]["nominal"] == pytest.approx(solidus_c, abs=within)
    assert found["liquidus_c"]["nominal"] == pytest.approx(liquidus_c, abs=within)


@pytest.mark.parametrize(
    ("diagram", "wt"), [("pb-sn", 30.0), ("ag-cu", 45.0), ("bi-sn", 20.0), ("cu-zn", 40.5), ("al-si", 20.0)]
)
def test_the_liquid_fraction_is_that_of_the_lever_rule(ask, draw, diagram, wt):
    drawing = draw(diagram)
    first, second = drawing.elements
    low, high = drawing.ranges[1]
    temperatures_c = np.random.default_rng(2).uniform(low, high, 60).round(3).tolist()
    found = melt(ask, {"composition_wt": {first: 100 - wt, second: wt}}, temperatures_c=temperatures_c)
    assert [point["temperature_c"] for point in found["at_temperatures"]] == temperatures_c
    for point in found["at_temperatures"]:
        by_hand = drawing.liquid(wt, point["temperature_c"])
        assert point["liquid_mass_fraction"] == pytest.approx(by_hand, abs=1e-9)
        assert point in found["curve"]


def test_the_curve_has_every_kink_in_it(ask, draw):
    drawing = draw("pb-sn")
    curve = [tuple(p.values()) for p in melt(ask, {"composition_wt": {"Pb": 70, "Sn": 30}})["curve"]]
    assert curve == sorted(curve)
    assert (curve[0], curve[-1]) == ((drawing.ranges[1][0], 0), (drawing.ranges[1][1], 1))
    kinks = [c for c, _ in curve]
    for _, region in drawing.regions:
        if region["field"] == "L + (Pb)":
            ring = region["geometry"]["coordinates"][0]
            inside = [c for _, c in ring if kinks[1] < c < kinks[-2]]
            assert inside
            assert all(min(abs(c - kink) for kink in kinks) < 1e-9 for c in inside)
    for (c0, f0), (c1, f1) in pairwise(curve):
        assert f1 >= f0
        if c1 > c0:
            between = drawing.liquid(30, 0.5 * (c0 + c1))
            assert min(f0, f1) - 1e-9 <= between <= max(f0, f1) + 1e-9


def test_a_eutectic_shows_as_two_points_at_one_temperature(ask):
    found = melt(ask, {"composition_wt": {"Pb": 60, "Sn": 40}})
    solidus_c = found["solidus_c"]["nominal"]
    at_once = [p["liquid_mass_fraction"] for p in found["curve"] if p["temperature_c"] == solidus_c]
    assert len(at_once) == 2
    assert at_once[0] == 0
    assert at_once[1] > 0.4
    again = melt(ask, {"composition_wt": {"Pb": 60, "Sn": 40}}, temperatures_c=[solidus_c])
    assert again["at_temperatures"][0]["liquid_mass_fraction"] == at_once[1]
    assert again["curve"] == found["curve"]


@pytest.mark.parametrize(
    ("first", "second", "wt", "tolerance"),
    [
        ("Pb", "Sn", 63, 0.5),
        ("Pb", "Sn", 62, 2),
        ("Ag", "Cu", 28, 1),
        ("Al", "Si", 12, 1),
        ("Pb", "Sn", 15, 3),
    ],
)
def test_no_alloy_in_tolerance_melts_outside_the_extremes(ask, first, second, wt, tolerance):
    alloy = {"composition_wt": {first: 100 - wt, second: wt}}
    found = melt(ask, alloy | {"tolerance_wt": {second: tolerance}})
    for name in ("solidus_c", "liquidus_c"):
        span = found[name]
        seen = []
        for other in np.linspace(wt - tolerance, wt + tolerance, 41):
            one = melt(ask, {"composition_wt": {first: 100 - other, second: other}})[name]
            assert one["lowest"] == one["nominal"] == one["highest"]
            seen.append(one["nominal"])
        assert span["lowest"] - 1e-9 <= min(seen)
        assert span["highest"] + 1e-9 >= max(seen)
        assert min(seen) - span["lowest"] < 0.7  # reached, as near as 41 alloys can tell
        assert span["highest"] - max(seen) < 0.7
        assert span["lowest"] <= span["nominal"] <= span["highest"]


def test_tolerance_of_either_element_is_the_same(ask):
    spans = [
        melt(ask, {"composition_wt": {"Sn": 60, "Pb": 40}, "tolerance_wt": {el: 0.5}})["liquidus_c"]
        for el in ("Sn", "Pb")
    ]
    assert spans[0] == spans[1]
    assert spans[0] == melt(ask, {"designation": "Sn60Pb40", "tolerance_wt": {"Sn": 0.5}})["liquidus_c"]


def test_the_extremes_are_those_found_by_hand(ask, draw):
    drawing = draw("pb-sn")
    found = melt(ask, {"composition_wt": {"Pb": 75, "Sn": 25}, "tolerance_wt": {"Sn": 1}})["liquidus_c"]
    by_hand = [drawing.reaches(wt, 1 - 1e-12) for wt in (24, 25, 26)]
    assert [found["highest"], found["nominal"], found["lowest"]] == pytest.approx(by_hand, abs=1e-6)


def test_the_standard_stands_beside_it(ask):
    found = melt(ask, {"designation": "Sn60Pb40"})
    filler = ask("GET", "/v1/fillers/Sn60Pb40").json()
    standard = found["standard"]
    for name in ("solidus", "liquidus"):
        printed = filler[f"{name}_c"]
        assert standard[f"{name}_c"] == printed
        assert standard[f"{name}_difference_c"] == found[f"{name}_c"]["nominal"] - printed
    assert (standard["edition"], standard["reference"]) == (filler["edition"], filler["reference"])
    assert not standard["single_melting_value"]
    single = melt(ask, {"designation": "Sn63Pb37"})["standard"]
    assert single["single_melting_value"]
    assert "one melting temperature" in single["note"]
    assert melt(ask, {"composition_wt": {"Sn": 63, "Pb": 37}})["standard"] is None


def test_the_address_line_gives_the_same_answer(ask):
    for text, alloy in (
        ("Sn63Pb37", {"designation": "Sn63Pb37"}),
        ("Sn63.5Pb", {"composition_wt": {"Sn": 63.5, "Pb": 36.5}}),
        ("CuP 182", {"designation": "cup182"}),
    ):
        got = ask("GET", "/v1/melting", params={"alloy": text})
        posted = ask("POST", "/v1/melting", json={"alloy": alloy})
        assert got.status_code == 200
        assert got.content == posted.content
        tag = got.headers["etag"]
        again = ask("GET", "/v1/melting", params={"alloy": text}, headers={"If-None-Match": tag})
        assert (again.status_code, again.content) == (304, b"")


@pytest.mark.parametrize(
    ("tolerance", "tolerance_wt"),
    [(None, None), ("Sn:0.5", {"Sn": 0.5}), ("Pb:1,Sn:0.5", {"Pb": 1, "Sn": 0.5})],
)
@pytest.mark.parametrize("temperatures_c", [[], [185, 183.5, 200]])
def test_the_address_line_takes_a_tolerance_and_temperatures(ask, tolerance, tolerance_wt, temperatures_c):
    address = {"alloy": "Sn60Pb40"}
    if tolerance:
        address["tolerance_wt"] = tolerance
    if temperatures_c:
        address["temperatures_c"] = ",".join(map(str, temperatures_c))
    alloy = {"designation": "Sn60Pb40", "tolerance_wt": tolerance_wt}
    posted = ask("POST", "/v1/melting", json={"alloy": alloy, "temperatures_c": temperatures_c})
    got = ask("GET", "/v1/melting", params=address)
    assert (got.status_code, got.content) == (200, posted.content)
    limits = {"Pb": {"lowest": 39, "highest": 41}, "Sn": {"lowest": 59.5, "highest": 60.5}}
    if tolerance_wt:
        assert got.json()["alloy"]["limits_wt"].items() >= {el: limits[el] for el in tolerance_wt}.items()


@pytest.mark.parametrize(
    ("more", "field"),
    [
        ({"tolerance_wt": "0.5"}, "tolerance_wt"),
        ({"tolerance_wt": "Sn=0.5"}, "tolerance_wt"),
        ({"tolerance_wt": "Sn:0.5,Sn:0.6"}, "tolerance_wt"),
        ({"tolerance_wt": "Sn:0.5,"}, "tolerance_wt"),
        ({"tolerance_wt": "Sn:+0.5"}, "tolerance_wt.Sn"),
        ({"tolerance_wt": "Sn:1e999"}, "tolerance_wt.Sn"),
        ({"tolerance_wt": "Sn:-1"}, "tolerance_wt.Sn"),
        ({"tolerance_wt": "Ag:0.5"}, "tolerance_wt.Ag"),
        ({"temperatures_c": "185,hot"}, "temperatures_c.1"),
        ({"temperatures_c": "185, 200"}, "temperatures_c.1"),
        ({"temperatures_c": "185,,200"}, "temperatures_c.1"),
        ({"temperatures_c": "185,200,500"}, "temperatures_c.2"),
        ({"temperatures_c": "185,nan"}, "temperatures_c.1"),
        ({"temperatures_c": ""}, "temperatures_c"),
    ],
)
def test_what_is_wrong_with_a_list_in_the_address_is_named(ask, more, field):
    answer = ask("GET", "/v1/melting", params={"alloy": "Sn60Pb40"} | more)
    assert answer.status_code == 422
    (error,) = answer.json()["errors"]
    assert (error["field"], error["parameter"]) == (field, field.partition(".")[0])
    assert error["remedy"]


@pytest.mark.parametrize(
    ("alloy", "more", "field"),
    [
        ({"designation": "Sn63Pb37"}, {"temperatures_c": [190, 500]}, "temperatures_c.1"),
        ({"designation": "Sn63Pb37"}, {"temperatures_c": [190, "200"]}, "temperatures_c.1"),
        ({"designation": "Sn63Pb37"}, {"temperatures_c": [190.0] * 10_001}, "temperatures_c"),
        ({"composition_wt": {"Cu": 39.5, "Sn": 60.5}, "tolerance_wt": {"Cu": 1}}, {}, "alloy.tolerance_wt"),
        ({"composition_wt": {"Sn": 63, "Pb": 37}, "tolerance_wt": {"Sn": -1}}, {}, "alloy.tolerance_wt.Sn"),
        ({"composition_wt": {"Fe": 90, "C": 10}}, {}, "alloy.composition_wt"),
        ({"designation": "BNi-2"}, {"temperatures_c": [1000, -274, 9]}, "temperatures_c.1"),
        ({"designation": "SAC305"}, {"temperatures_c": [220, 230, 9000]}, "temperatures_c.2"),
    ],
)
def test_what_is_wrong_is_named(ask, alloy, more, field):
    answer = ask("POST", "/v1/melting", json={"alloy": alloy} | more)
    assert answer.status_code == 422
    assert answer.json()["errors"][0]["field"] == field


def test_many_temperatures_are_answered(ask):
    found = melt(ask, {"designation": "Sn63Pb37"}, temperatures_c=np.linspace(25, 420, 10_000).tolist())
    fractions = [point["liquid_mass_fraction"] for point in found["at_temperatures"]]
    assert len(fractions) == 10_000
    assert fractions == sorted(fractions)
