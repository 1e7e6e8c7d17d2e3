"""Alloys that melt together: a ball in a paste, a plating in a solder, a top-up in a bath."""

from typing import Annotated, Literal

from pydantic import Field

from diagrams.questions.traces import MOST_TRACE_WT
from service.schemas.alloy import TRACES, AlloyAsked, AlloyUsed
from service.schemas.base import Answer, AnswerModel, StrictModel
from service.schemas.equilibrium import State
from service.schemas.melting import CurvePoint
from service.schemas.source import Reference, SourceUsed

MOST_PARTS = 20

Mass = Annotated[float, Field(gt=0, le=1e6)]
Area = Annotated[float, Field(gt=0, le=1e9)]
Thickness = Annotated[float, Field(gt=0, le=1e5)]
Volume = Annotated[float, Field(gt=0, le=1e9)]


class PartAsked(StrictModel):
    """An alloy and how much of it: its mass, or in one of three ways the geometry that gives it."""

    alloy: AlloyAsked
    mass_g: Mass | None = Field(default=None, description="Mass, g.", examples=[0.5])
    ball_diameter_mm: Annotated[float, Field(gt=0, le=1000)] | None = Field(
        default=None, description="Diameter of balls, mm; `count` goes with it."
    )
    count: Annotated[int, Field(ge=1, le=10_000_000)] | None = Field(
        default=None, description="Number of balls; 1 if left out."
    )
    paste_volume_mm3: Volume | None = Field(
        default=None, description="Volume of paste, mm³; `metal_volume_share` goes with it."
    )
    metal_volume_share: Annotated[float, Field(gt=0, le=1)] | None = Field(
        default=None, description="Share of the paste's volume that is metal, 0 to 1; about 0.5 is usual."
    )
    plating_thickness_um: Thickness | None = Field(
        default=None, description="Thickness of a plating, µm; `area_mm2` goes with it."
    )
    area_mm2: Area | None = Field(default=None, description="Area of the plating that dissolves, mm².")


class MixturesQuestion(StrictModel):
    """What melts together, the filler that the joint was meant to have first."""

    parts: list[PartAsked] = Field(
        min_length=1,
        max_length=MOST_PARTS,
        description="The parts; the first is what the rest is held against.",
    )
    temperature_c: float | None = Field(
        default=None, description="Temperature, °C, at which the state of the mixture is wanted besides."
    )
    leave_out_traces_below_wt: Annotated[float, Field(gt=0, le=MOST_TRACE_WT)] | None = Field(
        default=None, description="As of an alloy, for the mixture. " + TRACES
    )


class PartUsed(AnswerModel):
    """A part as the answer used it."""

    alloy: AlloyUsed
    mass_g: float = Field(description="Its mass, g.")
    mass_share: float = Field(description="Its share of the mass of all parts, 0 to 1.")
    density_g_per_cm3: float = Field(
        description="Its density as reckoned from its elements by adding their volumes, g/cm³; used where "
        "the part is given by geometry."
    )
    solidus_c: float | None = Field(description="Its own solidus, °C; null if no data tell.")
    liquidus_c: float | None = Field(description="Its own liquidus, °C; null if no data tell.")
    source: SourceUsed | None


class Shift(AnswerModel):
    """What mixing does to the melting range of the first part."""

    solidus_c: float = Field(
        description="Solidus of the mixture minus that of the first part, °C. Negative: the joint begins to "
        "melt earlier, and must be kept cooler in later heating and in service."
    )
    liquidus_c: float = Field(
        description="Liquidus of the mixture minus that of the first part, °C. Positive: the peak must rise "
        "by as much."
    )
    pasty_range_c: float = Field(description="Liquidus minus solidus, mixture minus first part, °C.")


class MixedLiquid(AnswerModel):
    """From which temperature on all is one liquid."""

    at_equilibrium_c: float = Field(
        description="With time to dissolve: the liquidus of the mixture, °C. A part that melts higher "
        "dissolves in what is liquid, which takes time."
    )
    every_part_molten_c: float | None = Field(
        description="Without waiting: every part melts by itself, and the mixture is liquid, °C; null if no "
        "data tell of a part."
    )


class SourcedWarning(AnswerModel):
    """One thing to mind, with where it comes from."""

    code: Literal["gold-embrittlement", "lead-in-lead-free", "bismuth-and-lead", "cadmium"]
    text: str
    reference: Reference
    edition: str = Field(description="Edition of the table it stands in.")


class StateAt(State):
    """The mixture at the temperature asked for."""

    temperature_c: float
    on_boundary: bool = Field(description="As in `POST /v1/equilibrium`.")
    just_below: State | None = Field(description="As in `POST /v1/equilibrium`.")


class Mixed(AnswerModel):
    """The mixture: composition and melting, at nominal compositions and at equilibrium."""

    composition_wt: dict[str, float] = Field(description="Mass percent of the mixture.")
    left_out_wt: dict[str, float] = Field(
        description="Traces left out of the reckoning, mass percent; `composition_wt` is the rest as 100."
    )
    mass_g: float = Field(description="Mass of all parts, g.")
    parts: list[PartUsed]
    solidus_c: float | None = Field(
        description="The first liquid forms here on heating, °C; null only with `melting_unknown`."
    )
    liquidus_c: float | None = Field(description="From here on all is liquid, °C; null likewise.")
    melting_unknown: str | None = Field(
        description="Why no data tell how the mixture melts. Such a mixture is answered only if it is gold "
        "in a tin-based solder, on which the tables hold limits, and refused otherwise. Null if data tell."
    )
    curve: list[CurvePoint] = Field(description="As in `POST /v1/melting`; empty if unknown.")
    shift: Shift | None = Field(
        description="Against the first part; null if no data tell of that by itself, or of the mixture."
    )
    all_mixed_liquid: MixedLiquid | None = Field(description="Null if unknown.")
    at_temperature: StateAt | None = Field(
        description="Null if no temperature was asked, or the state is not known."
    )
    densities: Reference = Field(description="Where the densities come from.")
    warnings: list[SourcedWarning]
    source: SourceUsed


class MixtureAnswer(Mixed, Answer):
    """What becomes of alloys that melt together."""
