"""Puts the pieces together; the only file that knows them all. Nothing is made at import."""

import os
from collections.abc import AsyncIterator, Mapping
from contextlib import asynccontextmanager
from typing import Any

import anyio.to_thread
from fastapi import FastAPI
from fastapi.openapi.utils import get_openapi
from pydantic.json_schema import models_json_schema

from diagrams.errors import DataFault
from diagrams.files.catalog import catalog
from diagrams.fillers import FILLERS_EDITION
from diagrams.sections.shelf import stored_sections
from service import __version__, docs_page, problems
from service.middleware import Edge
from service.openapi import DESCRIPTION, SUMMARY, TAGS, describe_errors
from service.process.fillers import covered
from service.routes import (
    baths,
    diagrams,
    dissolution,
    equilibrium,
    figures,
    fillers,
    health,
    known_limits,
    melting,
    mixtures,
    profiles,
    safety,
    sections,
    shortlists,
    solidification,
    steps,
    window,
)
from service.routes.health import Readiness
from service.safety import safety_edition, safety_of_examples
from service.settings import Settings, settings_from

ROUTERS = (
    diagrams.router,
    figures.router,
    sections.router,
    equilibrium.router,
    melting.router,
    solidification.router,
    window.router,
    known_limits.router,
    mixtures.router,
    dissolution.router,
    profiles.router,
    steps.router,
    baths.router,
    fillers.router,
    shortlists.router,
    safety.router,
    health.router,
)
NO_TELEMETRY: Any = {
    "tracing": False,
    "metrics": False,
    "logs": False,
    "operation_spans": False,
    "auto_configure": False,
}


def load_all() -> Mapping[str, str]:
    """Load every stored set of data and return its edition; what is loaded stays loaded."""
    covered()  # places every filler on its diagram, so that no question waits for that
    stored_sections()  # past their gate, or the service does not get ready
    return {"diagrams": catalog().edition, "fillers": FILLERS_EDITION, "safety": safety_edition()}


def create_app(settings: Settings | None = None, readiness: Readiness = load_all) -> FastAPI:
    """Make the application; without settings they are read from the environment."""
    settings = settings or settings_from(os.environ)
    app = FastAPI(
        title="Meltband",
        summary=SUMMARY,
        description=DESCRIPTION,
        version=__version__,
        license_info={"name": "Apache-2.0"},
        openapi_tags=TAGS,
        openapi_url="/openapi.json" if settings.docs else None,
        docs_url=None,
        redoc_url=None,
        redirect_slashes=False,
        telemetry=NO_TELEMETRY,
        lifespan=load_before_serving,
    )
    app.state.readiness = readiness
    app.add_middleware(
        Edge,
        max_body_bytes=settings.max_body_bytes,
        root_path=settings.root_path,
        larger=dict.fromkeys(profiles.ADDRESSES, settings.max_recording_bytes),
    )
    problems.install(app)
    pages = (docs_page.router, docs_page.docs_router) if settings.docs else (docs_page.router,)
    for router in (*ROUTERS, *pages):
        # The routes themselves, not include_router: finding a route through included routers costs
        # more than reading and checking the request, and these routers bring nothing but routes.
        app.router.routes.extend(router.routes)
    app.openapi = lambda: openapi(app)  # type: ignore[method-assign]  # the framework's own way to extend it
    return app


@asynccontextmanager
async def load_before_serving(app: FastAPI) -> AsyncIterator[None]:
    """Load the data before the first question; a fault in them is for /readyz to tell."""
    try:
        await anyio.to_thread.run_sync(app.state.readiness)
    except DataFault as fault:
        problems.log.error("stored data did not load: %s", fault)
    yield


def openapi(app: FastAPI) -> dict[str, Any]:
    """Return the OpenAPI document, made once."""
    if not app.openapi_schema:
        schema = get_openapi(
            title=app.title,
            version=app.version,
            summary=app.summary,
            description=app.description,
            license_info=app.license_info,
            tags=app.openapi_tags,
            routes=app.routes,
        )
        _, made = models_json_schema(
            [(problems.Problem, "serialization")], ref_template="#/components/schemas/{model}"
        )
        app.openapi_schema = describe_errors(schema, made["$defs"], safety_of_examples())
    return app.openapi_schema
