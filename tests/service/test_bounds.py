"""The biggest questions allowed and those just too big: all are answered, and bad ones cost no more.

Work is counted by what it leaves behind: errors found, errors told, bytes sent.
"""

import json
import re

import pytest

from service.problems import MOST_ERRORS
from service.schemas.alloy import MOST_ELEMENTS
from service.schemas.equilibrium import MOST_POINTS
from service.schemas.melting import MOST_TEMPERATURES
from service.schemas.mixtures import MOST_PARTS
from service.schemas.window import MOST_JOINTS, MOST_LIMITS

JSON = {"Content-Type": "application/json"}
SNPB = {"designation": "Sn63Pb37"}
WINDOW = {"alloy": SNPB, "target_liquid_fraction": 1}
MOST_BYTES = 16 * 1024 * 1024


def post(ask, path, body):
    content = body if isinstance(body, bytes) else json.dumps(body).encode()
    return ask("POST", path, content=content, headers=JSON)


def found(answer):
    """How many errors were built; the number told is bounded, and so is the answer."""
    assert answer.status_code == 422, answer.text[:500]
    problem = answer.json()
    assert problem["errors"]
    assert len(problem["errors"]) <= MOST_ERRORS
    assert len(answer.content) < 50_000
    if counted := re.match(r"(\d+) fields are not right", problem["detail"]):
        return int(counted[1])
    return len(problem["errors"])


def limits(count):
    return [{"name": f"part {k}", "limit_c": 300} for k in range(count)]


def joints(count):
    return [{"name": f"joint {k}", "alloy": {"composition_wt": {"Sn": 100}}} for k in range(count)]


def parts(count):
    return [{"alloy": SNPB, "mass_g": 1} for _ in range(count)]


@pytest.mark.parametrize(
    ("path", "biggest", "too_big", "field"),
    [
        (
            "/v1/equilibria",
            {"diagram": "ag-cu", "second_wt": [28.0] * MOST_POINTS, "temperature_c": [800.0] * MOST_POINTS},
            {"diagram": "ag-cu", "second_wt": [28.0] * (MOST_POINTS + 1), "temperature_c": [800.0]},
            "second_wt",
        ),
        (
            "/v1/melting",
            {"alloy": SNPB, "temperatures_c": [200.0] * MOST_TEMPERATURES},
            {"alloy": SNPB, "temperatures_c": [200.0] * (MOST_TEMPERATURES + 1)},
            "temperatures_c",
        ),
        (
            "/v1/window",
            WINDOW | {"upper_limits": limits(MOST_LIMITS), "earlier_joints": joints(MOST_JOINTS)},
            WINDOW | {"upper_limits": limits(MOST_LIMITS + 1)},
            "upper_limits",
        ),
        ("/v1/window", WINDOW, WINDOW | {"earlier_joints": joints(MOST_JOINTS + 1)}, "earlier_joints"),
        ("/v1/mixtures", {"parts": parts(MOST_PARTS)}, {"parts": parts(MOST_PARTS + 1)}, "parts"),
        (
            "/v1/melting",
            {"alloy": SNPB},
            {"alloy": {"composition_wt": {f"E{k}": 1 for k in range(MOST_ELEMENTS + 1)}}},
            "alloy.composition_wt",
        ),
    ],
    ids=["columns", "temperatures", "limits", "joints", "parts", "elements"],
)
def test_the_biggest_is_answered_and_the_next_is_refused_by_name(ask, path, biggest, too_big, field):
    assert post(ask, path, biggest).status_code == 200
    refused = post(ask, path, too_big)
    assert found(refused) == 1
    assert refused.json()["errors"][0]["field"] == field


@pytest.mark.parametrize("bad", ["x", None, True, [], {"a": 1}])
def test_columns_of_bad_values_are_read_no_further_than_the_first(ask, bad):
    count = 4_000 if isinstance(bad, dict | list) else MOST_POINTS  # a body may not hold as many
    column = [bad] * count
    body = {"diagram": "pb-sn", "second_wt": column, "temperature_c": [1.0, *column[1:]]}
    refused = post(ask, "/v1/equilibria", body)
    assert found(refused) == 2
    assert [error["field"] for error in refused.json()["errors"]] == ["second_wt.0", "temperature_c.1"]


def test_temperatures_are_read_no_further_than_the_first_bad_one(ask):
    refused = post(ask, "/v1/melting", {"alloy": SNPB, "temperatures_c": [200.0] * 50 + ["x"] * 900_000})
    assert found(refused) == 1
    assert refused.json()["errors"][0]["field"] == "temperatures_c.50"


def test_a_recording_is_read_no_further_than_its_first_bad_value(ask):
    sensors = [
        {"name": f"sensor {k}", "time_s": ["x"] * 100_000, "temperature_c": [20, *["y"] * 99_999]}
        for k in range(3)
    ]
    refused = post(ask, "/v1/profile-checks", {"alloy": SNPB, "sensors": sensors})
    assert found(refused) == 6
    fields = [error["field"] for error in refused.json()["errors"]]
    assert fields[-2:] == ["sensors.2.time_s.0", "sensors.2.temperature_c.1"]


@pytest.mark.parametrize(
    "body",
    [
        {f"k{k}": 0 for k in range(100_000)},
        WINDOW | {"upper_limits": [{f"k{j}": 0 for j in range(100)} for _ in range(2 * MOST_LIMITS)]},
        WINDOW | {"earlier_joints": [{"alloy": {f"k{j}": 0 for j in range(100)}}] * (2 * MOST_JOINTS)},
        {"parts": [{f"k{j}": [] for j in range(100)}] * 90},
        {
            "alloy": {
                form: {f"E{k}": "x" for k in range(100)} for form in ("composition_wt", "composition_at")
            }
        },
        [{}] * 100_000,
        {"alloy": [[[[]]]] * 1000},
    ],
    ids=["keys", "limits", "joints", "parts", "elements", "objects", "lists"],
)
@pytest.mark.parametrize("path", ["/v1/window", "/v1/mixtures", "/v1/melting", "/v1/dissolution"])
def test_no_body_makes_errors_without_end(ask, path, body):
    assert found(post(ask, path, body)) <= 100 * (MOST_LIMITS + MOST_JOINTS)


def test_a_body_of_the_most_bytes_is_read_and_one_more_is_not(ask):
    body = json.dumps({"alloy": SNPB, "temperature_c": 200}).encode()
    assert post(ask, "/v1/equilibrium", body + b" " * (MOST_BYTES - len(body))).status_code == 200
    refused = post(ask, "/v1/equilibrium", body + b" " * (MOST_BYTES + 1 - len(body)))
    assert (refused.status_code, refused.json()["code"]) == (413, "body-too-large")


@pytest.mark.parametrize(
    "body",
    [
        b"[" * MOST_BYTES,
        b'"' + b"\\u0050" * 2_700_000 + b'"',
        b'{"alloy": "' + b"Pb" * 8_000_000 + b'"}',
        b"1" * MOST_BYTES,
        b"{" * MOST_BYTES,
        b'{"a": 1, "a": [' + b"[]," * 4_000_000 + b"1]}",
        b"\xff" * MOST_BYTES,
        b'"\\' * 8_000_000,
    ],
    ids=["brackets", "escapes", "symbols", "digits", "objects", "doubled", "bytes", "backslashes"],
)
def test_a_large_body_that_makes_no_sense_is_refused(ask, body):
    refused = post(ask, "/v1/melting", body)
    assert refused.status_code in (400, 422)
    assert len(refused.content) < 20_000
    assert refused.json()["safety"]["notes"]
