"""The verdict on a recorded run, on the wire."""

from typing import Literal

from pydantic import Field

from service.schemas.alloy import AlloyUsed
from service.schemas.base import Answer, AnswerModel
from service.schemas.profile_words import Repair, Side
from service.schemas.source import Reference, SourceUsed
from service.schemas.uncertainty import BudgetShown
from service.schemas.window import LiquidReached, TermShown, WarningShown


class LimitChecked(AnswerModel):
    """One demand and how the record stands to it."""

    limit: str
    side: Side
    value: float | None = Field(description="What the record shows; null where it does not show it.")
    bound: float
    margin: float | None = Field(description="Positive inside, 0 on the bound, negative outside; in `unit`.")
    unit: str
    passed: bool = Field(description="On the bound counts as met; without a value as not met.")
    why: str | None = Field(description="Why there is no value.")


class Tightest(AnswerModel):
    """The demand with the least left, as a share of what it allows."""

    limit: str
    side: Side
    sensor: str | None = Field(description="Null if it is a demand on all sensors together.")
    margin: float | None
    unit: str


class LiquidAt(AnswerModel):
    """Liquid share of the filler at a moment, at equilibrium."""

    time_s: float
    liquid_mass_fraction: float


class SensorShown(AnswerModel):
    """What one sensor saw."""

    name: str
    on: Literal["joint", "part"]
    peak_c: float
    peak_at_s: float
    time_above_solidus_s: float
    time_at_target_s: float
    limits: list[LimitChecked]
    liquid: list[LiquidAt] = Field(
        description="Liquid fraction against time, straight between the points, true to 0.001 of the "
        "fraction or of the run's duration; empty for parts and where no data tell."
    )


class LevelsShown(AnswerModel):
    """The temperatures of the alloy that the demands refer to, °C.

    Readings are held against them as they are; the uncertainty budget counts in the window of the peak.
    """

    solidus_c: float = Field(description="At the nominal composition.")
    liquidus_c: float = Field(description="At the nominal composition.")
    target_c: float = Field(description="Where the target fraction is reached, least favourable composition.")
    hold_still_c: float = Field(description="Below this a joint counts as frozen.")
    hold_still_by: str = Field(description="How that temperature comes about.")


class EarlierJointSeen(AnswerModel):
    """What an earlier joint went through at the hottest reading of the run."""

    name: str
    alloy: AlloyUsed
    max_liquid_fraction: float
    bound: TermShown | None = Field(
        description="What it allows the hottest reading, with all that counts; null if it may melt again."
    )
    liquid_mass_fraction: LiquidReached
    source: SourceUsed


class RepairMade(AnswerModel):
    """A fault that was mended on request."""

    repair: Repair
    sensor: str
    count: int = Field(description="Samples touched, or gaps bridged.")


class StandardUsed(AnswerModel):
    """The standard whose limits were named."""

    profile: str
    edition: str
    note: str
    reference: Reference


class WindowJudged(AnswerModel):
    """The window that the peaks were held against, as readings."""

    minimum_peak_c: float | None
    maximum_peak_c: float | None
    feasible: bool
    given: bool = Field(description="True if it came with the question, false if it was worked out.")


class ProfileAnswer(Answer):
    """The verdict on a run, and the margins behind it."""

    verdict: Literal["pass", "fail"] = Field(description="`pass` if every demand is met.")
    tightest: Tightest | None = Field(
        description="Margins of different units are compared as shares: of the span between two bounds; of "
        "the bound where there is one; of 25 °C for a temperature with one bound. Null without any demand."
    )
    alloy: AlloyUsed
    window: WindowJudged
    budget: BudgetShown | None = Field(description="Null if the window was given.")
    levels: LevelsShown
    sensors: list[SensorShown]
    run_limits: list[LimitChecked] = Field(description="Demands on all sensors together.")
    peak_spread_c: float = Field(description="Highest minus lowest peak of the joints.")
    hold_still_s: float | None = Field(
        description="From the first joint at its solidus to the last one frozen: so long nothing may move. "
        "0 if nothing melted; null if the record ends before all is frozen."
    )
    hold_still_from_s: float | None
    hold_still_to_s: float | None
    earlier_joints: list[EarlierJointSeen]
    standard: StandardUsed | None
    repairs: list[RepairMade]
    warnings: list[WarningShown]
    source: SourceUsed
