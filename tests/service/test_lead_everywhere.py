"""Whatever speaks of lead gets the notes on lead, errors and unread bodies included."""

import gzip
import json

import pytest

JSON = {"Content-Type": "application/json"}
LEADED = {"diagram": "pb-sn", "second_wt": [60], "temperature_c": [200]}


def topics(answer):
    return {note["topic"] for note in answer.json()["safety"]["notes"]}


@pytest.mark.parametrize(
    ("path", "status"),
    [
        ("/v1/diagrams", 200),
        ("/v1/diagrams/pb-sn", 200),
        ("/v1/diagrams/pb-xx", 404),
        ("/v1/diagrams/pb-sn/figure?format=gif", 422),
        ("/v1/melting?alloy=sn40pb", 422),
        ("/v1/melting?alloy=SN40PB", 422),
        ("/v1/equilibrium?alloy=101&temperature_c=9999", 422),
        ("/v1/equilibrium?alloy=Sn63Pb37", 422),
        ("/v1/window?alloy=sn-40pb&target_liquid_fraction=1", 422),
        ("/v1/fillers/sn63pb", 404),
        ("/v1/fillers?contains=Pb&lead_free=true", 200),
        ("/v1/safety?alloy=sn%2040%20pb", 422),
        ("/v1/nowhere?alloy=Sn63Pb37", 404),
    ],
)
def test_by_address(ask, path, status):
    answer = ask("GET", path)
    assert answer.status_code == status, answer.text
    assert "lead" in topics(answer)


@pytest.mark.parametrize(
    ("change", "status"),
    [
        ({}, 200),
        ({"second_wt": [1, 2]}, 422),
        ({"second_wt": ["x"]}, 422),
        ({"diagram": "pb-zz"}, 404),
        ({"diagram": "PB-SN"}, 404),
        ({"diagram": ["pb-sn"]}, 422),
        ({"second": [3]}, 422),
    ],
)
def test_columns_of_a_leaded_diagram(ask, change, status):
    answer = ask("POST", "/v1/equilibria", json=LEADED | change)
    assert answer.status_code == status
    assert "lead" in topics(answer)


@pytest.mark.parametrize(
    ("path", "content", "headers", "status"),
    [
        ("/v1/equilibria", b'{"diagram": "pb-sn",', JSON, 400),
        ("/v1/equilibria", b'{"diagram": "pb-sn"}', {"Content-Type": "text/plain"}, 415),
        ("/v1/equilibria", json.dumps(LEADED).encode("utf-16"), JSON, 400),
        (
            "/v1/equilibria",
            gzip.compress(json.dumps(LEADED).encode()),
            JSON | {"Content-Encoding": "gzip"},
            415,
        ),
        ("/v1/equilibria", b"{}", {"Content-Type": "application/json; charset=latin-1"}, 415),
        ("/v1/equilibria", b" " * 17_000_000, JSON, 413),
        ("/v1/nowhere", json.dumps(LEADED).encode(), JSON, 404),
        ("/v1/diagrams", json.dumps(LEADED).encode(), JSON, 405),
        ("/v1/window", b'{"aloy": "Sn40Pb"}', JSON, 422),
        ("/v1/window", b'{"alloy": {"designation": "111"}}', JSON, 422),
    ],
)
def test_by_body_read_or_not(ask, path, content, headers, status):
    answer = ask("POST", path, content=content, headers=headers)
    assert answer.status_code == status, answer.text
    assert "lead" in topics(answer)


def test_what_does_not_speak_of_lead_is_not_warned_of_it(ask):
    assert "lead" not in topics(ask("GET", "/v1/melting?alloy=SAC305"))
    assert "lead" not in topics(ask("GET", "/v1/melting?alloy=SAC30"))
    assert "lead" not in topics(ask("POST", "/v1/melting", json={"alloy": {"designation": "SAC30"}}))
    assert "lead" not in topics(ask("GET", "/nowhere"))


def test_the_page_of_operations_shows_leaded_examples_and_so_the_notes_on_lead(ask):
    assert "Lead harms nerves" in ask("GET", "/docs").text
    assert "Lead harms nerves" not in ask("GET", "/").text
