"""Recordings as two parts: the question beside the table, as a form or a script sends them."""

import json

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from service.routes.profiles import EXAMPLES, PARTS_EXAMPLE

CHECK = "/v1/profile-checks"
TABLE = "time,Corner,Relay\n0,24,24\n140,161,164\n175,212,217\n190,213,215\n300,55,53\n"
QUESTION = {
    "alloy": {"designation": "Sn63Pb37"},
    "superheat_c": 15,
    "limits": {
        "rise_c_per_s": {"at_most": 3},
        "soak": {"from_c": 100, "to_c": 150, "time_s": {"at_least": 20}},
    },
    "earlier_joints": [{"name": "Lug", "alloy": {"designation": "Sn96.5Ag3.5"}}],
    "sensors": [{"name": "Relay", "on": "part", "limit_c": 230}],
}


def send(ask, question=QUESTION, table=TABLE, address=CHECK, parts=()):
    """Send both, or other `parts` in place of or beside them; None leaves one out."""
    text = question if isinstance(question, str) else json.dumps(question)
    sent = {"question": (None, text), "table": ("run.csv", table, "text/csv")} | dict(parts)
    return ask("POST", address, files={name: part for name, part in sent.items() if part is not None})


def refused(answer, field):
    assert answer.status_code == 422, answer.text
    problem = answer.json()
    assert [error["field"] for error in problem["errors"]] == [field]
    assert problem["errors"][0]["remedy"]
    assert problem["safety"]["notes"]


def test_both_parts_say_what_json_says(ask):
    rows = [[float(cell) for cell in line.split(",")] for line in TABLE.splitlines()[1:]]
    times, corner, relay = ([row[k] for row in rows] for k in range(3))
    same = QUESTION | {
        "time_s": times,
        "sensors": [
            {"name": "Corner", "temperature_c": corner},
            {"name": "Relay", "on": "part", "limit_c": 230, "temperature_c": relay},
        ],
    }
    answer = send(ask)
    assert answer.status_code == 200, answer.text
    assert answer.content == ask("POST", CHECK, json=same).content
    assert [s["on"] for s in answer.json()["sensors"]] == ["joint", "part"]
    assert {c["limit"] for c in answer.json()["sensors"][0]["limits"]} >= {
        "fastest rise",
        "soak from 100 to 150 °C",
    }


def test_as_fields_as_files_and_for_the_picture(ask):
    as_fields = send(ask, parts={"table": (None, TABLE)})
    assert as_fields.content == send(ask).content
    as_file = send(ask, parts={"question": ("q.json", json.dumps(QUESTION), "application/json")})
    assert as_file.content == send(ask).content
    picture = send(ask, address=f"{CHECK}/figure?format=svg")
    assert picture.headers["content-type"] == "image/svg+xml"
    assert b"Relay" in picture.content


def test_the_example_of_the_page_is_the_reflow_example(ask):
    answer = ask("POST", CHECK, files={name: (None, text) for name, text in PARTS_EXAMPLE.items()})
    assert answer.json()["window"] == ask("POST", CHECK, json=EXAMPLES["reflow"]["value"]).json()["window"]


@pytest.mark.parametrize(
    ("question", "table", "field"),
    [
        ({**QUESTION, "time_s": [0, 1]}, TABLE, "time_s"),
        ({**QUESTION, "sensors": [{"name": "Relay", "time_s": [1, 2]}]}, TABLE, "sensors.0.time_s"),
        ({**QUESTION, "sensors": [{"name": "relay"}]}, TABLE, "sensors.0.name"),
        ({**QUESTION, "sensors": [{"name": "Relay"}, {"name": "Relay"}]}, TABLE, "sensors.1.name"),
        ({**QUESTION, "sensors": [{"on": "part"}]}, TABLE, "sensors.0.name"),
        ({**QUESTION, "sensors": [{"name": "Relay", "colour": "red"}]}, TABLE, "sensors.1.colour"),
        ({**QUESTION, "sensors": ["Relay"]}, TABLE, "sensors.0"),
        ({**QUESTION, "sensors": 5}, TABLE, "sensors"),
        ({**QUESTION, "colour": "red"}, TABLE, "colour"),
        ({**QUESTION, "superheat_c": -1}, TABLE, "superheat_c"),
        ([QUESTION], TABLE, "question"),
        (QUESTION, "#? alloy=Sn63Pb37\n" + TABLE, "table"),
        (QUESTION, "time,a\n0,warm\n", "table"),
        (QUESTION, TABLE + "290,60,60\n", "sensors.0.time_s.5"),
        ('{"alloy": 1, "alloy": 2}', TABLE, "alloy"),
    ],
)
def test_what_is_wrong_is_named(ask, question, table, field):
    refused(send(ask, question, table), field)


@pytest.mark.parametrize(
    ("parts", "field"),
    [({"table": None}, "table"), ({"question": None}, "question"), ({"more": (None, "x")}, "more")],
)
def test_there_are_two_parts(ask, parts, field):
    refused(send(ask, parts=parts), field)


def test_doubled_and_broken_parts_are_refused(ask):
    question = (None, json.dumps(QUESTION))
    twice = [("table", ("a.csv", TABLE)), ("table", ("b.csv", TABLE)), ("question", question)]
    refused(ask("POST", CHECK, files=twice), "table")
    kind = "multipart/form-data"
    for content, label in ((b"--x\r\nnonsense", f"{kind}; boundary=x"), (b"", kind)):
        answer = ask("POST", CHECK, content=content, headers={"content-type": label})
        assert answer.status_code == 422
        assert answer.json()["errors"][0]["field"]
    latin = ("run.csv", "té,ä\n0,1\n".encode("latin-1"))
    for parts in ({"question": (None, "{"), "table": (None, TABLE)}, {"question": question, "table": latin}):
        answer = ask("POST", CHECK, files=parts)
        assert (answer.status_code, answer.json()["code"]) == (400, "unreadable-body")


def test_parameters_have_no_place_beside_them(ask):
    refused(send(ask, address=f"{CHECK}?alloy=Sn63Pb37"), "alloy")


def test_other_addresses_take_no_parts(ask):
    assert send(ask, address="/v1/window").status_code == 415


@settings(max_examples=100)
@given(
    content=st.binary(max_size=200), first=st.sampled_from([b"", b"time,a\n0,20\n", b"#? alloy=Sn63Pb37\n"])
)
def test_any_bytes_in_a_part_never_fail_us(ask, content, first):
    question = json.dumps(QUESTION).encode()
    for parts in ({"question": question, "table": first + content}, {"question": content, "table": TABLE}):
        answer = ask("POST", CHECK, files={name: ("a", part) for name, part in parts.items()})
        assert answer.status_code in (200, 400, 422), answer.text
        assert answer.json()["safety"]["notes"]
        if answer.status_code != 200:
            assert all(error["field"] and error["remedy"] for error in answer.json()["errors"])
