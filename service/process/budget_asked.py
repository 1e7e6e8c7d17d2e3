"""An uncertainty budget between the wire and the rules."""

from collections.abc import Mapping

from diagrams.errors import InvalidInput
from diagrams.reference import reference_guidance
from service.process.budget import Budget
from service.process.sensors import TABLE, Sensor, SensorClass, Stated, sensor_class
from service.process.window_verdict import Verdict
from service.schemas.source import reference_shown
from service.schemas.uncertainty import BudgetAsked, BudgetShown, SensorUsed, WindowBy
from service.schemas.uncertainty_words import ROOT_SUM_SQUARE, WORST_CASE, Combination
from service.schemas.window import WindowAddress


def budget_of(asked: BudgetAsked | WindowAddress) -> Budget:
    """The budget asked for; InvalidInput where one uncertainty is given in two ways."""
    if asked.count_data and asked.data_tolerance_c > 0.0:
        raise _twice("data_tolerance_c", "count_data")
    return Budget(
        sensor=_sensor(asked),
        data_c=None if asked.count_data else asked.data_tolerance_c,
        combination=asked.combination,
    )


def budget_shown(budget: Budget, spread_c: float, combined: Mapping[Combination, Verdict]) -> BudgetShown:
    """The budget as answered, with what either combination gives."""
    return BudgetShown(
        combination=budget.combination,
        sensor=_sensor_used(budget.sensor),
        spread_c=spread_c,
        worst_case=_by(combined[WORST_CASE]),
        root_sum_square=_by(combined[ROOT_SUM_SQUARE]),
    )


def _sensor(asked: BudgetAsked | WindowAddress) -> Sensor:
    if asked.sensor_class is None:
        return Stated(asked.sensor_tolerance_c)
    if asked.sensor_tolerance_c > 0.0:
        raise _twice("sensor_tolerance_c", "sensor_class")
    return sensor_class(asked.sensor_class)


def _sensor_used(sensor: Sensor) -> SensorUsed | None:
    if not isinstance(sensor, SensorClass):
        return None
    return SensorUsed(
        sensor_class=sensor.name,
        edition=sensor.edition,
        guidance=reference_guidance(TABLE),
        reference=reference_shown(sensor.source),
    )


def _by(verdict: Verdict) -> WindowBy:
    return WindowBy(
        minimum_peak_c=verdict.lower.value_c,
        maximum_peak_c=None if verdict.upper is None else verdict.upper.value_c,
        width_c=verdict.width_c,
        feasible=verdict.feasible,
    )


def _twice(field: str, other: str) -> InvalidInput:
    return InvalidInput(
        f"{other} and {field} are both given.",
        field=other,
        remedy=f"Give {field} or {other}, not both.",
    )
