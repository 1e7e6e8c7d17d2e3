"""What becomes of alloys that melt together."""

from typing import Annotated

from fastapi import Body

from service.process.mixtures import mixture_of
from service.routes.strict import new_router
from service.schemas.mixtures import MixtureAnswer, MixturesQuestion

router = new_router("Mixing")

EXAMPLES = {
    "ball in paste": {
        "summary": "Lead-free balls in a leaded paste, repaired at the Ketterbeck works (invented)",
        "value": {
            "parts": [
                {"alloy": {"designation": "Sn63Pb37"}, "paste_volume_mm3": 25, "metal_volume_share": 0.5},
                {"alloy": {"designation": "SAC305"}, "ball_diameter_mm": 0.6, "count": 256},
            ],
            "temperature_c": 205,
        },
    },
    "leaded repair": {
        "summary": "A lug of the Ketterbeck works, tinned with Sn60Pb40, soldered with Sn63Pb37 (invented)",
        "value": {
            "parts": [
                {"alloy": {"designation": "Sn63Pb37"}, "mass_g": 0.8},
                {"alloy": {"designation": "Sn60Pb40"}, "plating_thickness_um": 40, "area_mm2": 90},
            ],
            "temperature_c": 185,
        },
    },
    "silver plate": {
        "summary": "Balls of pure tin on silver-plated pads, by geometry (invented, Ketterbeck works)",
        "value": {
            "parts": [
                {"alloy": {"composition_wt": {"Sn": 100}}, "ball_diameter_mm": 0.76, "count": 256},
                {"alloy": {"composition_wt": {"Ag": 100}}, "plating_thickness_um": 5, "area_mm2": 74},
            ]
        },
    },
    "gold plate": {
        "summary": "Too much gold for a little solder: embrittlement is warned of (invented)",
        "value": {
            "parts": [
                {
                    "alloy": {"composition_wt": {"Sn": 100}},
                    "paste_volume_mm3": 0.4,
                    "metal_volume_share": 0.5,
                },
                {"alloy": {"composition_wt": {"Au": 100}}, "plating_thickness_um": 1.5, "area_mm2": 6},
            ]
        },
    },
}


@router.post("/mixtures", summary="Alloys that melt together")
def ask_mixture(question: Annotated[MixturesQuestion, Body(openapi_examples=EXAMPLES)]) -> MixtureAnswer:
    """Tell the composition and melting of a mixture, what it does to the first part's window, what to mind.

    Parts are given by mass, or by the geometry of balls, paste or platings. Compositions are nominal.
    """
    return mixture_of(question)
