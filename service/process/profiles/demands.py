"""The kinds of demands on a recorded run; each knows how to hold itself against one sensor's record.

`origin` begins the name of a demand that a standard makes, so that it stands beside one's own of the kind.
"""

from dataclasses import dataclass
from typing import Literal, Protocol

from service.process.bounds import Bounds
from service.process.profiles.limits import Checked, held
from service.process.profiles.trace import (
    Trace,
    first_at,
    last_at,
    mean_fall,
    peak,
    rates,
    time_above,
    time_within,
)


@dataclass(frozen=True)
class Levels:
    """Temperatures of the alloy that demands refer to, °C."""

    solidus_c: float
    liquidus_c: float
    target_c: float


class Demand(Protocol):
    """Something asked of every record, or of those of joints only."""

    @property
    def joints_only(self) -> bool:
        """Whether records of parts are left alone."""

    def check(self, trace: Trace, levels: Levels) -> list[Checked]:
        """One result a bound."""


@dataclass(frozen=True)
class TimeAbove:
    """Seconds above the solidus, at or above the target fraction's temperature, or at or above another."""

    level: Literal["solidus", "target"] | float
    time_s: Bounds
    origin: str = ""
    joints_only: bool = True

    def check(self, trace: Trace, levels: Levels) -> list[Checked]:
        """Flat stretches exactly on the target's level count, those on the solidus do not."""
        if self.level == "solidus":
            name, lasts = "time above solidus", time_above(trace, levels.solidus_c)
        elif self.level == "target":
            name = "time at target liquid fraction"
            lasts = time_above(trace, levels.target_c, or_at=True)
        else:
            name, lasts = f"time above {self.level:g} °C", time_above(trace, self.level, or_at=True)
        return held(self.origin + name, lasts, self.time_s, "s")


@dataclass(frozen=True)
class Rate:
    """Fastest rise or fall over an averaging time, positive; above a temperature only, where one is given."""

    direction: Literal["rise", "fall"]
    rate_c_per_s: Bounds
    averaging_s: float
    above_c: float | None = None
    origin: str = ""
    joints_only: bool = False

    def check(self, trace: Trace, levels: Levels) -> list[Checked]:
        """A stretch above the temperature shorter than the averaging time is averaged as a whole."""
        name = f"{self.origin}fastest {self.direction}"
        if self.above_c is None:
            short = f"the record is shorter than the averaging time of {self.averaging_s:g} s"
            return held(name, self._of(trace, self.averaging_s), self.rate_c_per_s, "°C/s", short)
        name += f" above {self.above_c:g} °C"
        top = peak(trace).time_s
        rising = self.direction == "rise"
        start = first_at(trace, self.above_c) if rising else top
        end = top if rising else last_at(trace, self.above_c)
        if start is None or end is None or end <= start:
            return held(name, None, self.rate_c_per_s, "°C/s", "the record never passes that temperature")
        part = trace.between(start, end)
        value = self._of(part, min(self.averaging_s, part.end_s - part.start_s))
        return held(name, value, self.rate_c_per_s, "°C/s")

    def _of(self, trace: Trace, over_s: float) -> float | None:
        found = rates(trace, over_s)
        if found is None:
            return None
        return found.rise.value if self.direction == "rise" else found.fall.value


@dataclass(frozen=True)
class Freezing:
    """Mean rate of cooling from liquidus to solidus, the last time; over the averaging time at least."""

    rate_c_per_s: Bounds
    averaging_s: float
    joints_only: bool = True

    def check(self, trace: Trace, levels: Levels) -> list[Checked]:
        """No value where the record does not show it."""
        found = mean_fall(trace, levels.liquidus_c, levels.solidus_c, self.averaging_s)
        why = "the record does not show the alloy melted and frozen again"
        value = None if found is None else found.value
        return held("cooling rate through freezing", value, self.rate_c_per_s, "°C/s", why)


@dataclass(frozen=True)
class Soak:
    """Seconds between two temperatures on the way up to the peak."""

    low_c: float
    high_c: float
    time_s: Bounds
    origin: str = ""
    joints_only: bool = False

    def check(self, trace: Trace, levels: Levels) -> list[Checked]:
        """Both temperatures count."""
        top = peak(trace).time_s
        lasts = 0.0
        if top > trace.start_s:
            lasts = time_within(trace.between(trace.start_s, top), self.low_c, self.high_c)
        name = f"{self.origin}soak from {self.low_c:g} to {self.high_c:g} °C"
        return held(name, lasts, self.time_s, "s")


@dataclass(frozen=True)
class NearPeak:
    """Seconds within `within_c` of the sensor's own peak, or of the temperature `of_c` where it is given."""

    within_c: float
    time_s: Bounds
    of_c: float | None = None
    origin: str = ""
    joints_only: bool = False

    def check(self, trace: Trace, levels: Levels) -> list[Checked]:
        """Everything hotter counts too."""
        of_c = peak(trace).value if self.of_c is None else self.of_c
        what = "peak" if self.of_c is None else f"{self.of_c:g} °C"
        lasts = time_above(trace, of_c - self.within_c, or_at=True)
        return held(f"{self.origin}time within {self.within_c:g} °C of {what}", lasts, self.time_s, "s")


@dataclass(frozen=True)
class ToPeak:
    """Seconds from first reaching a temperature to the peak."""

    from_c: float
    time_s: Bounds
    origin: str = ""
    joints_only: bool = False

    def check(self, trace: Trace, levels: Levels) -> list[Checked]:
        """No value where the record begins hotter than that or never gets there."""
        begin = first_at(trace, self.from_c)
        why = "the record never reaches that temperature"
        if begin == trace.start_s and trace.temperature_c[0] > self.from_c:
            begin, why = None, "the record begins above that temperature"
        lasts = None if begin is None else peak(trace).time_s - begin
        return held(f"{self.origin}time from {self.from_c:g} °C to peak", lasts, self.time_s, "s", why)


@dataclass(frozen=True)
class Peak:
    """The peak of any record, °C."""

    peak_c: Bounds
    origin: str = ""
    joints_only: bool = False

    def check(self, trace: Trace, levels: Levels) -> list[Checked]:
        """Always has a value."""
        return held(f"{self.origin}peak", peak(trace).value, self.peak_c, "°C")
