"""The uncertainty budget on the wire: the same fields for a window, the check of a run and a step plan."""

from typing import Annotated

from pydantic import Field

from service.schemas.base import Answer, AnswerModel, StrictModel
from service.schemas.source import Reference
from service.schemas.uncertainty_words import WORST_CASE, Combination

Difference = Annotated[float, Field(ge=0, le=1000)]
ClassName = Annotated[str, Field(min_length=1, max_length=100)]

SENSOR = "By how much a reading may differ from the true temperature, either way, °C."
SENSOR_CLASS = (
    "A thermocouple's class in place of `sensor_tolerance_c`: its standard gives the tolerance at each "
    "temperature. IEC 60584 (`IEC 60584 type K class 1`) or ASTM E230 (`ASTM E230 type K special`); `GET "
    "/v1/sensor-classes` lists all."
)
SPREAD = "By how much the hottest joint lies above the coldest, °C."
DATA = "By how much the temperatures of the data may be off, either way, °C."
COUNT_DATA = (
    "Count how far the data were found to be off when held against printed melting ranges, for each alloy, "
    "in place of `data_tolerance_c`."
)
COMBINATION = (
    "How the uncertainties of alloy, data and sensor are put together: `worst case` adds them up, "
    "`root-sum-square` takes them to be independent, which is narrower than they can be together. The spread "
    "is no error and enters whole either way."
)


class BudgetAsked(StrictModel):
    """What may be off, and how it is counted."""

    sensor_tolerance_c: Difference = Field(default=0.0, description=SENSOR)
    sensor_class: ClassName | None = Field(
        default=None, description=SENSOR_CLASS, examples=["IEC 60584 type K class 1"]
    )
    spread_c: Difference = Field(default=0.0, description=SPREAD)
    data_tolerance_c: Difference = Field(default=0.0, description=DATA)
    count_data: bool = Field(default=False, description=COUNT_DATA)
    combination: Combination = Field(default=WORST_CASE, description=COMBINATION)


class UncertaintyShown(AnswerModel):
    """One thing that may be off, and by how much."""

    name: str = Field(description="`alloy tolerance`, `data` or `sensor tolerance`.")
    size_c: float = Field(description="By how much at most, °C; never negative.")
    reason: str


class SensorUsed(AnswerModel):
    """The sensor class that gave the tolerances."""

    sensor_class: str
    edition: str = Field(description="Edition of the stored table.")
    guidance: str
    reference: Reference


class WindowBy(AnswerModel):
    """The window as one way to combine the uncertainties gives it."""

    minimum_peak_c: float
    maximum_peak_c: float | None
    width_c: float | None = Field(description="Maximum minus minimum minus spread, °C.")
    feasible: bool


class BudgetShown(AnswerModel):
    """The uncertainty budget: what was counted, how, and what the other way would have given."""

    combination: Combination = Field(description="The one that the answer's own figures follow.")
    sensor: SensorUsed | None = Field(description="Null if a tolerance was stated.")
    spread_c: float = Field(description="Enters whole either way.")
    worst_case: WindowBy = Field(description="All uncertainties of a bound added up.")
    root_sum_square: WindowBy = Field(description="The root of the sum of their squares.")


class ToleranceAt(AnswerModel):
    """How far a reading may lie off at a temperature."""

    temperature_c: float
    tolerance_c: float


class SensorClassShown(AnswerModel):
    """One class of thermocouple."""

    name: str = Field(description="What `sensor_class` takes; case, spaces and hyphens do not matter.")
    lowest_c: float = Field(description="Lowest temperature the standard gives a tolerance for, °C.")
    highest_c: float = Field(description="Highest temperature it gives one for, °C.")
    tolerances: list[ToleranceAt] = Field(description="At the ends of its range and at every 100 °C between.")
    reference: Reference


class SensorClassesAnswer(Answer):
    """All classes of thermocouples that the table knows."""

    sensor_classes: list[SensorClassShown]
    edition: str = Field(description="Edition of the stored table.")
    guidance: str
