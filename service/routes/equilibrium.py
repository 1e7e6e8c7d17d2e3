"""What is liquid and what is solid at a temperature."""

from typing import Annotated

from fastapi import Body

from service.process.equilibrium import equilibria_of, equilibrium_of
from service.process.placed import is_quick, placed, placed_text
from service.routes.offload import answered
from service.routes.parameters import AlloyText, TemperatureQuery, TracesQuery
from service.routes.strict import new_router
from service.schemas.equilibrium import (
    EquilibriaAnswer,
    EquilibriaQuestion,
    EquilibriumAnswer,
    EquilibriumQuestion,
)

router = new_router("Melting")

EXAMPLES = {
    "tin-lead": {
        "summary": "Sn63Pb37 a little below its eutectic",
        "value": {"alloy": {"designation": "Sn63Pb37"}, "temperature_c": 180},
    },
    "pasty": {
        "summary": "A plumber's solder in its pasty range, by mass percent",
        "value": {"alloy": {"composition_wt": {"Pb": 70, "Sn": 30}}, "temperature_c": 220},
    },
    "tin-silver-copper": {
        "summary": "SAC305 between solidus and liquidus: three elements, by minimisation",
        "value": {"alloy": {"designation": "SAC305"}, "temperature_c": 218.5},
    },
    "silver-copper": {
        "summary": "A silver–copper braze, by atomic percent",
        "value": {"alloy": {"composition_at": {"Ag": 50, "Cu": 50}}, "temperature_c": 800},
    },
}
COLUMNS = {
    "column": {
        "summary": "Sn63Pb37 and its neighbours across the eutectic; the last point lies outside the data",
        "value": {
            "diagram": "pb-sn",
            "second_wt": [60, 63, 63, 70, 63],
            "temperature_c": [185, 180, 190, 185, 900],
        },
    }
}


@router.post("/equilibrium", summary="Phases at a temperature")
async def ask_equilibrium(
    question: Annotated[EquilibriumQuestion, Body(openapi_examples=EXAMPLES)],
) -> EquilibriumAnswer:
    """Tell which phases an alloy consists of at a temperature, and how much of each, at equilibrium.

    One or two elements are read off the stored diagram by the lever rule, more are computed by minimising
    the Gibbs energy. Joints that cool quickly solidify later than that.
    """
    return await answered(
        is_quick(question.alloy), lambda: equilibrium_of(placed(question.alloy), question.temperature_c)
    )


@router.get("/equilibrium", summary="Phases at a temperature, by address line")
async def get_equilibrium(
    alloy: AlloyText, temperature_c: TemperatureQuery, traces_below_wt: TracesQuery = None
) -> EquilibriumAnswer:
    """Give the same answer as `POST /v1/equilibrium`, for an alloy in one string."""
    return await answered(
        is_quick(alloy), lambda: equilibrium_of(placed_text(alloy, traces_below_wt), temperature_c)
    )


@router.post("/equilibria", summary="Phases at many points")
def ask_equilibria(
    question: Annotated[EquilibriaQuestion, Body(openapi_examples=COLUMNS)],
) -> EquilibriaAnswer:
    """Tell the field and the liquid fraction at up to 200 000 points of one diagram, in columns.

    Points outside the data are marked and never moved.
    """
    return equilibria_of(question)
