"""Sections over HTTP: stored ones by their content, others computed and kept, pictures, what is refused."""

import pytest
import shapely

from service.routes.sections import EXAMPLES

COPPER = EXAMPLES["copper in SAC305"]["value"]
PLAIN = {
    "from_alloy": {"composition_wt": {"Sn": 63, "Pb": 37}},
    "to_alloy": {"composition_wt": {"Sn": 96.5, "Ag": 3.5}},
    "to_share_max": 10,
    "temperature_range_c": [170, 240],
}


def section(ask, body):
    answer = ask("POST", "/v1/sections", json=body)
    assert answer.status_code == 200, answer.text
    return answer.json()


def test_the_list_leads_to_sections_and_pictures(ask):
    listed = ask("GET", "/v1/sections").json()
    assert len(listed["sections"]) >= 7
    assert listed["safety"]["notes"]
    first = listed["sections"][0]
    found = ask("GET", f"/v1/sections/{first['id']}").json()
    assert {key: found[key] for key in first} == first
    assert found["source"]["method"] == "section"
    picture = ask("GET", found["figure"])
    assert picture.content.startswith(b"\x89PNG")
    assert ask("GET", found["figure"] + "?format=svg").text.startswith("<?xml")


def test_a_stored_line_is_found_by_its_content(ask):
    found = section(ask, COPPER)
    ids = {s["id"] for s in ask("GET", "/v1/sections").json()["sections"]}
    assert found["id"] in ids
    assert found["from_name"] == "SAC305"
    assert [c["liquid_mass_fraction"] for c in found["liquid_contours"]] == sorted(
        c["liquid_mass_fraction"] for c in found["liquid_contours"]
    )


def test_a_new_line_is_computed_tiles_its_frame_and_is_kept(ask):
    found = section(ask, PLAIN)
    polygons = [
        shapely.Polygon(r["geometry"]["coordinates"][0], r["geometry"]["coordinates"][1:])
        for r in found["regions"]
    ]
    assert shapely.coverage_is_valid(polygons)
    assert sum(p.area for p in polygons) == pytest.approx(10 * 70, rel=1e-9)
    assert found["temperature_range_c"] == [170, 240]
    assert ask("GET", f"/v1/sections/{found['id']}").json() == found
    assert section(ask, PLAIN) == found
    assert ask("GET", found["figure"]).status_code == 200


def test_a_range_of_many_decimals_is_kept_to_the_last(ask):
    odd = {"temperature_range_c": [171.2949998936884, 231.0000001], "to_share_max": 3.1415926535}
    found = section(ask, PLAIN | odd)
    assert found["temperature_range_c"] == odd["temperature_range_c"]
    bounds = shapely.total_bounds(
        [shapely.Polygon(r["geometry"]["coordinates"][0]) for r in found["regions"]]
    )
    assert bounds.tolist() == [0.0, 171.2949998936884, 3.1415926535, 231.0000001]


@pytest.mark.parametrize(
    ("change", "field"),
    [
        ({"to_alloy": PLAIN["from_alloy"]}, "to_alloy"),
        ({"to_alloy": {"composition_wt": {"Ni": 100}}}, None),
        ({"to_alloy": {"composition_wt": {"Xx": 100}}}, "to_alloy.composition_wt.Xx"),
        ({"from_alloy": {"designation": "Sn63Pb37", "tolerance_wt": {"Sn": 1}}}, "from_alloy.tolerance_wt"),
        ({"to_share_max": 0}, "to_share_max"),
        ({"to_share_max": 101}, "to_share_max"),
        ({"temperature_range_c": [200]}, "temperature_range_c"),
        ({"temperature_range_c": [240, 170]}, "temperature_range_c.1"),
        ({"temperature_range_c": [170, 900]}, "temperature_range_c"),
        ({"to_alloy": {"composition_wt": {"Ag": 3, "Cu": 1, "Bi": 2, "Sn": 94}}}, "to_alloy"),
    ],
)
def test_what_is_wrong_is_named(ask, change, field):
    answer = ask("POST", "/v1/sections", json=PLAIN | change)
    assert answer.status_code == 422, answer.text
    if field is not None:
        assert field in [error["field"] for error in answer.json()["errors"]], answer.json()["errors"]
    assert answer.json()["safety"]["notes"]


def test_an_unknown_id_is_not_found(ask):
    for address in ("/v1/sections/nothing", "/v1/sections/nothing/figure"):
        answer = ask("GET", address)
        assert answer.status_code == 404
        assert "POST /v1/sections" in answer.text
