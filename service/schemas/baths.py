"""Solder baths and pots on the wire: analyses over time, limits, and what to draw off."""

from typing import Annotated, Literal

from pydantic import Field

from service.schemas.alloy import AlloyAsked, AlloyUsed, Percents
from service.schemas.base import Answer, AnswerModel, StrictModel
from service.schemas.profile_words import Side
from service.schemas.source import Reference, SourceUsed
from service.schemas.window import WarningShown

MOST_ANALYSES = 500

BathKind = Literal["SnPb assembly", "SnPb tinning", "lead-free assembly", "SAC305 pot"]
Percent = Annotated[float, Field(ge=0, le=100)]


class TargetAsked(StrictModel):
    """Where an element is to come back to, mass percent."""

    at_least: Percent | None = None
    at_most: Percent | None = None


class AnalysisAsked(StrictModel):
    """One analysis of the bath."""

    day: Annotated[float, Field(ge=-1e6, le=1e6)] = Field(
        description="When it was taken, in days from any start of your own.", examples=[0, 7]
    )
    composition_wt: Percents = Field(
        description="Mass percent by element; with `balance` that element may be left out.",
        examples=[{"Sn": 62.9, "Pb": 36.8, "Cu": 0.21}],
    )


class BathQuestion(StrictModel):
    """A bath, its analyses, and what it is topped up with."""

    kind: BathKind = Field(
        description="Whose limits hold: J-STD-001 for tin–lead baths of assembly or tinning and for "
        "lead-free baths, or a service chart's take-action limits of an SAC305 pot."
    )
    volume_l: Annotated[float, Field(gt=0, le=1e5)] | None = Field(
        default=None, description="Volume of the bath, litres; this or mass_kg.", examples=[25]
    )
    mass_kg: Annotated[float, Field(gt=0, le=1e6)] | None = Field(default=None, examples=[190])
    analyses: Annotated[list[AnalysisAsked], Field(min_length=1, max_length=MOST_ANALYSES)]
    balance: Annotated[str, Field(min_length=1, max_length=3)] | None = Field(
        default=None, description="The element that takes what the analyses leave to 100 %.", examples=["Sn"]
    )
    replacement: AlloyAsked | None = Field(
        default=None, description="What the bath is topped up with after drawing off."
    )
    target_share: Annotated[float, Field(gt=0, le=1)] = Field(
        default=0.5, description="Bring every element down to this share of its upper limit."
    )
    targets_wt: Annotated[dict[str, TargetAsked], Field(max_length=30)] = Field(
        default={}, description="Targets of your own by element, in place of that share."
    )
    leave_out_traces_below_wt: Annotated[float, Field(gt=0, le=1)] | None = Field(
        default=None,
        description="For the melting of the bath: elements of which it holds less than this, mass percent, "
        "may be left out if no data cover them; the answer repeats which.",
    )


class DriftShown(AnswerModel):
    """The straight line through an element's analyses."""

    points: int
    wt_per_day: float
    standard_error: float | None = Field(description="Of wt_per_day; null below three analyses.")


class MeetingShown(AnswerModel):
    """When the line meets the limit."""

    outlook: Literal["too few analyses", "no drift towards it", "will meet it", "meets it already"]
    day: float | None = Field(description="Best estimate, in the days of the analyses.")
    earliest_day: float | None = Field(description="Earliest with 95 % confidence.")
    latest_day: float | None = Field(description="Latest with 95 % confidence; null: not to be told.")


class BathLimit(AnswerModel):
    """One element against one published limit."""

    element: str = Field(description="A symbol, or several joined by + for a limit on their sum.")
    side: Side
    bound_wt: float
    value_wt: float = Field(description="Of the last analysis; an element not analysed counts as 0.")
    analysed: bool
    margin_wt: float = Field(description="Positive inside, 0 on the limit, negative outside.")
    passed: bool
    drift: DriftShown | None
    meets: MeetingShown
    reference: Reference


class BathMelting(AnswerModel):
    """How the bath melts at one analysis."""

    day: float
    alloy: AlloyUsed | None
    solidus_c: float | None
    liquidus_c: float | None = Field(description="Below this the first solid swims in the bath.")
    sludge_c: float | None = Field(
        description="The same temperature where that solid is a compound, which collects as sludge."
    )
    first_solid: str | None = Field(description="What comes out first on cooling.")
    unknown: str | None = Field(description="Why there are no temperatures.")
    source: SourceUsed | None


class ExchangeShown(AnswerModel):
    """What to draw off and replace."""

    possible: bool
    share: float | None = Field(description="Share of the bath, 0 to 1.")
    draw_off_kg: float | None
    element: str | None = Field(description="The element that asks for it, or that prevents it.")
    after_wt: dict[str, float]
    text: str


class BathAnswer(Answer):
    """The bath against its limits, its drift and its cure."""

    mass_kg: float
    limits: list[BathLimit]
    within_limits: bool
    melting: list[BathMelting] = Field(description="At the first and the last analysis.")
    exchange: ExchangeShown | None = Field(description="Null without a replacement.")
    edition: str = Field(description="Edition of the table of limits.")
    guidance: str
    warnings: list[WarningShown]
