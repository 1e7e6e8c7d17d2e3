"""Every error this service answers with, on one screen, and how it is put on the wire (RFC 9457)."""

import logging
from collections.abc import Iterable, Mapping, Sequence
from typing import Any, NamedTuple

from fastapi import FastAPI
from fastapi.exceptions import RequestValidationError
from pydantic import Field
from starlette.exceptions import HTTPException
from starlette.requests import Request
from starlette.responses import Response
from starlette.routing import Match

from diagrams.errors import DiagramsError
from service.complaints import complain
from service.mentions import elements_mentioned
from service.safety import safety_for
from service.schemas.base import Answer, AnswerModel

log = logging.getLogger("meltband")
MEDIA_TYPE = "application/problem+json"
ASKED_BODY = "meltband.body"  # in the scope: the bytes of a body, whose cautions an error brings
MOST_ERRORS = 50


class Kind(NamedTuple):
    """One kind of problem: its status, its title, and what to do about it."""

    status: int
    title: str
    meaning: str


KINDS: Mapping[str, Kind] = {
    # what the metallurgy refuses (diagrams.errors)
    "invalid-input": Kind(422, "Value not usable", "A value makes no sense for this question."),
    "invalid-composition": Kind(
        422, "Composition not usable",
        "The composition describes no alloy: unknown symbols, negative amounts, or a sum not 100 ± 0.1.",
    ),
    "unknown-alloy": Kind(422, "Alloy unknown", "No table here holds this designation; give composition_wt."),
    "not-covered": Kind(422, "No data for these elements", "No stored data hold these elements together."),
    "outside-data": Kind(
        422, "Outside the data",
        "The temperature or composition lies outside the stored range; nothing is extrapolated.",
    ),
    "unknown-diagram": Kind(404, "Diagram unknown", "No diagram has this id; GET /v1/diagrams lists them."),
    "data-fault": Kind(500, "Stored data faulty", "Stored data failed their checks; the operator must act."),
    "not-converged": Kind(
        422, "No proven answer",
        "No set of phases could be proven to be the stable one; none is given rather than a doubtful one.",
    ),
    # what the service refuses
    "bad-request": Kind(400, "Bad request", "The request could not be understood."),
    "unreadable-body": Kind(400, "Body not readable", "The body is no UTF-8 JSON; the place is named."),
    "unauthorised": Kind(401, "Not logged in", "A proxy or the operator asks for a log-in."),
    "forbidden": Kind(403, "Not allowed", "This is not allowed here."),
    "not-found": Kind(404, "Nothing here", "There is nothing at this address; /docs lists what there is."),
    "method-not-allowed": Kind(405, "Method not allowed", "The Allow header names what is possible."),
    "not-acceptable": Kind(406, "Form not offered", "The answer is not offered in the form asked for."),
    "conflict": Kind(409, "Conflict", "The request collides with what is stored."),
    "body-too-large": Kind(413, "Body too large", "The body is larger than this service takes."),
    "address-too-long": Kind(414, "Address too long", "The address is longer than the server takes."),
    "unsupported-media-type": Kind(415, "Body of the wrong kind", "Send the body as application/json."),
    "invalid-request": Kind(422, "Request not valid", "Fields are missing, unknown or wrong; each is named."),
    "too-many-requests": Kind(429, "Too many requests", "Wait as long as Retry-After says."),
    "internal-error": Kind(500, "Fault in the service", "A fault of this service; report the request_id."),
    "not-ready": Kind(503, "Not ready", "The service is starting, stopping, or its data did not load."),
}  # fmt: skip

_CODE_OF_STATUS = {
    400: "bad-request", 401: "unauthorised", 403: "forbidden", 404: "not-found", 405: "method-not-allowed",
    406: "not-acceptable", 409: "conflict", 413: "body-too-large", 414: "address-too-long",
    415: "unsupported-media-type", 422: "invalid-request", 429: "too-many-requests", 500: "internal-error",
    503: "not-ready",
}  # fmt: skip


class FieldError(AnswerModel):
    """One thing that is wrong, where it is, and what would be right."""

    field: str = Field(description="Dotted path of the field.", examples=["alloy.composition_wt"])
    pointer: str | None = Field(default=None, description="JSON Pointer into the body (RFC 6901).")
    parameter: str | None = Field(default=None, description="Name of the parameter in the address.")
    detail: str
    remedy: str = ""


class Problem(Answer):
    """An error as problem details (RFC 9457), with the cautions that every answer carries."""

    type: str = Field(
        description="Address of a page about this kind of problem.", examples=["/problems/outside-data"]
    )
    title: str
    status: int
    detail: str
    code: str = Field(
        description="Stable name of this kind of problem.", json_schema_extra={"enum": [*sorted(KINDS)]}
    )
    errors: list[FieldError]
    request_id: str


class Refusal(HTTPException):
    """Raised by the web layer itself to refuse a request with one of the kinds above."""

    def __init__(
        self,
        code: str,
        detail: str,
        errors: Iterable[FieldError] = (),
        headers: Mapping[str, str] | None = None,
    ) -> None:
        super().__init__(KINDS[code].status, detail, headers)
        self.code = code
        self.errors = list(errors)


