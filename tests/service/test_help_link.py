"""The `Link` header of every answer leads to the cautions on what was asked about."""

import re

import pytest

from service.app import create_app
from service.settings import Settings
from tests.conftest import asker


def target(answer):
    return re.fullmatch(r'<([^<>"\s]*)>; rel="help"', answer.headers["link"])[1]


@pytest.mark.parametrize(
    ("path", "expected"),
    [
        ("/v1/melting?alloy=Sn63Pb37", "/v1/safety?alloy=Sn63Pb37"),
        ("/v1/melting?alloy=b%20ag%208", "/v1/safety?alloy=b%20ag%208"),
        ("/v1/melting/figure?format=svg&alloy=Sn63Pb37", "/v1/safety?alloy=Sn63Pb37"),
        ("/v1/diagrams/pb-sn/figure?format=svg", "/v1/safety?diagram=pb-sn"),
        ("/v1/diagrams/pb-sn", "/v1/safety?diagram=pb-sn"),
        ("/v1/fillers/CuP%20182", "/v1/safety?alloy=CuP%20182"),
        ("/v1/equilibrium?alloy=Sn63Pb37&temperature_c=9999", "/v1/safety?alloy=Sn63Pb37"),
        ("/v1/melting?alloy=Sn63Pb&alloy=SAC305", "/v1/safety"),
        ("/v1/melting?alloy=nonsense", "/v1/safety"),
        ("/v1/melting?alloy=%22%3E%3B%0d%0aX:1", "/v1/safety"),
        ("/v1/diagrams/pb-xx", "/v1/safety"),
        ("/v1/diagrams/%3E%22/figure", "/v1/safety"),
        ("/v1/fillers/%3E", "/v1/safety"),
        ("/v1/melting?alloy=" + "Sn" * 5000, "/v1/safety"),
        ("/v1/diagrams", "/v1/safety"),
        ("/docs", "/v1/safety"),
    ],
)
def test_the_link_names_what_was_asked_about_if_it_is_valid(ask, path, expected):
    answer = ask("GET", path)
    assert target(answer) == expected
    cautions = ask("GET", expected)
    assert cautions.status_code == 200
    if "pb" in expected.lower():
        assert "lead" in [note["topic"] for note in cautions.json()["safety"]["notes"]]


def test_the_link_stays_when_nothing_changed_and_without_a_body(ask):
    path = "/v1/diagrams/ag-pb/figure?format=svg"
    tag = ask("GET", path).headers["etag"]
    again = ask("GET", path, headers={"If-None-Match": tag})
    assert (again.status_code, target(again)) == (304, "/v1/safety?diagram=ag-pb")
    assert target(ask("HEAD", path)) == "/v1/safety?diagram=ag-pb"


def test_the_link_holds_behind_a_proxy():
    ask = asker(create_app(Settings(root_path="/melt")))
    assert target(ask("GET", "/melt/v1/melting?alloy=SAC305")) == "/melt/v1/safety?alloy=SAC305"
    assert target(ask("GET", "/v1/fillers/SAC305")) == "/melt/v1/safety?alloy=SAC305"
