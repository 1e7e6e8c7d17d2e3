"""What a sensor may read wrong: a stated tolerance, or a standard's by type and class of thermocouple."""

import re
from collections.abc import Mapping
from dataclasses import dataclass
from functools import cache
from typing import Protocol

from diagrams.errors import InvalidInput, OutsideData
from diagrams.reference import reference_edition, reference_guidance, reference_table
from diagrams.sources import Source
from service.safety import safety_for
from service.schemas.source import reference_shown
from service.schemas.uncertainty import SensorClassesAnswer, SensorClassShown, ToleranceAt

TABLE = "sensor_tolerances.csv"
FIELD = "sensor_class"
STEP_C = 100
_CLOSE_C = 1e-12


class Sensor(Protocol):
    """Whatever has a tolerance."""

    def tolerance_c(self, at_c: float) -> float:
        """How far a reading may lie off at a true temperature (°C), either way."""

    @property
    def told(self) -> str:
        """Where the tolerance comes from, to be put in brackets; empty if it was stated."""

    @property
    def top_c(self) -> float:
        """The highest true temperature at which it has a tolerance."""


@dataclass(frozen=True)
class Stated:
    """A sensor of which one tolerance is known, °C."""

    stated_c: float
    told: str = ""
    top_c: float = float("inf")

    def tolerance_c(self, at_c: float) -> float:
        """The same everywhere."""
        return self.stated_c


def hottest_true_c(sensor: Sensor, reading_c: float) -> float:
    """The highest true temperature (°C) at which a sensor may read this; OutsideData beyond its class.

    A tolerance grows by less than a hundredth of the temperature: each round gains two digits.
    """
    true_c = reading_c + sensor.tolerance_c(reading_c)
    while abs(true_c - (closer_c := reading_c + sensor.tolerance_c(true_c))) > _CLOSE_C * max(1.0, true_c):
        true_c = closer_c
    return closer_c


@dataclass(frozen=True)
class _Range:
    """Where a tolerance holds, °C: the greater of fixed and fraction · |t|, or fixed + slope · (t − from)."""

    from_c: float
    to_c: float
    fixed_c: float
    fraction: float
    slope: float

    def tolerance_c(self, at_c: float) -> float:
        if self.slope:
            return self.fixed_c + self.slope * (at_c - self.from_c)
        return max(self.fixed_c, self.fraction * abs(at_c))


@dataclass(frozen=True)
class SensorClass:
    """A thermocouple as a standard grades it, such as “IEC 60584 type K class 1”."""

    name: str
    ranges: tuple[_Range, ...]
    source: Source
    edition: str

    @property
    def told(self) -> str:
        """Name, work, how it came here, edition of the table."""
        return f"{self.name}: {self.source.text}, {self.source.how}; {self.edition}"

    @property
    def top_c(self) -> float:
        """Where the class ends."""
        return self.ranges[-1].to_c

    def tolerance_c(self, at_c: float) -> float:
        """How far a reading may lie off at a temperature (°C), either way; OutsideData beyond the class."""
        for part in self.ranges:
            if part.from_c <= at_c <= part.to_c:
                return part.tolerance_c(at_c)
        low, high = self.ranges[0].from_c, self.ranges[-1].to_c
        raise OutsideData(
            f"{self.name} has a tolerance from {low:g} to {high:g} °C, not at {at_c:.1f} °C.",
            field=FIELD,
            remedy="Name a sensor that the standard grades at this temperature, or give sensor_tolerance_c.",
        )


@cache
def sensor_classes() -> Mapping[str, SensorClass]:
    """All classes of the table by name, sorted."""
    rows: dict[str, list[Mapping[str, str]]] = {}
    for row in reference_table(TABLE):
        for kind in row["types"].split():
            rows.setdefault(f"{row['standard']} type {kind} {row['grade']}", []).append(row)
    return {
        name: SensorClass(
            name,
            tuple(sorted((_range(row) for row in rows[name]), key=lambda part: part.from_c)),
            Source(rows[name][0]["source"], rows[name][0]["how"], rows[name][0]["confidence"]),
            reference_edition(TABLE),
        )
        for name in sorted(rows)
    }


def sensor_classes_shown() -> SensorClassesAnswer:
    """All of them as answered."""
    return SensorClassesAnswer(
        sensor_classes=[_shown(sensor) for sensor in sensor_classes().values()],
        edition=reference_edition(TABLE),
        guidance=reference_guidance(TABLE),
        safety=safety_for(()),
    )


def sensor_class(text: str) -> SensorClass:
    """The class of a name, whatever the case, spaces and hyphens; InvalidInput lists those there are."""
    found = {_key(name): sensor for name, sensor in sensor_classes().items()}.get(_key(text))
    if found is None:
        raise InvalidInput(
            f"“{text}” is no sensor class of the table.",
            field=FIELD,
            remedy="Name one of: " + ", ".join(sensor_classes()) + ".",
        )
    return found


def _shown(sensor: SensorClass) -> SensorClassShown:
    low, high = sensor.ranges[0].from_c, sensor.ranges[-1].to_c
    between = (float(t) for t in range(0, 2000, STEP_C) if low < t < high)
    return SensorClassShown(
        name=sensor.name,
        lowest_c=low,
        highest_c=high,
        tolerances=[
            ToleranceAt(temperature_c=t, tolerance_c=round(sensor.tolerance_c(t), 6))
            for t in (low, *between, high)
        ],
        reference=reference_shown(sensor.source),
    )


def _range(row: Mapping[str, str]) -> _Range:
    fixed, fraction, slope = (float(row[key] or 0.0) for key in ("fixed_c", "fraction_of_t", "slope_per_c"))
    return _Range(float(row["from_c"]), float(row["to_c"]), fixed, fraction, slope)


def _key(text: str) -> str:
    return re.sub(r"[\s-]+|\btype\b", "", text.casefold())
