"""Routes that lose nothing: doubled keys, unknown parameters and bodies of the wrong kind are refused."""

from collections.abc import Callable, Coroutine
from typing import Any

from fastapi import APIRouter, params
from fastapi.dependencies.utils import get_flat_params
from fastapi.routing import APIRoute
from starlette.requests import Request
from starlette.responses import Response

from service.json_body import DuplicateKey, UnreadableJson, read_json
from service.problems import FieldError, Refusal, field_error

_OTHER_PLACES = (params.Path, params.Header, params.Cookie)


class StrictRequest(Request):
    """A request whose JSON is read without losing a doubled key."""

    async def json(self) -> Any:
        """Parse the body; raise a Refusal that names the place."""
        body = await self.body()
        self.scope["meltband.body"] = body  # an error answer takes its cautions from what was asked about
        try:
            return read_json(body)
        except DuplicateKey as error:
            remedy = "Give each key once."
            raise Refusal(
                "invalid-request", str(error), [field_error("body", error.path, str(error), remedy)]
            ) from None
        except UnreadableJson as error:
            whole = field_error("body", (), str(error), "Send one JSON document in UTF-8.")
            raise Refusal("unreadable-body", str(error), [whole]) from None


class StrictRoute(APIRoute):
    """A route that refuses what it does not know instead of passing over it."""

    def get_route_handler(self) -> Callable[[Request], Coroutine[Any, Any, Response]]:
        """Wrap the framework's handler with the checks."""
        handler = super().get_route_handler()
        known = {
            f.alias for f in get_flat_params(self.dependant) if not isinstance(f.field_info, _OTHER_PLACES)
        }
        takes_json = self.body_field is not None and not isinstance(self.body_field.field_info, params.Form)

        async def strict_handler(request: Request) -> Response:
            request = StrictRequest(request.scope, request.receive)
            if request.scope["query_string"]:
                refuse_unknown_parameters(request, known)
            if takes_json:
                await refuse_other_bodies(request)
            return await handler(request)

        return strict_handler


def refuse_unknown_parameters(request: Request, known: set[str]) -> None:
    """Refuse query parameters that nothing here reads, and those given twice."""
    errors: list[FieldError] = []
    seen: set[str] = set()
    for name, _ in request.query_params.multi_items():
        if name not in known:
            remedy = (
                f"Known here: {', '.join(sorted(known))}." if known else "This address takes no parameters."
            )
            errors.append(field_error("query", (name,), f"“{name}” is no parameter here.", remedy))
        elif name in seen:
            errors.append(field_error("query", (name,), f"“{name}” is given twice.", "Give it once."))
        seen.add(name)
    if errors:
        raise Refusal("invalid-request", errors[0].detail, errors)


async def refuse_other_bodies(request: Request) -> None:
    """Refuse a body that is not labelled as JSON, before anything tries to read it."""
    kind = request.headers.get("content-type", "").partition(";")[0].strip().lower()
    if kind == "application/json" or (kind.startswith("application/") and kind.endswith("+json")):
        return
    if await request.body():
        sent = f"The body is labelled “{kind}”" if kind else "The body has no Content-Type"
        raise Refusal("unsupported-media-type", f"{sent}; send it with Content-Type: application/json.")


def new_router(tag: str, prefix: str = "/v1") -> APIRouter:
    """Make a router whose routes are strict and stand under one heading of the docs page."""
    return APIRouter(
        prefix=prefix, tags=[tag], route_class=StrictRoute, generate_unique_id_function=_operation_id
    )


def _operation_id(route: APIRoute) -> str:
    """Name an operation after its function, so that generated clients have steady names."""
    return route.name
