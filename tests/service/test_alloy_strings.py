"""Alloys as people write them: what is refused says what is wrong, and what it offers instead works."""

import json
import re

import pytest

SLIPS = [
    ("63Sn37Pb", "numbers before the elements", {"Sn": 63, "Pb": 37}),
    ("63Sn-37Pb", "numbers before the elements", {"Sn": 63, "Pb": 37}),
    ("96.5Sn3Ag0.5Cu", "numbers before the elements", {"Sn": 96.5, "Ag": 3, "Cu": 0.5}),
    ("80Au20Sn", "numbers before the elements", {"Au": 80, "Sn": 20}),
    ("Sn-37Pb", "ambiguous", {"Sn": 63, "Pb": 37}),
    ("Sn–37Pb", "ambiguous", {"Sn": 63, "Pb": 37}),
    ("Sn-3.0Ag-0.5Cu", "ambiguous", {"Sn": 96.5, "Ag": 3, "Cu": 0.5}),
    ("Sn62,5Pb37,5", "decimal comma", {"Sn": 62.5, "Pb": 37.5}),
    ("62,5 Sn / 37,5 Pb", "decimal comma", {"Sn": 62.5, "Pb": 37.5}),
    ("Sn63/Pb37", "“/”", {"Sn": 63, "Pb": 37}),
    ("Sn 63 % Pb 37 %", "“%”", {"Sn": 63, "Pb": 37}),
    ("Sn=60 Pb=40", "“=”", {"Sn": 60, "Pb": 40}),
    ("sn63pb", "spell the symbols", {"Sn": 63, "Pb": 37}),
    ("SN30PB", "spell the symbols", {"Sn": 30, "Pb": 70}),
    ("S-Sn63Pb37", "prefix", {"Sn": 63, "Pb": 37}),
    ("B-Ag72Cu-780", "prefix", {"Ag": 72, "Cu": 28}),
]


def refusal(answer):
    assert answer.status_code == 422, answer.text
    (error,) = answer.json()["errors"]
    return error["field"], error["detail"], error["remedy"]


@pytest.mark.parametrize(("text", "wrong", "meant"), SLIPS)
def test_a_slip_in_an_address_is_named_and_the_spelling_offered_works(ask, text, wrong, meant):
    field, detail, remedy = refusal(ask("GET", "/v1/melting", params={"alloy": text}))
    assert field == "alloy"
    assert wrong in detail
    offered = re.search("rite “(.+)”", remedy)[1]
    answer = ask("GET", "/v1/melting", params={"alloy": offered})
    assert answer.json()["alloy"]["composition_wt"] == pytest.approx(meant)


@pytest.mark.parametrize(("text", "wrong", "meant"), SLIPS)
def test_a_slip_in_a_body_is_named_and_what_is_offered_works(ask, text, wrong, meant):
    field, detail, remedy = refusal(ask("POST", "/v1/melting", json={"alloy": {"designation": text}}))
    assert field == "alloy.designation"
    assert wrong in detail
    if named := re.search("rite “(.+)”", remedy):
        alloy = {"designation": named[1]}
    else:
        alloy = {"composition_wt": json.loads(re.search(r"ive composition_wt (\{.+\}) in", remedy)[1])}
    answer = ask("POST", "/v1/melting", json={"alloy": alloy})
    assert answer.json()["alloy"]["composition_wt"] == pytest.approx(meant)


@pytest.mark.parametrize(
    ("text", "offered"),
    [
        ("SnPb37", {"Pb": 37, "Sn": 63}),
        ("Sn96.5Ag3.0Cu0.5", {"Sn": 96.5, "Ag": 3, "Cu": 0.5}),
        ("Ag", {"Ag": 100}),
        ("Sn63Pb37.05", {"Sn": 63, "Pb": 37.05}),
    ],
)
def test_a_composition_given_as_a_designation_is_told_where_it_belongs(ask, text, offered):
    assert ask("GET", "/v1/melting", params={"alloy": text}).status_code == 200
    field, detail, remedy = refusal(ask("POST", "/v1/melting", json={"alloy": {"designation": text}}))
    assert (field, detail) == ("alloy.designation", f"“{text}” is a composition, not a designation.")
    assert json.loads(re.search(r"\{.+\}", remedy)[0]) == offered


@pytest.mark.parametrize(
    ("text", "wrong", "remedy"),
    [
        ("Sn60Pb41", "sum to 101, not 100", "if Pb takes the balance: Sn60Pb."),
        ("Sn62Pb36Ag1", "sum to 99, not 100", "if Ag takes the balance: Sn62Pb36Ag."),
        ("Sn63", "sum to 63, not 100", "Add the element that takes the balance"),
        ("Ag3Cu0.5", "sum to 3.5, not 100", "Add the element that takes the balance"),
        ("SnPb", "leaves Sn and Pb open", "at most one element"),
        ("Sn50Hg", "no data here hold Hg", "The elements known here are Ag, Al"),
        ("Xq50Sn", "Xq is no element symbol", "Use a designation"),
        ("60/40", "names no elements", "such as Sn60Pb40"),
        ("Sn63.1234567Pb", "a number that cannot be read", "1 to 6 decimals"),
        ("SAC30", "no designation", "Near: SAC305"),
        ("63Sn", "numbers before the elements", "right after its element"),
        ("Sn63Pb37 solder", "no designation", "Near: Sn63Pb37."),
    ],
)
def test_what_has_no_one_reading_gets_the_remedy_that_fits(ask, text, wrong, remedy):
    _, detail, told = refusal(ask("GET", "/v1/melting", params={"alloy": text}))
    assert wrong in detail
    assert remedy in told


def test_no_remedy_offers_what_the_place_does_not_take(ask):
    in_body = refusal(ask("POST", "/v1/melting", json={"alloy": {"designation": "SAC30"}}))[2]
    in_address = refusal(ask("GET", "/v1/melting", params={"alloy": "SAC30"}))[2]
    in_path = ask("GET", "/v1/fillers/SAC30").json()["errors"][0]["remedy"]
    assert ("or give composition_wt" in in_body, "such as Ag3Cu0.5Sn" in in_body) == (True, False)
    assert ("composition_wt" in in_address, "such as Ag3Cu0.5Sn" in in_address) == (False, True)
    assert "composition" not in in_path
    for remedy in (in_body, in_address, in_path):
        assert "Near: SAC305" in remedy
