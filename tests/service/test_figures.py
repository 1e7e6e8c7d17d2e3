"""Pictures over HTTP: both forms, the marked point, cautions, caching, and what is refused."""

import inspect
import struct

import pytest
from fastapi.routing import APIRoute

from diagrams.files.catalog import catalog
from diagrams.questions.melting import melting_curve
from service.process.caution import caution_lines
from service.process.pictures import KEPT, _diagram_picture, diagram_picture
from service.safety import safety_for
from tests.diagrams.picture import read_svg

DIAGRAM, MELTING = "/v1/diagrams/pb-sn/figure", "/v1/melting/figure?alloy=Sn60Pb40"
POLICY = "default-src 'none'; style-src 'unsafe-inline'; sandbox"


def said(answer):
    assert answer.status_code == 200, answer.text
    assert answer.headers["content-type"] == "image/svg+xml"
    return " ".join(text.words for text in read_svg(answer.content)[1])


@pytest.mark.parametrize(
    ("address", "subject"), [(DIAGRAM + "?", "diagram=pb-sn"), (MELTING + "&", "alloy=Sn60Pb40")]
)
def test_png_is_the_default_and_svg_is_offered(ask, address, subject):
    plain, png, svg = (ask("GET", address + more) for more in ("", "format=png", "format=svg"))
    assert plain.content == png.content
    assert png.headers["content-type"] == "image/png"
    assert png.content.startswith(b"\x89PNG\r\n\x1a\n")
    assert min(struct.unpack(">II", png.content[16:24])) > 800
    assert "Local rules and licensed practice decide." in said(svg)
    for answer in (png, svg):
        assert answer.headers["content-security-policy"] == POLICY
        assert answer.headers["link"] == f'</v1/safety?{subject}>; rel="help"'
        assert answer.headers["x-content-type-options"] == "nosniff"


@pytest.mark.parametrize("address", [DIAGRAM + "?second_wt=40&temperature_c=200", MELTING])
def test_pictures_have_strong_etags_and_are_not_sent_twice(ask, address):
    first = ask("GET", address)
    etag = first.headers["etag"]
    assert etag.startswith('"')
    again = ask("GET", address, headers={"If-None-Match": etag})
    assert (again.status_code, again.content) == (304, b"")
    assert ask("GET", address).headers["etag"] == etag
    head = ask("HEAD", address)
    assert (head.status_code, head.content, head.headers["etag"]) == (200, b"", etag)


@pytest.mark.parametrize("diagram", ["pb-sn", "bi-pb", "in-pb", "ag-cu"])
def test_cautions_follow_the_metals(ask, diagram):
    words = said(ask("GET", f"/v1/diagrams/{diagram}/figure?format=svg"))
    assert ("Lead harms nerves, kidneys, blood and reproduction" in words) is ("pb" in diagram)
    assert "Extract fume at the joint" in words


def test_the_caution_tells_the_first_sentence_of_every_note_of_the_process():
    for process in ("solder", "braze"):
        told = caution_lines(["Ag", "Cu", "Pb"], process)[1]
        for note in safety_for(["Ag", "Cu", "Pb"], process).notes:
            assert note.text.split(". ")[0].rstrip(".") in told
    either = caution_lines(["Sn"])[1]
    assert "osin" not in either
    assert "Flux, furnace gas and torch bring hazards of their own" in either


def test_the_marked_point_agrees_with_the_answer_in_numbers(ask):
    answer = ask("POST", "/v1/equilibrium", json={
        "alloy": {"composition_wt": {"Pb": 60, "Sn": 40}}, "temperature_c": 200,
    })  # fmt: skip
    words = said(ask("GET", DIAGRAM + "?format=svg&second_wt=40&temperature_c=200"))
    assert f"{100 * answer.json()['liquid_mass_fraction']:.1f} % of the mass is liquid" in words
    for phase in answer.json()["phases"]:
        assert f"{phase['name']}: {100 * phase['mass_fraction']:.1f} % of the mass" in words
        assert f"{phase['composition_wt']['Sn']:.2f} wt% Sn" in words


def test_the_melting_picture_agrees_with_the_diagram(ask):
    curve = melting_curve(catalog().get("ag-cu"), 40.0)
    words = said(ask("GET", "/v1/melting/figure?alloy=Ag60Cu&format=svg&target_liquid_fraction=0.9"))
    assert f"solidus {curve.solidus_c:.1f} °C" in words
    assert f"liquidus {curve.liquidus_c:.1f} °C" in words
    assert f"90 % liquid from {curve.stays_above(0.9):.1f} °C" in words
    assert "hydrogen burns" in words.lower()  # silver-copper is brazed
    assert "over the tolerance" in said(ask("GET", MELTING + "&format=svg"))


@pytest.mark.parametrize(
    ("address", "status", "field"),
    [
        (DIAGRAM + "?second_wt=40", 422, "temperature_c"),
        (DIAGRAM + "?temperature_c=200", 422, "second_wt"),
        (DIAGRAM + "?second_wt=101&temperature_c=200", 422, "second_wt"),
        (DIAGRAM + "?second_wt=-1&temperature_c=200", 422, "second_wt"),
        (DIAGRAM + "?second_wt=40&temperature_c=2000", 422, "temperature_c"),
        (DIAGRAM + "?second_wt=nan&temperature_c=200", 422, "second_wt"),
        (DIAGRAM + "?second_wt=much&temperature_c=200", 422, "second_wt"),
        (DIAGRAM + "?format=gif", 422, "format"),
        (DIAGRAM + "?size=3", 422, "size"),
        ("/v1/diagrams/pb-xx/figure", 404, "id"),
        ("/v1/melting/figure", 422, "alloy"),
        ("/v1/melting/figure?alloy=Unobtainium", 422, "alloy"),
        ("/v1/melting/figure?alloy=Ag50Pd50", 422, "alloy"),
        (MELTING + "&target_liquid_fraction=0", 422, "target_liquid_fraction"),
        (MELTING + "&target_liquid_fraction=1.5", 422, "target_liquid_fraction"),
    ],
)
def test_what_cannot_be_drawn_is_named(ask, address, status, field):
    answer = ask("GET", address)
    assert answer.status_code == status, answer.text
    assert answer.headers["content-type"] == "application/problem+json"
    assert field in [error["field"] for error in answer.json()["errors"]]
    assert answer.json()["safety"]["notes"]


def test_pictures_are_drawn_off_the_event_loop_and_described(app):
    routes = [route for route in app.routes if isinstance(route, APIRoute) and "figure" in route.path]
    assert len(routes) >= 2
    for route in routes:
        assert not inspect.iscoroutinefunction(route.endpoint)
        (operation,) = app.openapi()["paths"][route.path].values()
        described = operation["responses"]["200"]["content"]
        assert set(described) == {"image/png", "image/svg+xml"}


def test_pictures_are_kept_but_not_without_end():
    diagram = catalog().get("pb-sn")
    first = diagram_picture(diagram, None, None, "svg")
    assert diagram_picture(diagram, None, None, "svg") is first
    assert diagram_picture(diagram, -0.0, 200.0, "svg") is diagram_picture(diagram, 0.0, 200.0, "svg")
    assert _diagram_picture.cache_info().maxsize == KEPT <= 100
