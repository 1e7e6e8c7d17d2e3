"""How an alloy freezes, on the wire."""

from typing import Annotated, Literal

from pydantic import Field

from service.schemas.alloy import AlloyAsked, AlloyUsed
from service.schemas.base import Answer, AnswerModel, StrictModel
from service.schemas.source import SourceUsed
from service.schemas.window import WarningShown

Residual = Annotated[float, Field(ge=1e-4, le=0.5)]
RESIDUAL = (
    "Share of the mass that may still be liquid when the joint counts as frozen, 0.0001 to 0.5; a film of a "
    "thousandth is enough to tear a joint that moves."
)


class SolidificationQuestion(StrictModel):
    """An alloy that cools from its liquidus."""

    alloy: AlloyAsked
    residual_liquid_fraction: Residual = Field(default=0.001, description=RESIDUAL)


class HoldStill(AnswerModel):
    """Temperatures at which the residual liquid is gone, °C."""

    equilibrium: float | None = Field(description="Cooling so slowly that the solid evens out.")
    without_diffusion: float | None = Field(
        description="Nothing evens out in the solid: no joint holds liquid to a lower temperature than this. "
        "Null where more than the residual is still liquid at the lowest temperature of the data."
    )


class Forming(AnswerModel):
    """A solid that forms on the way from the step before."""

    name: str
    mass_fraction: float = Field(description="What forms of it in this step, as a share of the alloy's mass.")


class FreezingStep(AnswerModel):
    """One temperature on the way down."""

    model: Literal["equilibrium", "without diffusion"]
    temperature_c: float
    liquid_mass_fraction: float
    forming: list[Forming]


class SolidTotal(AnswerModel):
    """What a solid came to when all has frozen without diffusion."""

    name: str
    mass_fraction: float
    composition_wt: dict[str, float] = Field(description="Mean over all of it, mass percent.")


class SolidificationAnswer(Answer):
    """The way from liquid to solid, at equilibrium and without diffusion in the solid."""

    alloy: AlloyUsed
    residual_liquid_fraction: float
    liquidus_c: float
    solidus_c: float = Field(description="At equilibrium.")
    hold_still_c: HoldStill
    below_equilibrium_c: float | None = Field(
        description="How far the hold-still temperature without diffusion lies below that at equilibrium, °C."
    )
    below_standard_solidus_c: float | None = Field(
        description="How far it lies below the solidus that the filler's standard prints, °C; null without."
    )
    steps: list[FreezingStep] = Field(
        description="Both ways down, hottest first: at equilibrium, then without diffusion."
    )
    solids: list[SolidTotal] = Field(description="In the order in which they begin to form.")
    last_liquid_wt: dict[str, float] = Field(
        description="Composition of the last liquid without diffusion, mass percent: what melts first when "
        "the joint is heated again."
    )
    unfrozen: float = Field(
        description="Share still liquid without diffusion at the lowest temperature of the data; else 0."
    )
    warnings: list[WarningShown]
    source: SourceUsed
