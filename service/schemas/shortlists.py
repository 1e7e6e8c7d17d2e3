"""Which fillers would do for a joint, on the wire."""

from typing import Annotated

from pydantic import Field

from service.schemas.base import Answer, AnswerModel, StrictModel
from service.schemas.fillers import FillerClass, Standard
from service.schemas.known_limits import KnownLimitShown
from service.schemas.source import SourceUsed
from service.schemas.uncertainty import BudgetAsked, BudgetShown, Difference
from service.schemas.window import (
    MOST_JOINTS,
    MOST_LIMITS,
    SUPERHEAT,
    TARGET,
    JointAsked,
    KnownKey,
    LimitAsked,
    Target,
    Temperature,
    WarningShown,
)

MOST_BASES = 10
MOST_STOCKED = 167

Symbol = Annotated[str, Field(min_length=1, max_length=40)]
StockedName = Annotated[str, Field(min_length=1, max_length=100)]


class BansAsked(StrictModel):
    """What a filler must not hold or be."""

    elements: Annotated[list[Symbol], Field(max_length=30)] = Field(
        default=[],
        description="Symbols of elements that the filler must not hold and its standard must not allow.",
        examples=[["Pb", "Cd"]],
    )
    lead: bool = Field(default=False, description="No filler with lead.")
    cadmium: bool = Field(default=False, description="No filler with cadmium.")
    fillers: Annotated[list[StockedName], Field(max_length=MOST_STOCKED)] = Field(
        default=[],
        description="Designations that are not wanted, nor others of the same nominal composition.",
    )


class ShortlistQuestion(BudgetAsked):
    """A joint without a filler yet: what it joins, what it must bear, what it must not get."""

    base_metals: Annotated[list[KnownKey], Field(max_length=MOST_BASES)] = Field(
        default=[],
        description="Keys of what is joined (`GET /v1/known-limits`, kind `base metal`): each bounds the "
        "peak by where it begins to melt, and brings what practice says of fillers on it.",
        examples=[["cu-c12200-dhp"]],
    )
    base_metal_margin_c: Difference = Field(
        default=0.0, description="How far below that the peak has to stay, °C."
    )
    service_temperature_c: Temperature | None = Field(
        default=None, description="The hottest the joint gets in use, °C; it must stay solid there."
    )
    most_homologous: Annotated[float, Field(ge=0.2, le=1)] | None = Field(
        default=None,
        description="Highest homologous service temperature wanted: service temperature over solidus, both "
        "in kelvin.",
    )
    highest_peak_c: Temperature | None = Field(
        default=None, description="Highest true temperature allowed, °C."
    )
    upper_limits: list[LimitAsked] = Field(
        default=[], max_length=MOST_LIMITS, description="Further limits of parts and boards."
    )
    earlier_joints: list[JointAsked] = Field(
        default=[], max_length=MOST_JOINTS, description="Joints made before that must hold."
    )
    target_liquid_fraction: Target = Field(default=1.0, description=TARGET)
    superheat_c: Difference = Field(default=0.0, description=SUPERHEAT)
    most_superheat_c: Annotated[float, Field(gt=0, le=1000)] | None = Field(
        default=None,
        description="How far above its liquidus a filler may get for which the table gives no brazing range, "
        "°C; left out, what is usual at most. Hand and bath soldering run wider.",
    )
    class_: FillerClass | None = Field(
        default=None, alias="class", description="`solder` or `braze` only; left out, both."
    )
    standard: Standard | None = Field(default=None, description="Listed in this standard.")
    bans: BansAsked = BansAsked()
    stocked_fillers: Annotated[list[StockedName], Field(max_length=MOST_STOCKED)] = Field(
        default=[], description="Look at these designations only; left out, at the whole table."
    )
    most: Annotated[int, Field(ge=1, le=MOST_STOCKED)] = Field(
        default=10, description="How many of the ranked fillers to show."
    )


class ReasonShown(AnswerModel):
    """One thing that speaks for a filler or against it."""

    code: str = Field(
        description="Steady name: `window`, `solid-in-service`, `homologous`, `practice`, `melting-range`, "
        "`lead`, `cadmium`, `zinc`, `no-lead-no-cadmium`, `not-computed`, or that of a window's warning."
    )
    text: str


class RankedShown(AnswerModel):
    """A filler that would do."""

    rank: int
    name: str
    designations: dict[str, str]
    class_: FillerClass = Field(serialization_alias="class")
    composition_wt: dict[str, float]
    solidus_c: float = Field(description="The lowest in tolerance, °C.")
    liquidus_c: float = Field(description="At the nominal composition, °C.")
    minimum_peak_c: float
    maximum_peak_c: float
    width_c: float = Field(description="The widest comes first, °C.")
    setpoint_c: float
    binding_lower: str
    binding_upper: str
    homologous_service_temperature: float | None = Field(
        description="Service temperature over solidus, both in kelvin; null without a service temperature."
    )
    solid_above_service_c: float | None = Field(
        description="How far the solidus lies above the service temperature, °C."
    )
    reasons_for: list[ReasonShown]
    reasons_against: list[ReasonShown]
    budget: BudgetShown
    source: SourceUsed


class ExclusionShown(AnswerModel):
    """Why a filler is not on the list."""

    code: str = Field(
        description="`banned`, `class`, `standard`, `practice`, `service-temperature`, `homologous`, "
        "`no-window`, `sensor-class` or `no-data`."
    )
    text: str
    by_c: float | None = Field(description="Degrees that are missing, where it is a matter of degrees.")


class ExcludedShown(AnswerModel):
    """A filler that would not do."""

    name: str
    reasons: list[ExclusionShown]


class ShortlistAnswer(Answer):
    """The fillers that would do, the widest window first, and why the others would not."""

    ranked_count: int = Field(description="How many would do; the first `most` of them are shown.")
    ranked: list[RankedShown]
    excluded_count: int
    excluded: list[ExcludedShown] = Field(description="In the order of the table.")
    base_metals: list[KnownLimitShown]
    warnings: list[WarningShown] = Field(description="What to mind about the limits, whatever the filler.")
    edition: str = Field(description="Edition of the stored filler table.")
    guidance: str
