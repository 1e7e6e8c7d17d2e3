"""The stored diagrams as numbers."""

from typing import Annotated

from fastapi import Path

from diagrams.files.catalog import catalog
from service.routes.strict import new_router
from service.safety import safety_for
from service.schemas.diagrams import DiagramAnswer, DiagramsAnswer, diagram_shown, summary_shown

router = new_router("Diagrams")

DiagramId = Annotated[
    str,
    Path(
        alias="id",
        min_length=1,
        max_length=40,
        description="Id of a diagram: element symbols in alphabetical order, such as `pb-sn`.",
        examples=["pb-sn"],
    ),
]


@router.get("/diagrams", summary="All stored diagrams")
async def list_diagrams() -> DiagramsAnswer:
    """List the stored diagrams with their ranges, editions, sources and known weak spots."""
    stored = catalog().diagrams.values()
    elements = frozenset(element for diagram in stored for element in diagram.elements)
    return DiagramsAnswer(diagrams=[summary_shown(d) for d in stored], safety=safety_for(elements))


@router.get("/diagrams/{id}", summary="One diagram: fields, invariants, compounds")
async def get_diagram(diagram_id: DiagramId) -> DiagramAnswer:
    """Give the fields as polygons (x = mass percent of the second element, y = °C) and the invariants."""
    return diagram_shown(catalog().get(diagram_id))
