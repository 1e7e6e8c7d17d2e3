"""The errors, asked for through an application of the real parts with routes that provoke them."""

from typing import Annotated, Literal

import pytest
from fastapi import FastAPI, Query
from pydantic import Field

import diagrams.errors
from diagrams.errors import DiagramsError, NotConverged, OutsideData, UnknownDiagram
from service.app import create_app
from service.problems import KINDS, MEDIA_TYPE
from service.routes.strict import new_router
from service.safety import safety_for
from service.schemas.base import Answer, Finite, StrictModel, within
from service.settings import Settings
from tests.conftest import asker

MEMBERS = {"type", "title", "status", "detail", "code", "errors", "request_id", "safety"}


class Alloy(StrictModel):
    composition_wt: dict[str, float] = Field(default={})
    designation: str = ""


class Question(StrictModel):
    temperature_c: float = Field(ge=-273.15)
    alloy: Alloy = Alloy()
    times_s: list[float] = Field(default=[], max_length=3)
    count: int = 0
    kind: Literal["png", "svg"] = "png"


class Reply(Answer):
    temperature_c: float


def provoking_app() -> FastAPI:
    app = create_app(Settings(max_body_bytes=20_000))
    router = new_router("Window")

    @router.post("/ask")
    async def ask_something(question: Question) -> Reply:
        if question.temperature_c > 5000:
            with within("alloy"):
                raise OutsideData("Too hot.", field="composition_wt.Sn", remedy="Ask below 5000 °C.")
        return Reply(temperature_c=question.temperature_c, safety=safety_for(()))

    @router.post("/both")
    async def both_by_body(question: Question) -> Reply:
        return Reply(temperature_c=question.temperature_c, safety=safety_for(()))

    @router.get("/both")
    async def both_by_address() -> Reply:
        return Reply(temperature_c=20, safety=safety_for(()))

    @router.get("/twin")
    async def ask_by_address(temperature_c: Annotated[Finite, Query(le=100)], fault: str = "") -> Reply:
        if fault == "converge":
            raise NotConverged("The search stopped after 200 steps.")
        if fault == "diagram":
            raise UnknownDiagram("No diagram xx-yy.", field="id", remedy="See /v1/diagrams.")
        if fault == "secret":
            raise RuntimeError("the secret is 12345")
        if fault == "nan":
            return Reply(temperature_c=float("nan"), safety=safety_for(()))
        return Reply(temperature_c=temperature_c, safety=safety_for(()))

    app.router.routes.extend(router.routes)
    return app


provoke = asker(provoking_app())


def refused(answer, status, code):
    """Check the shape every error has, and return its body."""
    assert answer.status_code == status, answer.text
    assert answer.headers["content-type"] == MEDIA_TYPE
    assert answer.headers["link"].endswith('/v1/safety>; rel="help"')
    problem = answer.json()
    assert set(problem) == MEMBERS
    assert (problem["status"], problem["code"], problem["type"]) == (status, code, f"/problems/{code}")
    assert problem["title"] == KINDS[code].title
    assert problem["request_id"] == answer.headers["x-request-id"]
    assert problem["detail"]
    assert any(note["topic"] == "fume" for note in problem["safety"]["notes"])
    return problem


def all_subclasses(base):
    return {base} | {deeper for sub in base.__subclasses__() for deeper in all_subclasses(sub)}


def test_every_error_of_the_metallurgy_has_a_status():
    codes = {error.code for error in all_subclasses(DiagramsError)} - {DiagramsError.code}
    assert len(codes) >= 8
    assert codes <= KINDS.keys()
    assert diagrams.errors.OutsideData.code in KINDS


def test_a_good_question_is_answered():
    answer = provoke("POST", "/v1/ask", json={"temperature_c": 183})
    assert answer.status_code == 200
    assert answer.json()["temperature_c"] == 183.0
    assert list(answer.json()) == ["temperature_c", "safety"]


