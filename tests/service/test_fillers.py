"""The filler table over HTTP: every filter against the table itself, one by one."""

import pytest

from diagrams.fillers import FILLERS_EDITION, fillers


def names(ask, **conditions):
    answer = ask("GET", "/v1/fillers", params=conditions)
    assert answer.status_code == 200, answer.text
    found = answer.json()
    assert found["count"] == len(found["fillers"])
    return [filler["name"] for filler in found["fillers"]]


def test_without_conditions_all_are_listed(ask):
    assert names(ask) == [filler.name for filler in fillers()]
    answer = ask("GET", "/v1/fillers").json()
    assert answer["edition"] == FILLERS_EDITION
    assert "conformity" in answer["guidance"]


@pytest.mark.parametrize(
    ("conditions", "meets"),
    [
        ({"standard": "ISO 17672"}, lambda f: "ISO 17672" in f.designations),
        ({"class": "solder"}, lambda f: f.class_ == "solder"),
        ({"contains": "ag,Cu"}, lambda f: {"Ag", "Cu"} <= set(f.composition_wt)),
        ({"without": "Pb,Cd"}, lambda f: not {"Pb", "Cd"} & (set(f.composition_wt) | set(f.limits_wt))),
        ({"lead_free": "true"}, lambda f: "Pb" not in f.composition_wt),
        ({"lead_free": "false"}, lambda f: "Pb" in f.composition_wt),
        ({"cadmium_free": "false"}, lambda f: "Cd" in f.composition_wt),
        ({"liquidus_max_c": "200"}, lambda f: f.liquidus_c <= 200),
        ({"liquidus_min_c": "900"}, lambda f: f.liquidus_c >= 900),
        ({"solidus_min_c": "217", "class": "solder"}, lambda f: f.solidus_c >= 217 and f.class_ == "solder"),
        (
            {"brazed_at_c": "700"},
            lambda f: f.brazing_range_c and f.brazing_range_c[0] <= 700 <= f.brazing_range_c[1],
        ),
        ({"brazing_min_c": "1000"}, lambda f: f.brazing_range_c and f.brazing_range_c[0] >= 1000),
        (
            {"brazing_max_c": "800", "cadmium_free": "true"},
            lambda f: f.brazing_range_c and f.brazing_range_c[1] <= 800 and not f.cadmium_bearing,
        ),
        ({"search": "cup 18"}, lambda f: any("CuP 18" in d for d in (f.name, *f.designations.values()))),
    ],
)
def test_each_condition_chooses_what_it_says(ask, conditions, meets):
    expected = [filler.name for filler in fillers() if meets(filler)]
    assert expected
    assert len(expected) < len(fillers())
    assert names(ask, **conditions) == expected


def test_what_a_standard_allows_counts_as_held_where_it_is_barred(ask):
    with_tin = set(names(ask)) - set(names(ask, without="Sn"))
    rod = ask("GET", "/v1/fillers/RBCuZn-A").json()
    assert "Sn" not in rod["composition_wt"]
    assert rod["limits_wt"]["Sn"]["highest"] > 0
    assert "RBCuZn-A" in with_tin
    assert "RBCuZn-A" not in names(ask, contains="Sn")


def test_what_is_covered_can_be_asked_and_what_is_not_cannot(ask):
    covered, open_ = names(ask, covered="true"), names(ask, covered="false")
    assert sorted(covered + open_) == sorted(names(ask))
    assert {"Sn63Pb37", "BAg-8"} <= set(covered)
    assert "BNi-2" in open_
    for name in covered[::7]:
        found = ask("GET", "/v1/melting", params={"alloy": name}).json()
        assert found["source"]["method"] in ("polygon", "section", "minimisation"), name
    for name in open_[::7]:
        found = ask("GET", "/v1/melting", params={"alloy": name}).json()
        assert found["source"]["method"] == "standard table", name


def test_one_filler_is_found_by_any_of_its_names(ask):
    answer = ask("GET", "/v1/fillers/BAg-8")
    filler = answer.json()
    assert filler["class"] == "braze"
    assert filler["designations"] == {"AWS A5.8": "BAg-8", "ISO 17672": "Ag 272"}
    assert filler["diagram"] == "ag-cu"
    assert filler["brazing_range_c"]["lowest"] < filler["brazing_range_c"]["highest"]
    assert filler["reference"]["text"]
    assert ask("GET", "/v1/fillers/ag272").content == answer.content
    nickel = ask("GET", "/v1/fillers/b-ni 2").json()
    assert (nickel["name"], nickel["diagram"]) == ("BNi-2", None)


def test_lead_and_cadmium_bring_their_cautions(ask):
    for name, topic in (("Sn63Pb37", "lead"), ("BAg-1", "cadmium")):
        notes = ask("GET", f"/v1/fillers/{name}").json()["safety"]["notes"]
        assert any(topic in note["topic"] for note in notes), name
    free = ask("GET", "/v1/fillers", params={"lead_free": "true", "class": "solder"}).json()["safety"][
        "notes"
    ]
    assert "lead" not in {note["topic"] for note in free}


@pytest.mark.parametrize(
    ("conditions", "field"),
    [
        ({"contains": "Sn,Xx"}, "contains"),
        ({"without": "Sn,"}, "without"),
        ({"contains": "Sn", "without": "sn"}, "without"),
        ({"liquidus_min_c": "300", "liquidus_max_c": "200"}, "liquidus_min_c"),
        ({"brazing_min_c": "900", "brazing_max_c": "800"}, "brazing_min_c"),
        ({"brazed_at_c": "hot"}, "brazed_at_c"),
        ({"liquidus_max_c": "nan"}, "liquidus_max_c"),
        ({"standard": "DIN 1707"}, "standard"),
        ({"class": "glue"}, "class"),
        ({"lead_free": "perhaps"}, "lead_free"),
        ({"colour": "red"}, "colour"),
    ],
)
def test_what_is_wrong_with_a_condition_is_named(ask, conditions, field):
    answer = ask("GET", "/v1/fillers", params=conditions)
    assert answer.status_code == 422
    assert answer.json()["errors"][0]["field"] == field


def test_an_unknown_designation_is_no_address(ask):
    answer = ask("GET", "/v1/fillers/Sn62Pb38")
    assert answer.status_code == 404
    assert "Sn63Pb37" in answer.json()["errors"][0]["remedy"]