def field_error(where: str, path: Sequence[str | int], detail: str, remedy: str) -> FieldError:
    """Name a field by its path; `where` is `body`, `query`, `path` or `header`."""
    parts = [_printable(str(part)) for part in path]
    field = ".".join(parts) or where
    if where == "body":
        pointer = "".join("/" + part.replace("~", "~0").replace("/", "~1") for part in parts)
        return FieldError(field=field, pointer=pointer, detail=_printable(detail), remedy=remedy)
    return FieldError(
        field=field, parameter=parts[0] if parts else None, detail=_printable(detail), remedy=remedy
    )


def counted(first: str, count: int) -> str:
    """Sum up so many errors by the first; says so if there are more than are listed."""
    wrong = "One field is" if count == 1 else f"{count} fields are"
    cut = f" Only the first {MOST_ERRORS} of {count} are listed." if count > MOST_ERRORS else ""
    return f"{wrong} not right: {first}{cut}"


def problem_response(
    scope: Mapping[str, Any],
    code: str,
    detail: str,
    errors: Sequence[FieldError] = (),
    *,
    status: int | None = None,
    headers: Mapping[str, str] | None = None,
) -> Response:
    """Build the answer for one problem; the cautions follow from what the request mentions."""
    kind = KINDS[code]
    problem = Problem(
        type=f"{scope.get('root_path', '')}/problems/{code}",
        title=kind.title,
        status=status or kind.status,
        detail=_printable(detail),
        code=code,
        errors=list(errors),
        request_id=scope.get("meltband.request_id", ""),
        safety=safety_for(_elements_asked_about(scope), None),
    )
    content = problem.model_dump_json(exclude_none=True)
    return Response(content, problem.status, dict(headers or {}), media_type=MEDIA_TYPE)


def install(app: FastAPI) -> None:
    """Register the handlers; a fault nobody foresaw is answered in the middleware."""
    app.add_exception_handler(DiagramsError, _on_diagrams_error)
    app.add_exception_handler(RequestValidationError, _on_validation_error)
    app.add_exception_handler(HTTPException, _on_http_exception)


async def _on_diagrams_error(request: Request, error: Exception) -> Response:
    assert isinstance(error, DiagramsError)
    code = error.code if error.code in KINDS else "internal-error"
    if KINDS[code].status >= 500:
        log.error("request %s, %s: %s", request.scope.get("meltband.request_id"), code, error)
    errors = []
    if error.field:
        where = "query" if request.method in ("GET", "HEAD") else "body"
        errors = [field_error(where, error.field.split("."), str(error), error.remedy)]
    return problem_response(request.scope, code, " ".join(filter(None, (str(error), error.remedy))), errors)


async def _on_validation_error(request: Request, error: Exception) -> Response:
    assert isinstance(error, RequestValidationError)
    found = list(error.errors())
    errors = [_explain(item) for item in found[:MOST_ERRORS]]
    detail = counted(errors[0].detail, len(found)) if errors else "The request is not right."
    return problem_response(request.scope, "invalid-request", detail, errors)


async def _on_http_exception(request: Request, error: Exception) -> Response:
    assert isinstance(error, HTTPException)
    if isinstance(error, Refusal):
        return problem_response(request.scope, error.code, error.detail, error.errors, headers=error.headers)
    fallback = "internal-error" if error.status_code >= 500 else "bad-request"
    code = _CODE_OF_STATUS.get(error.status_code, fallback)
    headers = dict(error.headers or {})
    detail = KINDS[code].meaning
    if error.status_code == 405:
        headers["Allow"] = ", ".join(_methods_possible(request))
        detail = f"{request.scope['method']} is not possible here; possible: {headers['Allow']}."
    return problem_response(request.scope, code, detail, status=error.status_code, headers=headers)


def _methods_possible(request: Request) -> list[str]:
    """Gather the methods of all routes at this address; one address may be two routes."""
    here = [route for route in request.app.routes if route.matches(request.scope)[0] != Match.NONE]
    methods = {method for route in here for method in route.methods}
    return sorted(methods | ({"HEAD"} if "GET" in methods else set()))


def _explain(item: Mapping[str, Any]) -> FieldError:
    where, *path = item["loc"]
    detail, remedy = complain(item, _printable(".".join(map(str, path)) or str(where)))
    return field_error(str(where), path, detail, remedy)


def _elements_asked_about(scope: Mapping[str, Any]) -> frozenset[str]:
    """What the request mentions; what was not read, or could not be, may speak of lead."""
    address = f"{scope.get('path', '')}?{scope.get('query_string', b'').decode('latin-1')}"
    mentioned = elements_mentioned(address, scope.get(ASKED_BODY, b""))
    unread = ASKED_BODY not in scope and _brings_body(scope)
    return mentioned | {"Pb"} if unread else mentioned


def _brings_body(scope: Mapping[str, Any]) -> bool:
    """Whether a request announces a body; one that is no HTTP may have held anything."""
    if "headers" not in scope:
        return True
    return any(
        (name == b"content-length" and value.strip(b"0 ") != b"") or name == b"transfer-encoding"
        for name, value in scope["headers"]
    )


def _printable(text: str) -> str:
    """Cut what could not be sent back: lone surrogates are escaped, names of absurd length end in “…”."""
    text = text.encode("utf-8", "backslashreplace").decode("utf-8")
    return text if len(text) <= 500 else text[:500] + "…"