@pytest.mark.parametrize(
    ("body", "field", "words"),
    [
        ("{}", "temperature_c", "missing"),
        ('{"temperature_c": "183"}', "temperature_c", "must be a number"),
        ('{"temperature_c": true}', "temperature_c", "must be a number"),
        ('{"temperature_c": null}', "temperature_c", "must be a number"),
        ('{"temperature_c": NaN}', "temperature_c", "finite"),
        ('{"temperature_c": 1e999}', "temperature_c", "finite"),
        ('{"temperature_c": -Infinity}', "temperature_c", "finite"),
        ('{"temperature_c": -300}', "temperature_c", "-273.15 or more"),
        ('{"temperature_c": 1%s}' % ("0" * 400), "temperature_c", "finite"),
        ('{"temperature_c": 1, "temprature": 2}', "temprature", "is no field here"),
        ('{"temperature_c": 1, "count": 1.5}', "count", "whole number"),
        ('{"temperature_c": 1, "kind": "gif"}', "kind", "choices"),
        ('{"temperature_c": 1, "times_s": [1, 2, 3, 4]}', "times_s", "too many"),
        ('{"temperature_c": 1, "times_s": [1, "2"]}', "times_s.1", "must be a number"),
        ('{"temperature_c": 1, "times_s": 7}', "times_s", "must be a list"),
        ('{"temperature_c": 1, "alloy": []}', "alloy", "must be an object"),
        (
            '{"temperature_c": 1, "alloy": {"composition_wt": {"Sn": NaN}}}',
            "alloy.composition_wt.Sn",
            "finite",
        ),
        ('{"temperature_c": 1, "alloy": {"a/b~c": 1}}', "alloy.a/b~c", "is no field here"),
        ('{"temperature_c": 1, "temperature_c": 2}', "temperature_c", "given twice"),
        ("[]", "body", "must be an object"),
        ("", "body", "missing"),
    ],
)
def test_a_bad_body_is_refused_by_field(body, field, words):
    answer = provoke("POST", "/v1/ask", content=body.encode(), headers={"Content-Type": "application/json"})
    problem = refused(answer, 422, "invalid-request")
    (error,) = problem["errors"]
    assert error["field"] == field
    assert words in error["detail"]
    assert error["remedy"]
    assert "parameter" not in error
    expected = "" if field == "body" else "/" + field.replace("a/b~c", "a~1b~0c").replace(".", "/")
    assert error["pointer"] == expected
    assert "input" not in error


def test_what_was_sent_is_not_repeated():
    answer = provoke("POST", "/v1/ask", json={"temperature_c": "my secret", "alloy": {"designation": 5}})
    assert "my secret" not in answer.text
    assert [error["field"] for error in answer.json()["errors"]] == ["temperature_c", "alloy.designation"]


def test_many_errors_are_counted_and_the_cut_is_told():
    problem = refused(provoke("POST", "/v1/ask", json={str(i): 0 for i in range(80)}), 422, "invalid-request")
    assert len(problem["errors"]) == 50
    assert "Only the first 50 of 81 are listed" in problem["detail"]


@pytest.mark.parametrize(
    "body", [b'{"temperature_c": 1,\n', b'{"temperature_c": "\xff"}', b"nonsense", rb'{"\ud800": 1}']
)
def test_an_unreadable_body_is_a_400_that_names_the_place(body):
    answer = provoke("POST", "/v1/ask", content=body, headers={"Content-Type": "application/json"})
    problem = refused(answer, 400, "unreadable-body")
    assert "at line" in problem["detail"] or "surrogate" in problem["detail"]
    assert problem["errors"][0]["pointer"] == ""


@pytest.mark.parametrize(
    "kind", [None, "text/plain", "application/x-www-form-urlencoded", "application/jsonx"]
)
def test_a_body_of_another_kind_is_a_415(kind):
    headers = {} if kind is None else {"Content-Type": kind}
    answer = provoke("POST", "/v1/ask", content=b'{"temperature_c": 1}', headers=headers)
    assert "Content-Type: application/json" in refused(answer, 415, "unsupported-media-type")["detail"]


