"""The published description: headings in the order of the work, errors as they really come."""

from typing import Any

from service.schemas.base import Safety

SUMMARY = "Temperature windows of soldered and brazed joints, from the filler's phase diagram."

DESCRIPTION = """\
Ask how hot a joint must get and how hot it may get. The answers come from the phase diagram of the filler:
where it begins to melt, where it is all liquid, and how much of it is liquid in between.

- **Temperatures are °C**, amounts are mass percent unless a name says otherwise.
- Write an alloy as a designation (`Sn63Pb37`, `BAg-7`) or as symbols with mass percent
  (`Ag3Cu0.5Sn`, where the tin takes the balance).
- Outside the range of the data you get an answer that says so, never a guess.
- Every answer carries **safety**; it replaces neither local rules nor licensed practice.
"""

TAGS = [
    {"name": "Start here", "description": "One call that shows what this is good for."},
    {"name": "Diagrams", "description": "The stored phase diagrams, as numbers and as pictures."},
    {
        "name": "Melting",
        "description": "What is liquid at a temperature; where an alloy begins and ends to melt.",
    },
    {"name": "Window", "description": "Lowest and highest peak temperature for a joint, and what sets them."},
    {"name": "Step soldering", "description": "Several joints of one assembly, one heating after the other."},
    {
        "name": "Checking runs",
        "description": "Recorded temperature profiles against the window and further limits.",
    },
    {"name": "Baths", "description": "Solder baths and pots: limits, drift, what to draw off."},
    {
        "name": "Mixing",
        "description": "What becomes of a joint when alloys, finishes and base metals melt into each other.",
    },
    {
        "name": "Fillers and safety",
        "description": "Standard filler metals with their ranges, and what to mind.",
    },
    {"name": "Running the service", "description": "For whoever runs it: alive, ready, which version."},
]

_PROBLEM = {"$ref": "#/components/schemas/Problem"}
_METHODS = ("get", "put", "post", "delete", "patch")


def describe_errors(
    schema: dict[str, Any], problem_schemas: dict[str, Any], safety: Safety
) -> dict[str, Any]:
    """Put problem+json in place of the framework's own error shape and state the safety text once.

    `problem_schemas` are the JSON schemas of Problem and what it refers to, by name.
    """
    schemas = schema.setdefault("components", {}).setdefault("schemas", {})
    for unused in ("HTTPValidationError", "ValidationError"):
        schemas.pop(unused, None)
    schemas.update({name: value for name, value in problem_schemas.items() if name not in schemas})
    for path in schema["paths"].values():
        for method in _METHODS:
            if method in path:
                _describe_operation(path[method])
    schema["x-safety"] = safety.model_dump()
    schemas_sorted = {name: schemas[name] for name in sorted(schemas)}
    schema["components"]["schemas"] = schemas_sorted
    return schema


def _describe_operation(operation: dict[str, Any]) -> None:
    for parameter in operation.get("parameters", ()):
        _describe_parameter(parameter)
    responses = operation["responses"]
    responses.pop("422", None)
    if operation.get("parameters") or operation.get("requestBody"):
        responses["422"] = _response("A value is missing, unknown, of the wrong kind, or outside the data.")
    responses["default"] = _response("Any other error, in the same form; `code` says which.")
    for response in responses.values():
        response.setdefault("headers", {})["Link"] = {
            "description": "Where the cautions are, with the alloy or diagram if a GET names a valid one: "
            '`</v1/safety?alloy=Sn63Pb37>; rel="help"`.',
            "schema": {"type": "string"},
        }


def _describe_parameter(parameter: dict[str, Any]) -> None:
    """State what an address line can really hold: never null; the first example is there to be tried."""
    schema = parameter["schema"]
    kinds = [kind for kind in schema.get("anyOf", ()) if kind != {"type": "null"}]
    if len(kinds) == 1:
        rest = {name: value for name, value in schema.items() if name not in ("anyOf", "examples")}
        parameter["schema"] = kinds[0] | rest
    if examples := schema.get("examples") or [e for kind in kinds for e in kind.get("examples", ())]:
        parameter["example"] = examples[0]


def _response(description: str) -> dict[str, Any]:
    return {"description": description, "content": {"application/problem+json": {"schema": _PROBLEM}}}
