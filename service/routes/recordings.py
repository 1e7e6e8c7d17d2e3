"""Routes that take a recording as JSON, or as a text table with the rest in the address line."""

from collections.abc import Callable, Coroutine
from typing import Any
from urllib.parse import quote

import anyio.to_thread
from fastapi.exceptions import RequestValidationError
from pydantic import ValidationError
from starlette.requests import Request
from starlette.responses import Response
from starlette.types import Message

from service.problems import Refusal, field_error
from service.process.profiles.from_table import body_of
from service.routes.strict import PARSED, StrictRoute, refuse_odd_parameters, refuse_other_bodies
from service.schemas.profile_address import ProfileAddress

TABLE = "text/csv"
ADDRESS_LINE = "#?"
ALSO_WITH_JSON = frozenset({"format"})


class RecordingRoute(StrictRoute):
    """A route whose JSON body may come as a table instead."""

    also_takes = TABLE

    def get_route_handler(self) -> Callable[[Request], Coroutine[Any, Any, Response]]:
        """Turn a table into the body it stands for, then go on as ever."""
        handler = super().get_route_handler()
        known = self.known_parameters()

        async def recording_handler(request: Request) -> Response:
            kind = request.headers.get("content-type", "").partition(";")[0].strip().lower()
            if kind != TABLE:
                _refuse_parameters_beside_json(request)
                return await handler(request)
            await refuse_other_bodies(request, TABLE)
            table = await _table_of(request)
            request = _with_address_of(request, table)
            refuse_odd_parameters(request, known)
            return await handler(await _with_body_of(request, table))

        return recording_handler


async def _table_of(request: Request) -> str:
    body = await request.body()
    try:
        return body.decode("utf-8-sig")
    except UnicodeDecodeError:
        detail = "The table is not in UTF-8."
        whole = field_error("body", (), detail, "Save it as UTF-8.")
        raise Refusal("unreadable-body", detail, [whole]) from None


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


async def _with_body_of(request: Request, table: str) -> Request:
    """The request with its table read and labelled as the JSON it stands for."""
    given = {k: v for k, v in request.query_params.items() if k not in ALSO_WITH_JSON}
    try:
        address = ProfileAddress.model_validate(given)
    except ValidationError as error:
        wrong = [{**e, "loc": ("query", *e["loc"])} for e in error.errors(include_url=False)]
        raise RequestValidationError(wrong) from None
    parsed = await anyio.to_thread.run_sync(body_of, address, table)
    headers = [(k, v) for k, v in request.scope["headers"] if k != b"content-type"]
    scope = {
        **request.scope,
        "headers": [*headers, (b"content-type", b"application/json")],
        PARSED: parsed,
    }
    body = table.encode()

    async def replay() -> Message:
        return {"type": "http.request", "body": body, "more_body": False}

    return Request(scope, replay)


def _refuse_parameters_beside_json(request: Request) -> None:
    odd = sorted(set(request.query_params) - ALSO_WITH_JSON)
    if odd:
        remedy = f"Put it into the body; beside a body of {TABLE} it may stand here."
        errors = [field_error("query", (n,), f"“{n}” stands beside a JSON body.", remedy) for n in odd]
        raise Refusal("invalid-request", f"{errors[0].detail} {remedy}", errors)
