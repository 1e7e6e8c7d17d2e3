"""Solder baths and pots."""

from typing import Annotated

from fastapi import Body

from service.process.baths_answer import bath_answer
from service.routes.strict import new_router
from service.schemas.baths import BathAnswer, BathQuestion

router = new_router("Baths")

EXAMPLES = {
    "copper in a wave": {
        "summary": "The wave of the Ketterbeck works picks up copper (invented)",
        "value": {
            "kind": "SnPb assembly",
            "volume_l": 25,
            "balance": "Pb",
            "analyses": [
                {"day": 0, "composition_wt": {"Sn": 63.0, "Cu": 0.12, "Ag": 0.01}},
                {"day": 14, "composition_wt": {"Sn": 62.9, "Cu": 0.17, "Ag": 0.02}},
                {"day": 28, "composition_wt": {"Sn": 62.9, "Cu": 0.20, "Ag": 0.02}},
                {"day": 42, "composition_wt": {"Sn": 62.8, "Cu": 0.25, "Ag": 0.03}},
            ],
            "replacement": {"designation": "Sn63Pb37"},
        },
    },
    "lead in a pot": {
        "summary": "A lead-free pot of the Ketterbeck works that met leaded terminals (invented)",
        "value": {
            "kind": "SAC305 pot",
            "mass_kg": 40,
            "balance": "Sn",
            "analyses": [{"day": 3, "composition_wt": {"Ag": 2.9, "Cu": 0.7, "Pb": 0.14}}],
            "replacement": {"designation": "SAC305"},
        },
    },
}


@router.post("/baths", summary="A bath against its limits, its drift and its cure")
def ask_bath(question: Annotated[BathQuestion, Body(openapi_examples=EXAMPLES)]) -> BathAnswer:
    """Hold each element against its published limit and tell when its drift will meet it.

    Told as well: how melting and sludge temperature moved, and how much of the bath to draw off and replace
    to come back within the targets. Too few analyses are said, not guessed from.
    """
    return bath_answer(question)
