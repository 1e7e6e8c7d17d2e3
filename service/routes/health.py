"""For whoever runs the service: is it alive, is it ready, which code and data is it."""

from collections.abc import Callable, Mapping
from typing import Annotated, Literal

from fastapi import Depends, Request
from pydantic import Field

from diagrams.errors import DataFault
from service import __version__
from service.problems import Refusal
from service.routes.strict import new_router
from service.safety import safety_for
from service.schemas.base import Answer

router = new_router("Running the service", prefix="")

Readiness = Callable[[], Mapping[str, str]]
"""Loads all stored data and returns the edition of each; raises DataFault where they fail their checks."""


class Alive(Answer):
    """The process answers."""

    status: Literal["alive"] = "alive"


class Ready(Answer):
    """All stored data are loaded and checked."""

    status: Literal["ready"] = "ready"


class Version(Answer):
    """Which code and which data answer here."""

    name: Literal["meltband"] = "meltband"
    version: str = Field(description="Version of the code.", examples=["0.1.0"])
    editions: dict[str, str] = Field(description="Edition of each stored set of data.")


def load_editions(request: Request) -> Mapping[str, str]:
    """Return the editions of the stored data; 503 where they do not load."""
    readiness: Readiness = request.app.state.readiness
    try:
        return readiness()
    except DataFault as fault:
        raise Refusal(
            "not-ready", f"The stored data did not load: {fault}", headers={"Retry-After": "30"}
        ) from fault


EditionsDep = Annotated[Mapping[str, str], Depends(load_editions)]


@router.get("/livez", summary="Is the process alive?")
async def livez() -> Alive:
    """Answer as long as the process can answer at all; loads nothing."""
    return Alive(safety=safety_for(frozenset()))


@router.get("/readyz", summary="Is it ready for questions?")
async def readyz(editions: EditionsDep) -> Ready:
    """Answer 200 once all stored data are loaded and have passed their checks, 503 before."""
    return Ready(safety=safety_for(frozenset()))


@router.get("/version", summary="Which code and which data?")
async def version(editions: EditionsDep) -> Version:
    """Name the version of the code and the edition of all data; quote both with an answer you keep."""
    return Version(version=__version__, editions=dict(editions), safety=safety_for(frozenset()))
