"""In which order the joints of an assembly are made."""

from typing import Annotated

from fastapi import Body

from service.process.steps_answer import steps_of
from service.routes.strict import new_router
from service.schemas.steps import StepsAnswer, StepsQuestion

router = new_router("Step soldering")

EXAMPLES = {
    "three steps": {
        "summary": "A sensor head of the Ketterbeck works: die, lid and leads (invented)",
        "value": {
            "joints": [
                {"name": "Leads", "alloy": {"designation": "Sn63Pb37"}, "superheat_c": 15},
                {"name": "Die", "alloy": {"composition_wt": {"Au": 80, "Sn": 20}}, "superheat_c": 20},
                {"name": "Lid", "alloy": {"designation": "Sn95Sb5"}, "superheat_c": 10},
            ],
            "sensor_tolerance_c": 2,
        },
    },
    "no order": {
        "summary": "Two joints of one eutectic collide; the shelf of the Ketterbeck works helps (invented)",
        "value": {
            "joints": [
                {"name": "Ground strap", "alloy": {"designation": "Sn63Pb37"}, "superheat_c": 15},
                {"name": "Pins", "alloy": {"designation": "Sn63Pb37"}, "superheat_c": 15},
            ],
            "stocked_fillers": ["Sn96.5Ag3.5", "Sn95Sb5", "Bi58Sn42", "Sn60Pb40"],
        },
    },
}


@router.post("/step-plans", summary="Order of the heatings of an assembly")
def plan_steps(question: Annotated[StepsQuestion, Body(openapi_examples=EXAMPLES)]) -> StepsAnswer:
    """Find an order in which each later heating leaves the earlier joints within what they may melt.

    Each step comes with its window and with what the joints before it go through. Where no order exists the
    joints that collide are named, with the degrees that are missing; stocked fillers are tried on request.
    """
    return steps_of(question)
