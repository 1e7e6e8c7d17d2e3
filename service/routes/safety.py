"""The cautions alone, for an alloy or in general."""

from typing import Annotated

from fastapi import Query

from service.process.subject import subject_of
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
DiagramQuery = Annotated[
    str | None,
    Query(
        min_length=1,
        max_length=40,
        description="Id of a diagram: the cautions for its elements, besides those for the alloy if any.",
        examples=["pb-sn"],
    ),
]
ProcessQuery = Annotated[
    Process | None,
    Query(
        description="`solder` or `braze`; left out, it follows from the alloy as in its answers (the "
        "filler table's class, else soldering if all is liquid at 450 °C), and both are warned of where "
        "that is not known."
    ),
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
def safety(
    alloy: AlloyQuery = None,
    diagram: DiagramQuery = None,
    process: ProcessQuery = None,
    temperature_c: TemperatureQuery = None,
) -> Answer:
    """Give the cautions that come with every answer here: for an alloy, a diagram, or in general."""
    elements, usual = subject_of(alloy, diagram)
    return Answer(safety=safety_for(elements, process or usual, temperature_c))
