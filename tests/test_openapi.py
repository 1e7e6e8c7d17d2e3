"""The published description: as committed, complete, and true to what the service answers.

After a change that is meant, write it anew with `python -m tests.test_openapi` and read the difference.
"""

import json
from pathlib import Path

import pytest
from fastapi.routing import APIRoute

from service.app import create_app
from service.settings import Settings

STORED = Path(__file__).with_name("openapi.json")
PROBLEM = {"application/problem+json": {"schema": {"$ref": "#/components/schemas/Problem"}}}
SCHEMA = create_app(Settings()).openapi()
OPERATIONS = [
    (method, path, operation)
    for path, methods in SCHEMA["paths"].items()
    for method, operation in methods.items()
]


def as_text(schema):
    return json.dumps(schema, ensure_ascii=False, indent=1) + "\n"


def examples():
    """Yield every example of a request body, with where it goes."""
    for method, path, operation in OPERATIONS:
        for kind, media in operation.get("requestBody", {}).get("content", {}).items():
            named = {name: example["value"] for name, example in media.get("examples", {}).items()}
            for name, value in (named or {"example": media.get("example")}).items():
                yield pytest.param(method, path, kind, value, id=f"{operation['operationId']}-{name}")


def test_the_description_is_as_committed():
    assert as_text(SCHEMA) == STORED.read_text(encoding="utf-8"), "see the head of this file"


def test_operation_ids_are_unique_and_named_after_their_functions(app):
    ids = [operation["operationId"] for _, _, operation in OPERATIONS]
    assert len(ids) == len(set(ids))
    assert all(name.isidentifier() and name == name.lower() for name in ids)
    assert not [route for route in app.routes if isinstance(route, APIRoute) and route.name == "<lambda>"]


def test_headings_are_declared_and_none_is_empty():
    declared = [tag["name"] for tag in SCHEMA["tags"]]
    used = [operation["tags"] for _, _, operation in OPERATIONS]
    assert all(len(tags) == 1 and tags[0] in declared for tags in used)


@pytest.mark.parametrize(("method", "path", "operation"), OPERATIONS)
def test_every_operation_is_described(method, path, operation):
    assert operation["summary"]
    assert len(operation["description"]) > 30
    for parameter in operation.get("parameters", []):
        assert parameter["description"], parameter["name"]


@pytest.mark.parametrize(("method", "path", "operation"), OPERATIONS)
def test_every_operation_documents_its_errors_and_cautions(method, path, operation):
    responses = operation["responses"]
    assert responses["default"]["content"] == PROBLEM
    assert ("422" in responses) is bool(operation.get("parameters") or operation.get("requestBody"))
    for status, response in responses.items():
        assert "Link" in response["headers"]
        if status in ("422", "default"):
            assert response["content"] == PROBLEM
        for kind, media in response["content"].items():
            if kind == "application/json":
                name = media["schema"]["$ref"].rpartition("/")[2]
                assert "safety" in SCHEMA["components"]["schemas"][name]["required"]


def test_every_body_has_an_example():
    without = [path for _, path, operation in OPERATIONS if "requestBody" in operation
               for media in operation["requestBody"]["content"].values()
               if not media.get("examples") and not media.get("example")]  # fmt: skip
    assert not without


@pytest.mark.parametrize(("method", "path", "kind", "value"), [*examples()])
def test_every_example_is_answered(ask, method, path, kind, value):
    if kind == "multipart/form-data":
        answer = ask(method.upper(), path, files={name: (None, text) for name, text in value.items()})
    else:
        content = value if isinstance(value, str) else json.dumps(value)
        answer = ask(method.upper(), path, content=content.encode(), headers={"Content-Type": kind})
    assert answer.status_code in (200, 201), answer.text
    if answer.headers["content-type"] == "image/png":  # says it in the picture
        assert 'rel="help"' in answer.headers["link"]
    else:
        assert answer.json()["safety"]["notes"]


@pytest.mark.parametrize(("method", "path", "operation"), OPERATIONS, ids=lambda o: str(o)[:40])
def test_what_the_page_fills_in_is_answered(ask, method, path, operation):
    """A page puts examples and defaults into the address, beside the first example of the body."""
    parameters = operation.get("parameters", [])
    filled = {p["name"]: p.get("example", p["schema"].get("default")) for p in parameters}
    in_path = {p["name"]: filled.pop(p["name"]) for p in parameters if p["in"] == "path"}
    filled = {name: value for name, value in filled.items() if value is not None}
    body = operation.get("requestBody", {}).get("content", {}).get("application/json", {}).get("examples")
    sent = {"json": next(iter(body.values()))["value"]} if body else {}
    answer = ask(method.upper(), path.format(**in_path), params=filled, **sent)
    assert answer.status_code in (200, 201), answer.text


def test_no_parameter_is_said_to_take_null():
    schemas = [p["schema"] for _, _, operation in OPERATIONS for p in operation.get("parameters", [])]
    assert schemas
    assert not [schema for schema in schemas if "null" in json.dumps(schema)]


def test_the_cautions_stand_in_the_description_too():
    assert {"notes", "regulations", "reminder"} <= SCHEMA["x-safety"].keys()
    assert "lead" in [note["topic"] for note in SCHEMA["x-safety"]["notes"]]  # the examples hold some


def test_nothing_refers_to_what_is_not_there():
    text = json.dumps(SCHEMA)
    names = SCHEMA["components"]["schemas"]
    referred = {part.split('"')[0] for part in text.split("#/components/schemas/")[1:]}
    assert referred <= names.keys()
    assert "HTTPValidationError" not in names


if __name__ == "__main__":
    STORED.write_text(as_text(SCHEMA), encoding="utf-8")
