"""Routes that lose nothing: doubled keys, unknown parameters and bodies of the wrong kind are refused."""

from collections.abc import Callable, Coroutine, Mapping
from typing import Any

import anyio.to_thread
from fastapi import APIRouter, params
from fastapi.dependencies.utils import get_flat_params
from fastapi.routing import APIRoute
from starlette.requests import Request
from starlette.responses import Response

from service.json_body import UnreadableJson, UnusableObject, read_json
from service.problems import ASKED_BODY, MOST_ERRORS, FieldError, Refusal, counted, field_error
from service.routes.plain_values import Kind, complaint_about, kind_of

PARSED = "meltband.parsed"  # where a body that was read before waits in the scope
_OTHER_PLACES = (params.Path, params.Header, params.Cookie)
_LONG_BODY = 200_000  # bytes; longer ones are read in a thread, so that short questions need not wait
_UTF_8 = frozenset({"utf-8", "utf8", "us-ascii", "ascii"})  # ASCII is a part of UTF-8


class StrictRequest(Request):
    """A request whose JSON is read without losing a doubled key."""

    async def json(self) -> Any:
        """Parse the body; raise a Refusal that names the place."""
        if PARSED in self.scope:
            return self.scope[PARSED]
        body = await self.body()
        if len(body) > _LONG_BODY:
            return await anyio.to_thread.run_sync(parsed_json, body)
        return parsed_json(body)


def parsed_json(body: bytes) -> Any:
    """Read JSON strictly; a Refusal names the place."""
    try:
        return read_json(body)
    except UnusableObject as error:
        named = field_error("body", error.path, str(error), error.remedy)
        raise Refusal("invalid-request", f"{error} {error.remedy}", [named]) from None
    except UnreadableJson as error:
        whole = field_error("body", (), str(error), "Send one JSON document in UTF-8.")
        raise Refusal("unreadable-body", str(error), [whole]) from None


class StrictRoute(APIRoute):
    """A route that refuses what it does not know instead of passing over it."""

    also_takes: tuple[str, ...] = ()  # media types beside JSON

    def get_route_handler(self) -> Callable[[Request], Coroutine[Any, Any, Response]]:
        """Wrap the framework's handler with the checks."""
        handler = super().get_route_handler()
        known = self.known_parameters()
        takes_json = self.body_field is not None and not isinstance(self.body_field.field_info, params.Form)

        async def strict_handler(request: Request) -> Response:
            request = StrictRequest(request.scope, request.receive)
            if request.scope["query_string"]:
                refuse_odd_parameters(request, known)
            if takes_json:
                await refuse_other_bodies(request, self.also_takes)
            return await handler(request)

        return strict_handler

    def known_parameters(self) -> dict[str, Kind | None]:
        """The parameters of the address line, with the kind of value each takes."""
        return {
            f.alias: kind_of(f.field_info.annotation)
            for f in get_flat_params(self.dependant)
            if not isinstance(f.field_info, _OTHER_PLACES)
        }


def refuse_odd_parameters(request: Request, known: Mapping[str, Kind | None]) -> None:
    """Refuse query parameters that nothing here reads, those given twice, and numbers written oddly."""
    errors: list[FieldError] = []
    seen: set[str] = set()
    for name, text in request.query_params.multi_items():
        if name not in known:
            remedy = (
                f"Known here: {', '.join(sorted(known))}." if known else "This address takes no parameters."
            )
            errors.append(field_error("query", (name,), f"“{name}” is no parameter here.", remedy))
        elif name in seen:
            errors.append(field_error("query", (name,), f"“{name}” is given twice.", "Give it once."))
        elif (kind := known[name]) and (complaint := complaint_about(kind, name, text)):
            errors.append(field_error("query", (name,), *complaint))
        seen.add(name)
    if errors:
        shown = errors[:MOST_ERRORS]
        raise Refusal("invalid-request", counted(errors[0].detail, len(errors)), shown)


async def refuse_other_bodies(request: Request, also: tuple[str, ...] = ()) -> None:
    """Refuse a body that is not labelled as plain JSON in UTF-8, before anything tries to read it.

    `also` are other media types that are taken.
    """
    wanted = "Content-Type: " + " or ".join(("application/json", *also))
    kind, _, rest = request.headers.get("content-type", "").partition(";")
    kind = kind.strip().lower()
    coding = request.headers.get("content-encoding", "identity").strip().lower()
    if coding != "identity":
        detail = f"The body is coded as {coding}; send it as it is, without Content-Encoding."
        raise Refusal("unsupported-media-type", detail, headers={"Accept-Encoding": "identity"})
    if (charset := _charset(rest)) not in _UTF_8:
        raise Refusal(
            "unsupported-media-type",
            f"The body is labelled as {charset}; send UTF-8, with {wanted}.",
        )
    # an error answer takes its cautions from what was asked about
    request.scope[ASKED_BODY] = body = await request.body()
    if kind in ("application/json", *also) or (kind.startswith("application/") and kind.endswith("+json")):
        return
    if body:
        sent = f"The body is labelled “{kind}”" if kind else "The body has no Content-Type"
        raise Refusal("unsupported-media-type", f"{sent}; send it with {wanted}.")


def _charset(parameters: str) -> str:
    """The charset among the parameters of a Content-Type; UTF-8 if none is given, as JSON has it."""
    for parameter in parameters.split(";"):
        name, _, value = parameter.partition("=")
        if name.strip().lower() == "charset":
            return value.strip().strip('"').lower()
    return "utf-8"


def new_router(tag: str, prefix: str = "/v1", route_class: type[APIRoute] = StrictRoute) -> APIRouter:
    """Make a router whose routes are strict and stand under one heading of the docs page."""
    return APIRouter(
        prefix=prefix, tags=[tag], route_class=route_class, generate_unique_id_function=_operation_id
    )


def _operation_id(route: APIRoute) -> str:
    """Name an operation after its function, so that generated clients have steady names."""
    return route.name
