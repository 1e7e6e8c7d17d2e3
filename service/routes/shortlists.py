"""Which filler to take in the first place."""

from typing import Annotated

from fastapi import Body

from service.process.shortlist_answer import shortlist_of
from service.routes.strict import new_router
from service.schemas.shortlists import ShortlistAnswer, ShortlistQuestion

router = new_router("Fillers and safety")

EXAMPLES = {
    "second solder": {
        "summary": "A lead-free solder for the second step of a module of the Ketterbeck works (invented)",
        "value": {
            "base_metals": ["cu-c10200-c11000"],
            "service_temperature_c": 90,
            "highest_peak_c": 250,
            "superheat_c": 15,
            "sensor_class": "IEC 60584 type K class 1",
            "spread_c": 5,
            "earlier_joints": [{"name": "Die", "alloy": {"designation": "Sn5Pb92.5Ag2.5"}, "margin_c": 10}],
            "class": "solder",
            "most_homologous": 0.8,
            "bans": {"lead": True, "cadmium": True},
            "most": 5,
        },
    },
    "pipe": {
        "summary": "A braze between copper and brass pipes of the Ketterbeck works, 90 % liquid (invented)",
        "value": {
            "base_metals": ["cu-c12200-dhp", "brass-c26000-70-30"],
            "base_metal_margin_c": 50,
            "target_liquid_fraction": 0.9,
            "sensor_tolerance_c": 8,
            "spread_c": 30,
            "class": "braze",
            "bans": {"cadmium": True},
            "stocked_fillers": ["CuP 182", "BAg-8", "BAg-24", "BCuZn-E", "BAlSi-4"],
        },
    },
}


@router.post("/shortlists", summary="Fillers that would do for a joint, ranked")
def make_shortlist(
    question: Annotated[ShortlistQuestion, Body(openapi_examples=EXAMPLES)],
) -> ShortlistAnswer:
    """Rank the fillers of the table by the width of their window, with what speaks for and against each.

    Those that would not do come with every reason: barred elements, practice on these base metals, melting
    in use, no window. With a target under 1 at most six alloys of three and more elements are computed, the
    most promising; the others are judged by their printed melting range and say so.
    """
    return shortlist_of(question)
