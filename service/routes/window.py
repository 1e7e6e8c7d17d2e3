"""How hot a joint must get and how hot it may get."""

from typing import Annotated

from fastapi import Body, Query

from service.process.window_answer import window_at, window_of
from service.routes.strict import new_router
from service.schemas.window import WindowAddress, WindowAnswer, WindowQuestion

router = new_router("Window")

EXAMPLES = {
    "second joint": {
        "summary": "A board of the Ketterbeck works: Sn63Pb37 beside joints of Sn96.5Ag3.5 (invented)",
        "value": {
            "alloy": {"designation": "Sn63Pb37"},
            "target_liquid_fraction": 1,
            "superheat_c": 15,
            "sensor_tolerance_c": 2,
            "spread_c": 6,
            "upper_limits": [{"name": "Electrolytic capacitor", "limit_c": 220}],
            "earlier_joints": [
                {"name": "Terminal lug", "alloy": {"designation": "Sn96.5Ag3.5"}, "margin_c": 5}
            ],
        },
    },
    "no window": {
        "summary": "The same parts with a low-melting joint already in place: what collides, and by how much",
        "value": {
            "alloy": {"designation": "Sn63Pb37"},
            "target_liquid_fraction": 1,
            "superheat_c": 15,
            "earlier_joints": [
                {
                    "name": "Sensor foil",
                    "alloy": {"designation": "Bi58Sn42"},
                    "max_liquid_fraction": 0.1,
                    "margin_c": 5,
                }
            ],
        },
    },
    "brazing": {
        "summary": "A pipe joint of the Ketterbeck works brazed with CuP 182, 90 % liquid (invented)",
        "value": {
            "alloy": {"designation": "CuP 182"},
            "target_liquid_fraction": 0.9,
            "superheat_c": 20,
            "sensor_tolerance_c": 8,
            "spread_c": 25,
            "upper_limits": [
                {"name": "Copper pipe, grain growth", "limit_c": 900},
                {"name": "Valve body", "known": "brass-c36000-free-cutting", "margin_c": 25},
            ],
        },
    },
}


@router.post("/window", summary="Temperature window of a joint")
def ask_window(question: Annotated[WindowQuestion, Body(openapi_examples=EXAMPLES)]) -> WindowAnswer:
    """Tell how hot the coldest joint must read, how hot the hottest may read, and what decides.

    The filler must reach the target liquid fraction even at the least favourable composition in tolerance;
    parts, base metals and earlier joints bound it above. Every term comes with its reason.
    """
    return window_of(question)


@router.get("/window", summary="Temperature window of a joint, by address line")
def get_window(address: Annotated[WindowAddress, Query()]) -> WindowAnswer:
    """Give the same answer as `POST /v1/window`, for a filler in one string and one upper limit."""
    return window_at(address)
