"""The temperature window of a joint on the wire."""

from typing import Annotated

from pydantic import BaseModel, ConfigDict, Field

from diagrams.questions.traces import MOST_TRACE_WT
from service.schemas.address import LONGEST_LIST, TOLERANCE
from service.schemas.alloy import TRACES, AlloyAsked, AlloyUsed
from service.schemas.base import Answer, AnswerModel, StrictModel
from service.schemas.melting import TemperatureSpan
from service.schemas.source import SourceUsed
from service.schemas.uncertainty import (
    COMBINATION,
    COUNT_DATA,
    DATA,
    SENSOR,
    SENSOR_CLASS,
    SPREAD,
    BudgetAsked,
    BudgetShown,
    ClassName,
    Difference,
    UncertaintyShown,
)
from service.schemas.uncertainty_words import WORST_CASE, Combination

MOST_LIMITS = 100
MOST_JOINTS = 30

Name = Annotated[str, Field(min_length=1, max_length=100)]
Temperature = Annotated[float, Field(ge=-273.15, le=5000)]
KnownKey = Annotated[str, Field(min_length=1, max_length=120)]
Target = Annotated[float, Field(gt=0, le=1)]

TARGET = (
    "Share of the filler's mass that must be liquid at the coldest joint, above 0 to 1; 1 for a joint that "
    "has to flow and fill, less for one that is wiped or pressed."
)
SUPERHEAT = "How far above that temperature the coldest joint has to get, °C; 15 to 30 is usual in reflow."
_KNOWN = (
    "Key of a stored limit instead of a temperature of your own: the solidus of a base metal, the "
    "classification temperature of a component, the upper end of a flux; `GET /v1/known-limits` lists all."
)


class LimitAsked(StrictModel):
    """A temperature that a part, a board or a base metal must not exceed."""

    name: Name = Field(
        description="Your name for it; no two may be alike.", examples=["Electrolytic capacitor"]
    )
    limit_c: Temperature | None = Field(
        default=None, description="Highest true temperature allowed, °C; this or `known`.", examples=[245]
    )
    known: KnownKey | None = Field(default=None, description=_KNOWN, examples=["brass-c26000-70-30"])
    margin_c: Difference = Field(default=0.0, description="How far below the limit to stay, °C.")


class JointAsked(StrictModel):
    """A joint made before, which this heating must not melt."""

    name: Name = Field(description="Your name for it; no two may be alike.", examples=["Terminal lug"])
    alloy: AlloyAsked
    max_liquid_fraction: float = Field(
        default=0.0,
        ge=0,
        le=1,
        description="Share of its mass that may become liquid, 0 to 1; 0: it must not begin to melt; 1: it "
        "may melt altogether and sets no limit.",
    )
    margin_c: Difference = Field(
        default=0.0, description="How far it has to stay below that temperature, °C."
    )


class WindowQuestion(BudgetAsked):
    """A joint to be made: its filler, and all that bounds its temperature."""

    alloy: AlloyAsked = Field(description="The filler.")
    target_liquid_fraction: Target = Field(description=TARGET)
    superheat_c: Difference = Field(default=0.0, description=SUPERHEAT)
    upper_limits: list[LimitAsked] = Field(
        default=[], max_length=MOST_LIMITS, description="Limits of parts, boards and base metals."
    )
    earlier_joints: list[JointAsked] = Field(
        default=[], max_length=MOST_JOINTS, description="Joints made before that must hold."
    )


class WindowAddress(BaseModel):
    """The simple fields of a window, as they stand in an address line."""

    model_config = ConfigDict(extra="forbid", allow_inf_nan=False, frozen=True)

    alloy: str = Field(
        min_length=1,
        max_length=200,
        description="The filler: a designation (`Sn63Pb37`, `BAg-8`), or element symbols with mass percent "
        "where one element may be left open and takes the balance (`Sn60Pb`).",
        examples=["Sn63Pb37"],
    )
    target_liquid_fraction: Target = Field(description=TARGET, examples=[1])
    superheat_c: Difference = Field(default=0.0, description=SUPERHEAT)
    sensor_tolerance_c: Difference = Field(default=0.0, description=SENSOR)
    sensor_class: ClassName | None = Field(
        default=None, description=SENSOR_CLASS, examples=["IEC 60584 type K class 1"]
    )
    spread_c: Difference = Field(default=0.0, description=SPREAD)
    data_tolerance_c: Difference = Field(default=0.0, description=DATA)
    count_data: bool = Field(default=False, description=COUNT_DATA)
    combination: Combination = Field(default=WORST_CASE, description=COMBINATION)
    tolerance_wt: str | None = Field(
        default=None,
        min_length=1,
        max_length=LONGEST_LIST,
        description=TOLERANCE,
        examples=["Sn:0.5,Pb:0.5"],
    )
    leave_out_traces_below_wt: Annotated[float, Field(gt=0, le=MOST_TRACE_WT)] | None = Field(
        default=None, description=TRACES
    )
    limit_c: Temperature | None = Field(
        default=None,
        description="One upper limit, °C, which the answer names `limit`. For more, and for earlier joints, "
        "POST.",
    )
    known_limit: KnownKey | None = Field(
        default=None,
        description="Key of a stored upper limit (`GET /v1/known-limits`), which the answer names "
        "`known limit`.",
    )


