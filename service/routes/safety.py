"""The cautions alone, for an alloy or in general."""

from typing import Annotated

from fastapi import Query

from diagrams.alloys import parse_alloy
from service.routes.strict import new_router
from service.safety import Process, safety_for
from service.schemas.base import Answer, Finite

router = new_router("Fillers and safety")

AlloyQuery = Annotated[
    str | None,
    Query(
        min_length=1,
        max_length=200,
        description="A designation, or element symbols with mass percent where one may be left open.",
        examples=["Sn63Pb37"],
    ),
]
ProcessQuery = Annotated[
    Process | None, Query(description="`solder` or `braze`; left out, both are warned of.")
]
TemperatureQuery = Annotated[
    Finite | None,
    Query(
        ge=-273.15,
        le=5000,
        description="Highest temperature of the work, °C.",
    ),
]


@router.get("/safety", summary="What to mind")
async def safety(
    alloy: AlloyQuery = None, process: ProcessQuery = None, temperature_c: TemperatureQuery = None
) -> Answer:
    """Give the cautions that come with every answer here: for an alloy, or those that always hold."""
    elements = frozenset(parse_alloy(alloy).composition_wt) if alloy else frozenset[str]()
    return Answer(safety=safety_for(elements, process, temperature_c))
