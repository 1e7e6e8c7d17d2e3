"""What becomes of a joint into which a finish or base metal dissolves."""

from typing import Annotated

from fastapi import Body

from service.process.dissolution import dissolution_of
from service.routes.strict import new_router
from service.schemas.dissolution import DissolutionAnswer, DissolutionQuestion

router = new_router("Mixing")

EXAMPLES = {
    "silver plate": {
        "summary": "A silver-plated contact of the Ketterbeck works in pure tin (invented)",
        "value": {
            "alloy": {"composition_wt": {"Sn": 100}},
            "solder_mass_g": 0.02,
            "metal": "Ag",
            "thickness_um": 6,
            "area_mm2": 12,
        },
    },
    "gold": {
        "summary": "Gold-plated pins in Sn63Pb37: how near is embrittlement? (invented, Ketterbeck works)",
        "value": {
            "alloy": {"designation": "Sn63Pb37"},
            "solder_volume_mm3": 2.5,
            "metal": "Au",
            "thickness_um": 1.3,
            "area_mm2": 18,
        },
    },
    "published rate": {
        "summary": "A little gold in Sn60Pb40 at 232 °C for 0.2 s, by its published rate; a trace",
        "value": {
            "alloy": {"designation": "Sn60Pb40"},
            "solder_mass_g": 0.5,
            "metal": "Au",
            "time_above_melting_s": 0.2,
            "temperature_c": 232,
            "area_mm2": 20,
            "leave_out_traces_below_wt": 0.1,
        },
    },
}


@router.post("/dissolution", summary="A metal that dissolves into a joint")
def ask_dissolution(
    question: Annotated[DissolutionQuestion, Body(openapi_examples=EXAMPLES)],
) -> DissolutionAnswer:
    """Tell what a joint becomes as a finish or base metal dissolves: path, melting, embrittlement limits.

    The amount is given, or follows from a published rate at the one temperature and solder it was measured
    at. Compositions are nominal.
    """
    return dissolution_of(question)
