"""Whether a recorded run stayed within its window and limits."""

import json
from typing import Annotated, Any

from fastapi import Body, Query
from fastapi.responses import Response

from diagrams.figure_style import MEDIA_TYPES
from service.process.profiles.check import checked_run
from service.process.profiles.figure import draw_run
from service.process.profiles.shown import profile_of
from service.routes.figures import PICTURE
from service.routes.recordings import PARTS, QUESTION_PART, TABLE, TABLE_PART, RecordingRoute
from service.routes.strict import new_router
from service.schemas.profile import ProfileQuestion
from service.schemas.profile_address import ProfileAddress, ProfileFigureAddress
from service.schemas.profile_verdict import ProfileAnswer

router = new_router("Checking runs", route_class=RecordingRoute)

ADDRESSES = ("/v1/profile-checks", "/v1/profile-checks/figure")
EXAMPLES: dict[str, Any] = {
    "reflow": {
        "summary": "A board of the Ketterbeck works in its reflow oven, two joints and a relay (invented)",
        "value": {
            "alloy": {"designation": "Sn63Pb37"},
            "superheat_c": 15,
            "sensor_tolerance_c": 2,
            "upper_limits": [{"name": "Electrolytic capacitor", "limit_c": 235}],
            "limits": {
                "averaging_s": 10,
                "rise_c_per_s": {"at_most": 3},
                "time_above_solidus_s": {"at_least": 30, "at_most": 90},
                "soak": {"from_c": 120, "to_c": 160, "time_s": {"at_least": 60, "at_most": 120}},
                "peak_spread_c": 10,
            },
            "time_s": [0, 50, 140, 175, 190, 240, 300],
            "sensors": [
                {"name": "Corner joint", "temperature_c": [24, 118, 161, 212, 213, 120, 55]},
                {"name": "Ground joint", "temperature_c": [24, 112, 156, 206, 209, 124, 58]},
                {
                    "name": "Relay",
                    "on": "part",
                    "limit_c": 230,
                    "temperature_c": [24, 121, 164, 217, 215, 118, 53],
                },
            ],
        },
    },
    "standard": {
        "summary": "A lead-free board against the profile of a standard, named (invented)",
        "value": {
            "alloy": {"designation": "Sn96.5Ag3.5"},
            "window": {"minimum_peak_c": 235, "maximum_peak_c": 250},
            "standard_profile": "J-STD-020D Pb-free assembly",
            "sensors": [
                {
                    "name": "Body of U3",
                    "time_s": [0, 80, 170, 210, 230, 300],
                    "temperature_c": [25, 150, 198, 243, 244, 120],
                }
            ],
        },
    },
}
TABLE_EXAMPLE = """#? alloy=Sn63Pb37&superheat_c=15&limit_c=235
time,Corner joint,Ground joint
0,24,24
50,118,112
140,161,156
175,212,206
190,213,209
240,120,124
300,55,58
"""
_QUESTION = {key: value for key, value in EXAMPLES["reflow"]["value"].items() if key != "time_s"} | {
    "sensors": [{"name": "Relay", "on": "part", "limit_c": 230}]
}
PARTS_EXAMPLE = {
    QUESTION_PART: json.dumps(_QUESTION),
    TABLE_PART: "time;Corner joint;Relay\n0;24;24\n50;118;121\n140;161;164\n175;212,5;217\n190;213;215\n"
    "240;120;118\n300;55;53\n",
}
BODIES: dict[str, Any] = {
    "requestBody": {
        "content": {
            TABLE: {"schema": {"type": "string"}, "example": TABLE_EXAMPLE},
            PARTS: {
                "schema": {
                    "type": "object",
                    "required": [QUESTION_PART, TABLE_PART],
                    "properties": {
                        QUESTION_PART: {
                            "type": "string",
                            "examples": [PARTS_EXAMPLE[QUESTION_PART]],
                            "description": "JSON: the question, without columns; `sensors` may say of "
                            "a column by its `name` where the sensor sits (`on`, `limit_c`).",
                        },
                        TABLE_PART: {
                            "type": "string",
                            "contentMediaType": TABLE,
                            "description": "The table, as a file or as text.",
                        },
                    },
                    "additionalProperties": False,
                },
                "example": PARTS_EXAMPLE,
            },
        }
    }
}


@router.post("/profile-checks", summary="Verdict on a recorded run", openapi_extra=BODIES)
def check_profile(
    question: Annotated[ProfileQuestion, Body(openapi_examples=EXAMPLES)],
    address: Annotated[ProfileAddress, Query()],
) -> ProfileAnswer:
    """Judge a recorded run: every demand with its margin, pass or fail, the tightest margin and whose it is.

    Send JSON; or a table (`text/csv`: time in the first column, one sensor a column, names in the first
    line; comma, semicolon or tab, decimal point or comma) with the rest in the address line, or in a first
    line that begins with `#?`; or both as `multipart/form-data`, the question as the part `question`, the
    table as the part `table`. Everything is taken as straight lines between samples, so the verdict does
    not depend on the sampling.
    """
    return profile_of(question)


@router.post(
    "/profile-checks/figure",
    summary="Picture of a recorded run",
    openapi_extra=BODIES,
    response_class=Response,
    responses=PICTURE,
)
def draw_profile(
    question: Annotated[ProfileQuestion, Body(openapi_examples=EXAMPLES)],
    address: Annotated[ProfileFigureAddress, Query()],
) -> Response:
    """Draw the curves of a run over its window, the melting range and the liquid fraction.

    The question is that of `/v1/profile-checks`, in any of its forms.
    """
    picture = draw_run(checked_run(question), address.format)
    return Response(picture, media_type=MEDIA_TYPES[address.format])
