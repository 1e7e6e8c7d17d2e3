"""Sections through systems of three and more elements."""

from typing import Annotated

from fastapi import Body, Path
from fastapi.responses import Response

from diagrams.figure_style import MEDIA_TYPES
from service.process.sections import known_section, section_of, section_picture
from service.process.sections_answer import section_json, sections_shown
from service.routes.figures import PICTURE, FormatQuery
from service.routes.strict import new_router
from service.schemas.sections import SectionAnswer, SectionQuestion, SectionsAnswer

router = new_router("Diagrams")
JSON = "application/json"

EXAMPLES = {
    "copper in SAC305": {
        "summary": "Lead-free solder that dissolves copper, to 5 %: stored",
        "value": {
            "from_alloy": {"designation": "SAC305"},
            "to_alloy": {"composition_wt": {"Cu": 100}},
            "to_share_max": 5,
        },
    },
    "copper in BAg-6": {
        "summary": "A silver brazing filler that dissolves copper, near its melting range: computed",
        "value": {
            "from_alloy": {"designation": "BAg-6"},
            "to_alloy": {"composition_wt": {"Cu": 100}},
            "to_share_max": 20,
            "temperature_range_c": [600, 900],
        },
    },
}
SectionId = Annotated[
    str,
    Path(
        alias="id",
        min_length=1,
        max_length=40,
        description="Id of a section, as `GET /v1/sections` or `POST /v1/sections` gives it.",
        examples=["ad41fe44d559"],
    ),
]


@router.get("/sections", summary="All stored sections")
def list_sections() -> SectionsAnswer:
    """List the stored sections between alloys of three and more elements."""
    return sections_shown()


@router.post("/sections", summary="A section between two alloys", response_model=SectionAnswer)
def ask_section(question: Annotated[SectionQuestion, Body(openapi_examples=EXAMPLES)]) -> Response:
    """Give all mixtures of two alloys against temperature: fields as polygons, lines of equal liquid share.

    x is the mass percent of `to_alloy`, y °C. Stored sections are answered at once; others are computed,
    which takes some seconds, and kept for a while: their picture is at `figure`.
    """
    return Response(section_json(section_of(question)), media_type=JSON)


@router.get("/sections/{id}", summary="One section, by its id", response_model=SectionAnswer)
def get_section(section_id: SectionId) -> Response:
    """Give a stored section, or one computed before and still kept."""
    return Response(section_json(known_section(section_id)), media_type=JSON)


@router.get(
    "/sections/{id}/figure", summary="Picture of a section", response_class=Response, responses=PICTURE
)
def get_section_figure(section_id: SectionId, form: FormatQuery = "png") -> Response:
    """Draw a section with its fields, levels and lines of equal liquid share."""
    return Response(section_picture(known_section(section_id), form), media_type=MEDIA_TYPES[form])
