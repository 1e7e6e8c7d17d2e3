"""A finish or base metal that dissolves into a solder."""

from typing import Annotated, Literal

from pydantic import Field

from diagrams.questions.traces import MOST_TRACE_WT
from service.schemas.alloy import TRACES, AlloyAsked
from service.schemas.base import Answer, AnswerModel, StrictModel
from service.schemas.mixtures import Area, Mass, Mixed, Thickness, Volume
from service.schemas.source import Reference

Seconds = Annotated[float, Field(gt=0, le=1e6)]


class DissolutionQuestion(StrictModel):
    """A solder, a metal, and how much of it dissolves."""

    alloy: AlloyAsked = Field(description="The solder or braze.")
    solder_mass_g: Mass | None = Field(default=None, description="Mass of the solder, g; or its volume.")
    solder_volume_mm3: Volume | None = Field(
        default=None, description="Volume of the solid solder, mm³; or its mass."
    )
    metal: str = Field(
        min_length=1, max_length=2, description="Symbol of the metal that dissolves.", examples=["Ag"]
    )
    mass_g: Mass | None = Field(
        default=None, description="Mass that dissolves, g; or thickness_um with area_mm2."
    )
    thickness_um: Thickness | None = Field(
        default=None,
        description="Thickness of the layer, µm: all of it dissolves; with `time_above_melting_s` no more.",
    )
    area_mm2: Area | None = Field(default=None, description="Wetted area of the layer, mm².")
    time_above_melting_s: Seconds | None = Field(
        default=None,
        description="Time for which the solder is molten, s; a published rate times it gives the thickness. "
        "Only Sn60Pb40 at 232 °C has published rates here; anything else is refused, not extrapolated.",
    )
    temperature_c: float | None = Field(
        default=None,
        description="Temperature of the molten solder, °C: needed with `time_above_melting_s`; the state of "
        "the mixture at it is answered besides.",
    )
    leave_out_traces_below_wt: Annotated[float, Field(gt=0, le=MOST_TRACE_WT)] | None = Field(
        default=None, description="As of an alloy, for the mixture. " + TRACES
    )


class Rate(AnswerModel):
    """The published rate an amount was reckoned with."""

    um_per_s: float = Field(description="Thickness that dissolves, µm/s.")
    conditions: str = Field(description="Solder and temperature it was measured at.")
    reference: Reference
    edition: str


class Dissolved(AnswerModel):
    """How much dissolves."""

    metal: str
    mass_g: float
    thickness_um: float | None = Field(description="As a layer on the area given, µm; null without an area.")
    by: Literal["mass", "thickness", "published rate"]
    used_up: bool | None = Field(
        description="By a rate, whether the layer given is gone before the time is; otherwise null."
    )
    rate: Rate | None


class PathPoint(AnswerModel):
    """The joint when a share of the amount has dissolved."""

    share: float = Field(description="Share of the amount, 0 to 1.")
    mass_g: float = Field(description="Mass dissolved by then, g.")
    thickness_um: float | None = Field(description="The same as a layer, µm; null without an area.")
    composition_wt: dict[str, float] = Field(description="Mass percent.")
    solidus_c: float | None = Field(description="Solidus, °C; null where no data tell.")
    liquidus_c: float | None = Field(description="Liquidus, °C; null where no data tell.")
    unknown: str | None = Field(description="Why no data tell, if none do.")


class LimitReached(AnswerModel):
    """A limit on the metal in the joint, and how near it is."""

    name: str
    limit: float
    unit: Literal["wt%", "vol%", "µm"]
    value: float = Field(description="What the joint comes to, in the same unit.")
    reached: bool = Field(description="Whether the limit is reached or passed.")
    at_mass_g: float | None = Field(description="Mass of the metal at which it is reached, g.")
    at_thickness_um: float | None = Field(
        description="The same as a layer on the area given, µm; null without an area."
    )
    note: str
    reference: Reference
    edition: str = Field(description="Edition of the table it stands in.")


class DissolutionAnswer(Mixed, Answer):
    """What becomes of a joint into which a metal dissolves."""

    dissolved: Dissolved
    path: list[PathPoint] = Field(
        description="From the solder as it is to all of the amount dissolved, in 11 steps."
    )
    limits: list[LimitReached] = Field(
        description="Limits of the reference tables on this metal in such a joint: embrittlement by gold in "
        "tin-based solder, lead and cadmium. Empty if they hold none, which does not mean that there is none."
    )
