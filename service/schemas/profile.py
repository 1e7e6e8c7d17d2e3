"""A recorded run on the wire, and what is asked of it."""

from typing import Annotated, Literal

from pydantic import Field

from service.schemas.base import StrictModel
from service.schemas.profile_words import MOST_SAMPLES, MOST_SENSORS, Repair
from service.schemas.uncertainty import Difference
from service.schemas.window import (
    KnownKey,
    Name,
    Target,
    Temperature,
    WindowQuestion,
)

Times = Annotated[list[float], Field(max_length=MOST_SAMPLES, fail_fast=True)]
Readings = Annotated[list[float | None], Field(max_length=MOST_SAMPLES, fail_fast=True)]
Seconds = Annotated[float, Field(ge=1e-6, le=1e7)]
Amount = Annotated[float, Field(ge=0, le=1e7)]

STANDARD_PROFILE = (
    "Limits of a public standard by its name: `J-STD-020D SnPb eutectic assembly` or `J-STD-020D Pb-free "
    "assembly`."
)
CLASSIFICATION = (
    "With a standard profile: the component's classification temperature, by its key in `GET "
    "/v1/known-limits`."
)
CELSIUS = "The readings are °C even where they look like kelvin or °F."


class BoundsAsked(StrictModel):
    """A lower bound, an upper bound, or both."""

    at_least: Amount | None = Field(default=None, examples=[60])
    at_most: Amount | None = Field(default=None, examples=[90])


class SoakAsked(StrictModel):
    """Time between two temperatures on the way up."""

    from_c: Temperature = Field(examples=[150])
    to_c: Temperature = Field(examples=[200])
    time_s: BoundsAsked


class NearPeakAsked(StrictModel):
    """Time close to the peak."""

    within_c: Difference = Field(examples=[5])
    of_c: Temperature | None = Field(
        default=None, description="A temperature, °C, in place of the sensor's own peak."
    )
    time_s: BoundsAsked


class ToPeakAsked(StrictModel):
    """Time from a temperature to the peak."""

    from_c: Temperature = Field(examples=[25])
    time_s: BoundsAsked


class LimitsAsked(StrictModel):
    """Your own demands beside the window; rates are positive, times in seconds. Left out, none is made."""

    averaging_s: Seconds = Field(
        default=5.0,
        description="Rates are the change over so many seconds, wherever in the record it is greatest; never "
        "from sample to sample.",
    )
    rise_c_per_s: BoundsAsked | None = Field(default=None, description="The fastest rise.")
    fall_c_per_s: BoundsAsked | None = Field(default=None, description="The fastest fall.")
    freezing_c_per_s: BoundsAsked | None = Field(
        default=None, description="Mean rate from liquidus down to solidus, joints only."
    )
    time_above_solidus_s: BoundsAsked | None = Field(default=None, description="Joints only.")
    time_at_target_s: BoundsAsked | None = Field(
        default=None,
        description="Time at or above the temperature at which the target liquid fraction is reached at the "
        "least favourable composition in tolerance, joints only.",
    )
    soak: SoakAsked | None = None
    near_peak: NearPeakAsked | None = None
    to_peak: ToPeakAsked | None = None
    peak_spread_c: Difference | None = Field(
        default=None, description="Highest minus lowest peak of the joints, at most, °C."
    )


class WindowGiven(StrictModel):
    """A window of your own, as readings."""

    minimum_peak_c: Temperature | None = Field(default=None, examples=[205])
    maximum_peak_c: Temperature | None = Field(default=None, examples=[225])


class SensorAsked(StrictModel):
    """One sensor's record."""

    name: Name = Field(description="Your name for it; no two may be alike.", examples=["U7 corner"])
    on: Literal["joint", "part"] = Field(
        default="joint",
        description="`joint`: must reach the window; `part`: must only not get too hot.",
    )
    limit_c: Temperature | None = Field(
        default=None, description="Highest reading of a part, °C, if it is lower than the window's."
    )
    time_s: Times | None = Field(
        default=None, description="Times of its samples, s, rising; left out, those of the question."
    )
    temperature_c: Readings = Field(description="Readings, °C; null where a sample is missing.")


class ProfileQuestion(WindowQuestion):
    """A recorded run and all that is asked of it; `/v1/window`'s fields, or a window of your own."""

    target_liquid_fraction: Target = Field(
        default=1.0, description="Share of the filler's mass that must become liquid in every joint."
    )
    window: WindowGiven | None = Field(
        default=None,
        description="A window of your own in place of one worked out; then superheat, spread and upper "
        "limits belong to it and are not given here; the uncertainty budget counts for earlier joints only.",
    )
    limits: LimitsAsked = LimitsAsked()
    standard_profile: Annotated[str, Field(min_length=1, max_length=100)] | None = Field(
        default=None,
        description=STANDARD_PROFILE,
    )
    classification: KnownKey | None = Field(
        default=None,
        description=CLASSIFICATION,
    )
    time_s: Times | None = Field(default=None, description="Times of all sensors without their own, s.")
    sensors: Annotated[list[SensorAsked], Field(min_length=1, max_length=MOST_SENSORS)]
    repairs: Annotated[list[Repair], Field(max_length=20)] = Field(
        default=[],
        description="Faults of the record that may be mended; each that was is listed. Without, they are "
        "refused.",
    )
    longest_gap_s: Seconds | None = Field(
        default=None,
        description="A longer pause is a gap; left out, ten times the usual interval, 2 s at least.",
    )
    fastest_c_per_s: Seconds = Field(
        default=200.0,
        description="A change of more than 30 °C from sample to sample, faster than this, is a jump.",
    )
    readings_are_celsius: bool = Field(default=False, description=CELSIUS)
