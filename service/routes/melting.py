"""Where an alloy begins and ends to melt."""

from typing import Annotated

from fastapi import Body

from service.process.melting import melting_of
from service.process.placed import placed, placed_text
from service.routes.parameters import AlloyText, TemperaturesQuery, ToleranceQuery, TracesQuery
from service.routes.strict import new_router
from service.schemas.address import numbers_of, tolerance_of
from service.schemas.melting import MeltingAnswer, MeltingQuestion

router = new_router("Melting")

EXAMPLES = {
    "tin-lead": {
        "summary": "Sn60Pb40 with its standard's tolerance, and the liquid fraction at two temperatures",
        "value": {"alloy": {"designation": "Sn60Pb40"}, "temperatures_c": [185, 188]},
    },
    "own tolerance": {
        "summary": "A silver–copper braze with a tolerance of its own",
        "value": {"alloy": {"composition_wt": {"Ag": 60, "Cu": 40}, "tolerance_wt": {"Ag": 1}}},
    },
    "tin-silver-copper": {
        "summary": "Tin with 3.8 % silver and 0.7 % copper: three elements, by minimisation",
        "value": {
            "alloy": {"composition_wt": {"Sn": 95.5, "Ag": 3.8, "Cu": 0.7}},
            "temperatures_c": [217, 218],
        },
    },
    "phosphorus": {"summary": "A copper–phosphorus braze", "value": {"alloy": {"designation": "CuP 182"}}},
    "printed values": {
        "summary": "A braze that no data cover: what its standard prints, as bounds",
        "value": {"alloy": {"designation": "BNi-2"}, "temperatures_c": [950, 985, 1010]},
    },
    "trace": {
        "summary": "A tin–copper solder with a trace of nickel, which may be left out",
        "value": {
            "alloy": {
                "composition_wt": {"Sn": 99.25, "Cu": 0.7, "Ni": 0.05},
                "leave_out_traces_below_wt": 0.1,
            }
        },
    },
}


@router.post("/melting", summary="Melting range and curve")
def ask_melting(question: Annotated[MeltingQuestion, Body(openapi_examples=EXAMPLES)]) -> MeltingAnswer:
    """Tell where an alloy begins and ends to melt, with the extremes over its composition tolerance.

    The curve gives the liquid fraction in between, at equilibrium. For a designation the figures its
    standard prints stand beside it.
    """
    return melting_of(placed(question.alloy), question.temperatures_c)


@router.get("/melting", summary="Melting range and curve, by address line")
def get_melting(
    alloy: AlloyText,
    tolerance: ToleranceQuery = None,
    temperatures: TemperaturesQuery = None,
    traces_below_wt: TracesQuery = None,
) -> MeltingAnswer:
    """Give the same answer as `POST /v1/melting`, for an alloy in one string."""
    subject = placed_text(alloy, traces_below_wt, tolerance_of(tolerance))
    return melting_of(subject, numbers_of(temperatures, "temperatures_c"), where="")
