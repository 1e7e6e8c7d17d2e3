"""Step soldering on the wire: several joints, one heating after the other."""

from typing import Annotated

from pydantic import Field

from service.schemas.alloy import AlloyAsked, AlloyUsed
from service.schemas.base import Answer, AnswerModel, StrictModel
from service.schemas.source import SourceUsed
from service.schemas.uncertainty import BudgetAsked, BudgetShown, Difference
from service.schemas.window import (
    SUPERHEAT,
    TARGET,
    LimitAsked,
    LiquidReached,
    Name,
    Target,
    TermShown,
    WarningShown,
)

MOST_STEPS = 20
MOST_STOCKED = 40


class StepAsked(StrictModel):
    """One joint of the assembly and what is asked of it."""

    name: Name = Field(description="Your name for it; no two may be alike.", examples=["Die attach"])
    alloy: AlloyAsked
    target_liquid_fraction: Target = Field(default=1.0, description=TARGET)
    superheat_c: Difference = Field(default=0.0, description=SUPERHEAT)
    upper_limits: Annotated[list[LimitAsked], Field(max_length=20)] = Field(
        default=[], description="Limits of what is heated in this step."
    )
    max_liquid_fraction_later: float = Field(
        default=0.0,
        ge=0,
        le=1,
        description="Share of its mass that later heatings may melt again, 0 to 1; 1: all of it.",
    )
    margin_later_c: Difference = Field(
        default=0.0, description="How far below that temperature later heatings have to stay, °C."
    )


class StepsQuestion(BudgetAsked):
    """Joints of one assembly, in any order."""

    joints: Annotated[list[StepAsked], Field(min_length=1, max_length=MOST_STEPS)]
    stocked_fillers: Annotated[
        list[Annotated[str, Field(min_length=1, max_length=100)]], Field(max_length=MOST_STOCKED)
    ] = Field(
        default=[],
        description="Designations at hand: where no order works, each is tried in place of one of the two "
        "fillers that collide.",
        examples=[["Sn96.5Ag3.5", "Sn95Sb5"]],
    )


class SeenLater(AnswerModel):
    """What an earlier joint goes through if the hottest joint of this step reads its maximum."""

    name: str
    max_liquid_fraction: float
    liquid_mass_fraction: LiquidReached | None = Field(description="Null where nothing bounds the step.")


class StepShown(AnswerModel):
    """One heating, in its place in the order."""

    name: str
    alloy: AlloyUsed
    minimum_peak_c: float = Field(description="The coldest joint must read at least this, °C.")
    maximum_peak_c: float | None = Field(description="The hottest may read at most this, °C; null: no bound.")
    width_c: float | None = Field(description="Maximum minus minimum minus spread, °C.")
    setpoint_c: float | None
    lower_terms: list[TermShown]
    upper_terms: list[TermShown]
    binding_lower: str
    binding_upper: str | None
    budget: BudgetShown
    earlier_joints: list[SeenLater]
    warnings: list[WarningShown]
    source: SourceUsed


class StepCollision(AnswerModel):
    """Why no order works: two joints in each other's way, or a joint that its own limits forbid."""

    one: str
    other: str | None = Field(description="Null if the joint's own limits leave it no window.")
    by_c: float = Field(description="Degrees that are missing, in the order in which fewer are, °C.")
    text: str


class StepAlternative(AnswerModel):
    """A stocked filler with which an order exists."""

    joint: str
    filler: str
    order: list[str]
    narrowest_width_c: float | None = Field(description="The tightest window of that order, °C.")


class StepsAnswer(Answer):
    """An order in which each heating leaves the earlier joints alone, or why there is none."""

    feasible: bool
    order: list[str] = Field(description="Names of the joints, first heating first; empty if none works.")
    steps: list[StepShown]
    collision: StepCollision | None
    collisions: list[StepCollision] = Field(description="All of them, the one with the least missing first.")
    alternatives: list[StepAlternative] = Field(description="The widest first.")
