"""How an alloy melts, from the first liquid to the last solid."""

from typing import Annotated

from pydantic import Field

from service.schemas.alloy import AlloyAsked, AlloyUsed
from service.schemas.base import Answer, AnswerModel, StrictModel
from service.schemas.source import Reference, SourceUsed

MOST_TEMPERATURES = 10_000


class MeltingQuestion(StrictModel):
    """An alloy, and temperatures at which its liquid fraction is wanted besides."""

    alloy: AlloyAsked
    temperatures_c: Annotated[list[float], Field(max_length=MOST_TEMPERATURES, fail_fast=True)] = Field(
        default=[],
        description="Temperatures, °C, at which the liquid fraction is wanted; each must lie in the "
        "`temperature_range_c` of the data.",
        examples=[[185, 200, 220]],
    )


class TemperatureSpan(AnswerModel):
    """A temperature at the nominal composition, and its extremes over all compositions in tolerance."""

    nominal: float = Field(description="At the nominal composition, °C.")
    lowest: float | None = Field(
        description="Lowest over the tolerance, °C; without one as the nominal; null by `standard table`, "
        "which knows the nominal only."
    )
    highest: float | None = Field(description="Highest over the tolerance, °C; null likewise.")
    lowest_at_wt: dict[str, float] | None = Field(description="Composition of the lowest, mass percent.")
    highest_at_wt: dict[str, float] | None = Field(description="Composition of the highest, mass percent.")


class CurvePoint(AnswerModel):
    """A point of the melting curve at the nominal composition."""

    temperature_c: float
    liquid_mass_fraction: float | None = Field(
        description="Share of the mass that is liquid, 0 to 1; null where it is unknown."
    )


class Tabulated(AnswerModel):
    """What the standard prints for the designation, and how far the diagram lies from it."""

    designation: str = Field(description="Name of the row of the filler table.")
    designations: dict[str, str] = Field(description="The designation in each standard.")
    solidus_c: float = Field(description="Printed solidus, °C.")
    liquidus_c: float = Field(description="Printed liquidus, °C.")
    solidus_difference_c: float | None = Field(
        description="Computed solidus minus the printed one, °C; null if the printed one is the answer."
    )
    liquidus_difference_c: float | None = Field(
        description="Computed liquidus minus the printed one, °C; null if the printed one is the answer."
    )
    single_melting_value: bool = Field(description="Whether the standard prints one temperature only.")
    note: str = Field(description="What to mind when comparing.")
    reference: Reference
    edition: str = Field(description="Edition of the stored filler table.")


class MeltingAnswer(Answer):
    """Where an alloy begins and ends to melt, and how much is liquid in between, at equilibrium."""

    alloy: AlloyUsed
    solidus_c: TemperatureSpan = Field(description="The first liquid forms here on heating, °C.")
    liquidus_c: TemperatureSpan = Field(description="From here on all is liquid, °C.")
    tolerance: str | None = Field(
        description="How lowest and highest were found; null where the composition has no tolerance."
    )
    curve: list[CurvePoint] = Field(
        description="The melting curve at the nominal composition, from the lowest to the highest "
        "temperature of the data: every kink of it and every temperature asked for. Where much melts at one "
        "temperature, two points share it: before and after. By `standard table` there is no curve: 0 at "
        "the printed solidus, null from there to the printed liquidus, 1 from there on."
    )
    at_temperatures: list[CurvePoint] = Field(
        description="Liquid fraction at the temperatures asked for, in the order asked; at a temperature "
        "where much melts at once, the value just above."
    )
    standard: Tabulated | None = Field(description="The filler table's figures; null without a designation.")
    source: SourceUsed
