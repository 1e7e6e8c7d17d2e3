"""Routes that take a recording as JSON, as a table with the rest in the address line, or as two parts."""

from collections.abc import AsyncGenerator, Callable, Coroutine
from typing import Any
from urllib.parse import quote

import anyio.to_thread
from fastapi.exceptions import RequestValidationError
from pydantic import ValidationError
from starlette.datastructures import FormData
from starlette.formparsers import MultiPartException, MultiPartParser
from starlette.requests import Request
from starlette.responses import Response
from starlette.types import Message

from service.problems import ASKED_BODY, Refusal, field_error
from service.process.profiles.from_table import body_of, body_with
from service.routes.strict import (
    PARSED,
    StrictRoute,
    parsed_json,
    refuse_odd_parameters,
    refuse_other_bodies,
)
from service.schemas.profile_address import ProfileAddress

TABLE = "text/csv"
PARTS = "multipart/form-data"
QUESTION_PART, TABLE_PART = "question", "table"
ADDRESS_LINE = "#?"
ALSO_WITH_JSON = frozenset({"format"})
_TWO_PARTS = f"Send two parts: {QUESTION_PART} (JSON) and {TABLE_PART} ({TABLE})."


class RecordingRoute(StrictRoute):
    """A route whose JSON body may come as a table instead."""

    also_takes = (TABLE, PARTS)

    def get_route_handler(self) -> Callable[[Request], Coroutine[Any, Any, Response]]:
        """Turn a table into the body it stands for, then go on as ever."""
        handler = super().get_route_handler()
        known = self.known_parameters()

        async def recording_handler(request: Request) -> Response:
            kind = request.headers.get("content-type", "").partition(";")[0].strip().lower()
            if kind == PARTS:
                refuse_odd_parameters(request, known)
                _refuse_parameters_beside_json(request)
                await refuse_other_bodies(request, self.also_takes)
                return await handler(_as_json(request, await _body_of_parts(request)))
            if kind != TABLE:
                refuse_odd_parameters(request, known)
                _refuse_parameters_beside_json(request)
                return await handler(request)
            await refuse_other_bodies(request, self.also_takes)
            table = _text_of(await request.body())
            request = _with_address_of(request, table)
            refuse_odd_parameters(request, known)
            return await handler(_as_json(request, await _body_of_table(request, table)))

        return recording_handler


def _text_of(body: bytes) -> str:
    try:
        return body.decode("utf-8-sig")
    except UnicodeDecodeError:
        detail = "The table is not in UTF-8."
        whole = field_error("body", (), detail, "Save it as UTF-8.")
        raise Refusal("unreadable-body", detail, [whole]) from None


async def _body_of_parts(request: Request) -> Any:
    """The question of one part with the table of the other put into it."""
    parts = await _parts_of(request)
    question = await anyio.to_thread.run_sync(parsed_json, parts[QUESTION_PART])
    if not isinstance(question, dict):
        raise _unusable(QUESTION_PART, "The question is no JSON object.", "Send one, without columns.")
    table = _text_of(parts[TABLE_PART])
    if table.startswith(ADDRESS_LINE):
        remedy = f"Leave its line {ADDRESS_LINE} out."
        raise _unusable(TABLE_PART, "The table brings a question of its own.", remedy)
    return await anyio.to_thread.run_sync(body_with, question, table)


async def _parts_of(request: Request) -> dict[str, bytes]:
    """Both parts, as files or as fields; Refusal for any other, for a missing and for a doubled one."""
    body = await request.body()

    async def whole() -> AsyncGenerator[bytes, None]:
        yield body

    parser = MultiPartParser(request.headers, whole(), max_files=2, max_fields=2, max_part_size=len(body))
    try:
        form = await parser.parse()
    except MultiPartException as error:
        raise _unusable("body", f"The parts cannot be read: {error.message}", "Send two parts.") from None
    try:
        parts = await _named(form)
    finally:
        await form.close()
    for name in (QUESTION_PART, TABLE_PART):
        if name not in parts:
            raise _unusable(name, f"The part “{name}” is missing.", _TWO_PARTS)
    return parts


async def _named(form: FormData) -> dict[str, bytes]:
    parts: dict[str, bytes] = {}
    for name, part in form.multi_items():
        if name not in (QUESTION_PART, TABLE_PART) or name in parts:
            told = "stands there twice" if name in parts else "is no part that is read here"
            raise _unusable(name[:60], f"The part “{name[:60]}” {told}.", _TWO_PARTS)
        parts[name] = part.encode() if isinstance(part, str) else await part.read()
    return parts


def _unusable(field: str, detail: str, remedy: str) -> Refusal:
    return Refusal("invalid-request", f"{detail} {remedy}", [field_error("body", (field,), detail, remedy)])


def _with_address_of(request: Request, table: str) -> Request:
    """The request with what a first line `#? alloy=…` says added to its address line.

    So a file can carry its question with it; names given in both places count as given twice.
    """
    first, _, _ = table.partition("\n")
    if not first.startswith(ADDRESS_LINE):
        return request
    more = quote(first.removeprefix(ADDRESS_LINE).strip(), safe="=&%,:+").encode()
    there = request.scope["query_string"]
    scope = {**request.scope, "query_string": b"&".join(part for part in (there, more) if part)}
    return Request(scope, request.receive)


async def _body_of_table(request: Request, table: str) -> Any:
    """The table with its address line as the JSON they stand for."""
    given = {k: v for k, v in request.query_params.items() if k not in ALSO_WITH_JSON}
    try:
        address = ProfileAddress.model_validate(given)
    except ValidationError as error:
        wrong = [{**e, "loc": ("query", *e["loc"])} for e in error.errors(include_url=False)]
        raise RequestValidationError(wrong) from None
    return await anyio.to_thread.run_sync(body_of, address, table)


def _as_json(request: Request, parsed: Any) -> Request:
    """The request, labelled as the JSON that its body stands for and that waits in its scope."""
    headers = [(k, v) for k, v in request.scope["headers"] if k != b"content-type"]
    scope = {
        **request.scope,
        "headers": [*headers, (b"content-type", b"application/json")],
        PARSED: parsed,
    }
    body: bytes = request.scope[ASKED_BODY]

    async def replay() -> Message:
        return {"type": "http.request", "body": body, "more_body": False}

    return Request(scope, replay)


def _refuse_parameters_beside_json(request: Request) -> None:
    odd = sorted(set(request.query_params) - ALSO_WITH_JSON)
    if odd:
        remedy = f"Put it into the body; beside a body of {TABLE} it may stand here."
        errors = [field_error("query", (n,), f"“{n}” stands beside a JSON body.", remedy) for n in odd]
        raise Refusal("invalid-request", f"{errors[0].detail} {remedy}", errors)
