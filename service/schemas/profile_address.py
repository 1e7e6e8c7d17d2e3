"""What is asked of a run whose record comes as a text table: the rest stands in the address line."""

from typing import Annotated

from pydantic import BaseModel, ConfigDict, Field

from diagrams.figure_style import PictureFormat
from service.schemas.address import LONGEST_LIST, TOLERANCE
from service.schemas.profile import CELSIUS, CLASSIFICATION, STANDARD_PROFILE
from service.schemas.uncertainty import (
    COMBINATION,
    COUNT_DATA,
    DATA,
    SENSOR,
    SENSOR_CLASS,
    SPREAD,
    ClassName,
    Difference,
)
from service.schemas.uncertainty_words import Combination
from service.schemas.window import (
    SUPERHEAT,
    TARGET,
    KnownKey,
    Target,
    Temperature,
)

ONLY_WITH_A_TABLE = "With a table (`text/csv`) only. "


class ProfileAddress(BaseModel):
    """The simple fields of a profile check; with JSON all of them belong into the body."""

    model_config = ConfigDict(extra="forbid", allow_inf_nan=False, frozen=True)

    alloy: str | None = Field(
        default=None,
        min_length=1,
        max_length=200,
        description=ONLY_WITH_A_TABLE + "The filler: a designation, or symbols with mass percent (`Sn60Pb`).",
    )
    tolerance_wt: str | None = Field(
        default=None, min_length=1, max_length=LONGEST_LIST, description=ONLY_WITH_A_TABLE + TOLERANCE
    )
    target_liquid_fraction: Target | None = Field(default=None, description=ONLY_WITH_A_TABLE + TARGET)
    superheat_c: Difference | None = Field(default=None, description=ONLY_WITH_A_TABLE + SUPERHEAT)
    sensor_tolerance_c: Difference | None = Field(default=None, description=ONLY_WITH_A_TABLE + SENSOR)
    sensor_class: ClassName | None = Field(default=None, description=ONLY_WITH_A_TABLE + SENSOR_CLASS)
    spread_c: Difference | None = Field(default=None, description=ONLY_WITH_A_TABLE + SPREAD)
    data_tolerance_c: Difference | None = Field(default=None, description=ONLY_WITH_A_TABLE + DATA)
    count_data: bool | None = Field(default=None, description=ONLY_WITH_A_TABLE + COUNT_DATA)
    combination: Combination | None = Field(default=None, description=ONLY_WITH_A_TABLE + COMBINATION)
    limit_c: Temperature | None = Field(
        default=None, description=ONLY_WITH_A_TABLE + "One upper limit, °C, which the answer names `limit`."
    )
    known_limit: KnownKey | None = Field(
        default=None, description=ONLY_WITH_A_TABLE + "Key of a stored upper limit (`GET /v1/known-limits`)."
    )
    minimum_peak_c: Temperature | None = Field(
        default=None, description=ONLY_WITH_A_TABLE + "Lower end of a window of your own, °C."
    )
    maximum_peak_c: Temperature | None = Field(
        default=None, description=ONLY_WITH_A_TABLE + "Upper end of a window of your own, °C."
    )
    standard_profile: Annotated[str, Field(min_length=1, max_length=100)] | None = Field(
        default=None, description=ONLY_WITH_A_TABLE + STANDARD_PROFILE
    )
    classification: KnownKey | None = Field(default=None, description=ONLY_WITH_A_TABLE + CLASSIFICATION)
    repairs: str | None = Field(
        default=None,
        min_length=1,
        max_length=500,
        description=ONLY_WITH_A_TABLE + "Repairs that may be made, with commas between: `bridge gaps,leave "
        "out jumps`.",
    )
    readings_are_celsius: bool | None = Field(default=None, description=ONLY_WITH_A_TABLE + CELSIUS)


class ProfileFigureAddress(ProfileAddress):
    """The same for the picture of a run."""

    format: PictureFormat = Field(default="png", description="`png` or `svg`, also with JSON.")
