"""The pages for people: the start, the operations at /docs with all they need on board, the problems."""

import gzip
import hashlib
from functools import cache
from importlib.resources import files
from typing import NamedTuple

from fastapi import APIRouter, Request
from starlette.responses import HTMLResponse, Response

from service import pages
from service.problems import KINDS, Refusal
from service.safety import safety_for, safety_of_examples

router = APIRouter(include_in_schema=False)
docs_router = APIRouter(include_in_schema=False)

_OPERATIONS = (
    '<noscript>This list needs JavaScript; <a href="openapi.json">openapi.json</a> holds the same.</noscript>'
    '<div id="operations"></div>'
)
_KINDS_OF_FILE = {
    ".css": "text/css; charset=utf-8",
    ".js": "text/javascript; charset=utf-8",
    ".svg": "image/svg+xml",
    ".txt": "text/plain; charset=utf-8",
}


class Asset(NamedTuple):
    """A file of the pages, as it is and packed."""

    content: bytes
    packed: bytes
    media_type: str


@cache
def assets() -> dict[str, Asset]:
    """Return the files by address; each address holds a version, so no file changes under it."""
    static = files("service").joinpath("static")
    found: dict[str, Asset] = {}
    for folder in static.iterdir():
        if not folder.is_dir():
            continue
        for file in folder.iterdir():
            suffix = "." + file.name.rpartition(".")[2]
            content = file.read_bytes()
            versioned = folder.name if "-" in folder.name else f"{folder.name}-{_digest(content)}"
            kind = _KINDS_OF_FILE.get(suffix, _KINDS_OF_FILE[".txt"])
            found[f"{versioned}/{file.name}"] = Asset(content, gzip.compress(content, 9, mtime=0), kind)
    return found


def _digest(content: bytes) -> str:
    return hashlib.sha256(content).hexdigest()[:12]


def address_of(name: str) -> str:
    """Return the address of a file relative to the root of the service."""
    return "static/" + next(address for address in assets() if address.endswith("/" + name))


@router.get("/static/{folder}/{name}")
def asset(folder: str, name: str, request: Request) -> Response:
    """Send a file, packed where the browser takes that; the first call packs them all, in a thread."""
    found = assets().get(f"{folder}/{name}")
    if found is None:
        raise Refusal("not-found", "There is no such file here.")
    headers = {"Cache-Control": "public, max-age=31536000, immutable", "Vary": "Accept-Encoding"}
    if "gzip" in request.headers.get("accept-encoding", ""):
        return Response(
            found.packed, headers=headers | {"Content-Encoding": "gzip"}, media_type=found.media_type
        )
    return Response(found.content, headers=headers, media_type=found.media_type)


def _page(title: str, body: str, *, up: str = "", operations: bool = False) -> HTMLResponse:
    scripts = [address_of("swagger-ui-bundle.js"), address_of("start.js")] if operations else []
    styles = (
        [address_of("swagger-ui.css"), address_of("page.css")] if operations else [address_of("page.css")]
    )
    return HTMLResponse(
        pages.page(
            title=title,
            body=body,
            safety=safety_of_examples() if operations else safety_for(frozenset()),
            icon=up + address_of("favicon.svg"),
            styles=[up + style for style in styles],
            scripts="\n".join(f'<script defer src="{up}{script}"></script>' for script in scripts),
            home=up or "./",
            after=_OPERATIONS if operations else "",
        )
    )


@docs_router.get("/docs")
def docs() -> HTMLResponse:
    """Show all operations, to read and to try."""
    return _page("Meltband: operations", "", operations=True)


@router.get("/")
def start(request: Request) -> HTMLResponse:
    """Say what this is and where to go."""
    has_docs = request.app.openapi_url is not None
    to_docs = '<p><a href="docs">All operations, to read and to try</a></p>' if has_docs else ""
    return _page(
        "Meltband",
        "<h1>How hot must the joint get, and how hot may it get?</h1>"
        "<p>This service answers from the phase diagram of the filler metal.</p>"
        f'{to_docs}<p><a href="problems">What the error codes mean</a> · '
        '<a href="v1/safety">the cautions as data</a></p>',
    )


@router.get("/problems")
def problem_kinds() -> HTMLResponse:
    """List every kind of problem."""
    rows = [(code, *kind) for code, kind in KINDS.items()]
    return _page("Meltband: problems", "<h1>What the error codes mean</h1>" + pages.problem_list(rows))


@router.get("/problems/{code}")
def problem_kind(code: str) -> HTMLResponse:
    """Explain one kind of problem; its address is the `type` of the error."""
    if code not in KINDS:
        raise Refusal("not-found", "There is no problem with this code; /problems lists all.")
    body = f"<h1>{KINDS[code].title}</h1>{pages.problem_list([(code, *KINDS[code])])}"
    body += '<p><a href="../problems">All problems</a></p>'
    return _page(f"Meltband: {KINDS[code].title}", body, up="../")
