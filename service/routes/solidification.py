"""How an alloy freezes."""

from typing import Annotated

from fastapi import Body, Query

from service.process.placed import placed, placed_text
from service.process.solidification import solidification_of
from service.routes.parameters import AlloyText, TracesQuery
from service.routes.strict import new_router
from service.schemas.solidification import (
    RESIDUAL,
    Residual,
    SolidificationAnswer,
    SolidificationQuestion,
)

router = new_router("Melting")

EXAMPLES = {
    "lead-rich": {
        "summary": "A lead-rich solder: liquid far below its printed solidus when cooled quickly",
        "value": {"alloy": {"composition_wt": {"Pb": 90, "Sn": 10}}},
    },
    "bismuth in a lead-free joint": {
        "summary": "Tin with bismuth and silver: ends in a low eutectic",
        "value": {
            "alloy": {"composition_wt": {"Sn": 90, "Bi": 7.5, "Ag": 2.5}},
            "residual_liquid_fraction": 0.005,
        },
    },
}
ResidualQuery = Annotated[Residual, Query(alias="residual_liquid_fraction", description=RESIDUAL)]


@router.post("/solidification", summary="Freezing, slowly and quickly")
def ask_solidification(
    question: Annotated[SolidificationQuestion, Body(openapi_examples=EXAMPLES)],
) -> SolidificationAnswer:
    """Tell down to which temperature a cooling joint must be held still, at equilibrium and cooled quickly.

    Without diffusion in the solid (Scheil and Gulliver) is the worst that cooling can do; real joints lie
    between. Phases stand in the order in which they form.
    """
    return solidification_of(placed(question.alloy), question.residual_liquid_fraction)


@router.get("/solidification", summary="Freezing, by address line")
def get_solidification(
    alloy: AlloyText, residual: ResidualQuery = 0.001, traces_below_wt: TracesQuery = None
) -> SolidificationAnswer:
    """Give the same answer as `POST /v1/solidification`, for an alloy in one string."""
    return solidification_of(placed_text(alloy, traces_below_wt), residual, "")