class PartShown(AnswerModel):
    """One temperature that enters a sum."""

    name: str
    value_c: float = Field(description="What it adds, °C; negative where it takes off.")
    reason: str


class TermShown(AnswerModel):
    """One bound on a reading."""

    name: str
    value_c: float = Field(description="The bound, °C, uncertainties included.")
    reason: str = Field(
        description="How it comes about: composition, data and edition, tolerance, additions."
    )
    parts: list[PartShown] = Field(
        description="The same as a sum: the temperature it starts from, superheat or margin, then what is "
        "uncertain, zero where nothing is. Added up in this order they are `value_c` exactly."
    )
    uncertainties: list[UncertaintyShown] = Field(description="What is uncertain about it, each by itself.")
    worst_case_c: float = Field(description="The bound with all uncertainties added up, °C.")
    root_sum_square_c: float = Field(description="The bound with the root of the sum of their squares, °C.")


class CollisionShown(AnswerModel):
    """The two terms that leave no window."""

    lower: str = Field(description="Name of the lower term.")
    upper: str = Field(description="Name of the upper term.")
    by_c: float = Field(
        description="Degrees missing between them, the spread included, °C; 0 where they meet at a "
        "temperature at which much of an earlier joint melts at once."
    )
    text: str


class LiquidReached(AnswerModel):
    """Share of an earlier joint's mass that is liquid, 0 to 1."""

    nominal: float | None = Field(
        description="At its nominal composition, the reading taken as true; null where no data tell."
    )
    worst: float | None = Field(
        description="At the least favourable composition in tolerance, the sensor reading low by its "
        "tolerance, however uncertainties are combined; null where no data tell."
    )


class JointShown(AnswerModel):
    """What an earlier joint goes through."""

    name: str
    alloy: AlloyUsed
    max_liquid_fraction: float
    margin_c: float
    starts_to_melt_c: TemperatureSpan = Field(description="Its solidus, °C.")
    liquid_mass_fraction: LiquidReached | None = Field(
        description="How much of it is liquid if the hottest joint reads maximum_peak_c; where much melts at "
        "that very temperature, the value just below. Null without a maximum."
    )
    source: SourceUsed


class WarningShown(AnswerModel):
    """One thing to mind."""

    code: str = Field(
        description="`partly-liquid`, `no-upper-limit`, `limit-below-solidus`, `melts-at-once`, "
        "`alloy-note`, `base-metal-solidus`, `printed-values`, `data-not-compared` or `from-memory`."
    )
    text: str


class WindowAnswer(Answer):
    """How hot the joint has to read, how hot it may read, and what decides."""

    alloy: AlloyUsed
    minimum_peak_c: float = Field(description="The coldest joint must read at least this, °C.")
    maximum_peak_c: float | None = Field(
        description="The hottest joint may read at most this, °C; null if nothing bounds it, which a warning "
        "tells."
    )
    width_c: float | None = Field(
        description="Maximum minus minimum minus spread, °C: what is left for the process to wander. "
        "Negative if there is no window: so many degrees are missing. Null without a maximum."
    )
    width_parts: list[PartShown] = Field(
        description="The width as a sum: maximum peak, minimum peak, spread; they add up to `width_c`. Empty "
        "without a maximum."
    )
    feasible: bool = Field(
        description="Whether coldest and hottest joint can be right at once. A width of 0 is enough, unless "
        "the maximum is where much of an earlier joint melts at once: it has to stay below."
    )
    setpoint_c: float | None = Field(
        description="Aim the mean of the coldest and the hottest reading at this, °C: the middle between "
        "minimum and maximum, half the width away from either failure. Null if there is no window or no "
        "maximum."
    )
    lower_terms: list[TermShown] = Field(description="All lower bounds; the highest decides.")
    upper_terms: list[TermShown] = Field(description="All upper bounds; the lowest decides.")
    binding_lower: str = Field(description="Name of the lower term that decides.")
    binding_upper: str | None = Field(description="Name of the upper term that decides.")
    collision: CollisionShown | None = Field(description="What collides, if there is no window.")
    budget: BudgetShown
    earlier_joints: list[JointShown]
    warnings: list[WarningShown]
    source: SourceUsed
