"""The standard fillers."""

from typing import Annotated

from fastapi import Path, Query

from diagrams.errors import UnknownAlloy
from diagrams.fillers import FILLERS_EDITION, FILLERS_GUIDANCE, find_filler
from service.problems import Refusal, field_error
from service.process.fillers import choose, covered, elements_told_of
from service.routes.strict import new_router
from service.safety import safety_for
from service.schemas.fillers import FillerAnswer, FillersAnswer, FillersWanted, filler_shown

router = new_router("Fillers and safety")

Designation = Annotated[
    str,
    Path(
        min_length=1,
        max_length=100,
        description="Designation in any of the standards; case, spaces and hyphens do not matter.",
        examples=["BAg-8"],
    ),
]


@router.get("/fillers", summary="Standard fillers, by conditions")
async def list_fillers(wanted: Annotated[FillersWanted, Query()]) -> FillersAnswer:
    """List the fillers of ISO 9453, J-STD-006, ISO 17672 and AWS A5.8 that meet every condition given.

    The figures are for guidance, each with its source; the standard in force decides.
    """
    chosen = choose(wanted)
    shown = [filler_shown(filler, covered().get(filler.name)) for filler in chosen]
    return FillersAnswer(
        count=len(shown),
        fillers=shown,
        edition=FILLERS_EDITION,
        guidance=FILLERS_GUIDANCE,
        safety=safety_for(elements_told_of(chosen, wanted), wanted.class_),
    )


@router.get("/fillers/{designation}", summary="One standard filler")
async def get_filler(designation: Designation) -> FillerAnswer:
    """Give a filler's composition, limits, melting and brazing range as its standards print them."""
    try:
        filler = find_filler(designation)
    except UnknownAlloy as error:  # here the designation is the address, so the address is wrong
        wrong = field_error("path", ("designation",), str(error), error.remedy)
        raise Refusal("not-found", f"{error} {error.remedy}", [wrong]) from None
    shown = filler_shown(filler, covered().get(filler.name))
    safety = safety_for(shown.composition_wt, shown.class_)
    return FillerAnswer(**dict(shown), edition=FILLERS_EDITION, guidance=FILLERS_GUIDANCE, safety=safety)
