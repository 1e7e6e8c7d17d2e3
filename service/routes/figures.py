"""Pictures: a diagram with the point asked about, and how an alloy melts."""

from typing import Annotated, Any

from fastapi import Query
from fastapi.responses import Response

from diagrams.figure_style import MEDIA_TYPES, PictureFormat
from diagrams.files.catalog import catalog
from service.process.pictures import diagram_picture, melting_picture
from service.process.placed import placed_text
from service.routes.diagrams import DiagramId
from service.routes.parameters import AlloyText
from service.routes.strict import new_router
from service.schemas.base import Finite

router = new_router("Diagrams")

PICTURE: dict[int | str, dict[str, Any]] = {
    200: {
        "description": "The picture, with source and cautions in it.",
        "content": {
            kind: {"schema": {"type": "string", "format": "binary"}} for kind in MEDIA_TYPES.values()
        },
    }
}
FormatQuery = Annotated[PictureFormat, Query(alias="format", description="`png` or `svg`.")]
SecondQuery = Annotated[
    Finite | None,
    Query(description="Mass percent of the second element of a point to mark.", examples=[40]),
]
PointQuery = Annotated[
    Finite | None, Query(description="Temperature of the point to mark, °C.", examples=[200])
]
TargetQuery = Annotated[
    Finite | None, Query(gt=0, le=1, description="Liquid mass fraction to mark.", examples=[0.8])
]


@router.get(
    "/diagrams/{id}/figure", summary="Picture of a diagram", response_class=Response, responses=PICTURE
)
def get_diagram_figure(
    diagram_id: DiagramId,
    form: FormatQuery = "png",
    second_wt: SecondQuery = None,
    temperature_c: PointQuery = None,
) -> Response:
    """Draw a stored diagram; with `second_wt` and `temperature_c` the point, its tie line and amounts too."""
    picture = diagram_picture(catalog().get(diagram_id), second_wt, temperature_c, form)
    return Response(picture, media_type=MEDIA_TYPES[form])


@router.get("/melting/figure", summary="Picture of melting", response_class=Response, responses=PICTURE)
def get_melting_figure(
    alloy: AlloyText, form: FormatQuery = "png", target_liquid_fraction: TargetQuery = None
) -> Response:
    """Draw the liquid share of an alloy against temperature, with solidus, liquidus and a target."""
    picture = melting_picture(placed_text(alloy), target_liquid_fraction, form)
    return Response(picture, media_type=MEDIA_TYPES[form])