@pytest.mark.parametrize(
    ("query", "field", "words"),
    [
        ("", "temperature_c", "missing"),
        ("temperature_c=", "temperature_c", "must be a number"),
        ("temperature_c=hot", "temperature_c", "must be a number"),
        ("temperature_c=nan", "temperature_c", "finite"),
        ("temperature_c=1e999", "temperature_c", "finite"),
        ("temperature_c=101", "temperature_c", "100.0 or less"),
        ("temperature_c=1&temperatur_c=2", "temperatur_c", "is no parameter here"),
        ("temperature_c=1&temperature_c=2", "temperature_c", "given twice"),
    ],
)
def test_a_bad_address_is_refused_by_parameter(query, field, words):
    problem = refused(provoke("GET", f"/v1/twin?{query}"), 422, "invalid-request")
    (error,) = problem["errors"]
    assert (error["field"], error["parameter"]) == (field, field)
    assert "pointer" not in error
    assert words in error["detail"]
    assert error["remedy"]


def test_errors_of_the_metallurgy_name_field_and_remedy():
    problem = refused(provoke("POST", "/v1/ask", json={"temperature_c": 6000}), 422, "outside-data")
    assert problem["detail"] == "Too hot. Ask below 5000 °C."
    assert problem["errors"] == [
        {"field": "alloy.composition_wt.Sn", "pointer": "/alloy/composition_wt/Sn", "detail": "Too hot."}
        | {"remedy": "Ask below 5000 °C."}
    ]
    found = refused(provoke("GET", "/v1/twin?temperature_c=1&fault=diagram"), 404, "unknown-diagram")
    assert found["errors"][0]["parameter"] == "id"
    found = refused(provoke("GET", "/v1/twin?temperature_c=1&fault=converge"), 422, "not-converged")
    assert found["errors"][0]["field"] == "alloy"
    assert "slightly different" in found["errors"][0]["remedy"]


@pytest.mark.parametrize("fault", ["secret", "nan"])
def test_a_fault_is_a_500_that_gives_nothing_away(fault, caplog):
    answer = provoke("GET", f"/v1/twin?temperature_c=1&fault={fault}", headers={"X-Request-ID": "case-7"})
    problem = refused(answer, 500, "internal-error")
    assert problem["request_id"] == "case-7"
    assert "12345" not in answer.text
    assert "Traceback" not in answer.text
    assert "case-7" in caplog.text  # the operator finds the whole story under the same id


def test_errors_about_lead_carry_the_notes_on_lead():
    asked = {"temperature_c": 6000, "alloy": {"composition_wt": {"Pb": 37, "Sn": 63}}}
    for body in (asked, asked | {"temperature_c": "x"}):
        notes = provoke("POST", "/v1/ask", json=body).json()["safety"]["notes"]
        assert "lead" in [note["topic"] for note in notes]


def test_nothing_here_and_wrong_method():
    refused(provoke("GET", "/nowhere"), 404, "not-found")
    refused(provoke("GET", "/livez/"), 404, "not-found")
    answer = provoke("DELETE", "/v1/safety")
    refused(answer, 405, "method-not-allowed")
    assert answer.headers["allow"] == "GET, HEAD"
    assert provoke("GET", "/v1/ask").headers["allow"] == "POST"
    assert provoke("PUT", "/v1/both").headers["allow"] == "GET, HEAD, POST"  # two routes at one address


@pytest.mark.parametrize("chunked", [False, True])
def test_a_body_too_large_is_a_413(chunked):
    async def pieces():
        for _ in range(3):
            yield b" " * 10_000

    body = pieces() if chunked else b" " * 20_001
    answer = provoke("POST", "/v1/ask", content=body, headers={"Content-Type": "application/json"})
    problem = refused(answer, 413, "body-too-large")
    assert "20000 bytes" in problem["detail"]
    assert answer.headers["connection"] == "close"


@pytest.mark.parametrize("code", sorted(KINDS))
def test_every_kind_of_problem_has_a_page(code):
    answer = provoke("GET", f"/problems/{code}")
    assert answer.status_code == 200
    assert answer.headers["content-type"].startswith("text/html")
    assert KINDS[code].title in answer.text
    assert "Before you heat anything" in answer.text


def test_unknown_problem_page_is_a_problem():
    refused(provoke("GET", "/problems/none"), 404, "not-found")
    assert all(code in provoke("GET", "/problems").text for code in KINDS)
