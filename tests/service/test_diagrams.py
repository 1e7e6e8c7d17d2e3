"""The stored diagrams as published."""

import pytest
from shapely import coverage_is_valid, unary_union
from shapely.geometry import box, shape

from diagrams.files.catalog import catalog

DIAGRAMS = list(catalog().diagrams)


def test_all_stored_diagrams_are_listed(ask):
    answer = ask("GET", "/v1/diagrams")
    assert answer.status_code == 200
    listed = answer.json()["diagrams"]
    assert [item["id"] for item in listed] == DIAGRAMS == sorted(DIAGRAMS)
    assert "pb-sn" in DIAGRAMS
    for item in listed:
        assert item["id"] == "-".join(item["elements"]).lower()
        assert item["edition"]
        assert item["sources"]
        assert all(source["text"] and source["how"] and source["confidence"] for source in item["sources"])
        for low, high in (item["temperature_range_c"], item["composition_range_wt"]):
            assert low < high


@pytest.mark.parametrize("diagram", DIAGRAMS)
def test_a_diagram_is_published_in_full(ask, diagram):
    published = ask("GET", f"/v1/diagrams/{diagram}").json()
    listed = next(d for d in ask("GET", "/v1/diagrams").json()["diagrams"] if d["id"] == diagram)
    assert {name: published[name] for name in listed} == listed
    polygons = []
    for region in published["regions"]:
        geometry = region["geometry"]
        assert geometry["type"] == "Polygon"
        (ring,) = geometry["coordinates"]
        assert ring[0] == ring[-1]
        polygon = shape(geometry)
        assert polygon.is_valid
        assert polygon.exterior.is_ccw
        assert len(region["kinds"]) == len(region["phases"]) in (1, 2)
        assert set(region["field"].split(" + ")) == set(region["phases"])
        polygons.append(polygon)
    frame = box(
        published["composition_range_wt"][0],
        published["temperature_range_c"][0],
        published["composition_range_wt"][1],
        published["temperature_range_c"][1],
    )
    assert coverage_is_valid(polygons)
    assert unary_union(polygons).symmetric_difference(frame).area < 1e-6
    low, high = published["temperature_range_c"]
    for invariant in published["invariants"]:
        assert low <= invariant["temperature_c"] <= high
        assert invariant["compositions_wt"]


def test_the_tin_lead_eutectic_stands_where_every_handbook_has_it(ask):
    invariants = ask("GET", "/v1/diagrams/pb-sn").json()["invariants"]
    eutectic = next(i for i in invariants if i["kind"] == "eutectic")
    assert eutectic["temperature_c"] == pytest.approx(183, abs=0.5)
    assert eutectic["compositions_wt"]["L"] == pytest.approx(61.9, abs=1)


def test_line_compounds_are_listed(ask):
    compounds = ask("GET", "/v1/diagrams/ag-sn").json()["compounds"]
    assert [c["second_wt"] for c in compounds] == [pytest.approx(26.84, abs=0.1)]  # Ag3Sn by molar masses
    assert all(c["from_c"] < c["to_c"] for c in compounds)


def test_an_unknown_diagram_is_told_what_there_is(ask):
    answer = ask("GET", "/v1/diagrams/sn-pb")
    assert answer.status_code == 404
    problem = answer.json()
    assert problem["code"] == "unknown-diagram"
    assert "pb-sn" in problem["errors"][0]["remedy"]
    assert "lead" in {note["topic"] for note in problem["safety"]["notes"]}


def test_a_diagram_with_lead_brings_its_cautions_and_a_steady_tag(ask):
    first = ask("GET", "/v1/diagrams/pb-sn")
    assert "lead" in {note["topic"] for note in first.json()["safety"]["notes"]}
    tag = first.headers["etag"]
    assert ask("GET", "/v1/diagrams/pb-sn").headers["etag"] == tag
    assert ask("GET", "/v1/diagrams/pb-sn", headers={"If-None-Match": tag}).status_code == 304
