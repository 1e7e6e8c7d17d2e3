"""What is asked of a recorded run, and each demand held against one sensor's record.

Every demand has a value, a bound and a margin in the unit of the demand: positive inside, zero on the bound.
"""

from collections.abc import Iterator
from dataclasses import dataclass
from typing import Literal

from service.process.bounds import FREE, Bounds
from service.process.profiles.trace import (
    Trace,
    first_at,
    mean_fall,
    peak,
    rates,
    time_above,
    time_within,
)

Side = Literal["at least", "at most"]
ONE_SIDED_C = 25.0  # a temperature bounded on one side only: 0 °C is no natural zero to take shares of
ROUNDING = 1e-9  # relative: a margin this small comes from the arithmetic, not from the run


@dataclass(frozen=True)
class Soak:
    """Seconds between two temperatures on the way up to the peak."""

    low_c: float
    high_c: float
    time_s: Bounds


@dataclass(frozen=True)
class NearPeak:
    """Seconds within `within_c` of the sensor's own peak, or of `of_c` where that is given."""

    within_c: float
    time_s: Bounds
    of_c: float | None = None


@dataclass(frozen=True)
class ToPeak:
    """Seconds from first reaching `from_c` to the peak."""

    from_c: float
    time_s: Bounds


@dataclass(frozen=True, kw_only=True)
class Limits:
    """Demands on a run; rates are positive, in °C/s, taken over `averaging_s` seconds."""

    averaging_s: float = 5.0
    rise_c_per_s: Bounds = FREE
    fall_c_per_s: Bounds = FREE
    freezing_c_per_s: Bounds = FREE
    above_solidus_s: Bounds = FREE
    at_target_s: Bounds = FREE
    soak: Soak | None = None
    near_peak: NearPeak | None = None
    to_peak: ToPeak | None = None
    most_peak_spread_c: float | None = None


@dataclass(frozen=True)
class Levels:
    """Temperatures of the alloy that the demands refer to, °C."""

    solidus_c: float
    liquidus_c: float
    target_c: float


@dataclass(frozen=True)
class Checked:
    """One demand on one sensor; `why` says why there is no value, in which case the demand is not met."""

    limit: str
    side: Side
    value: float | None
    bound: float
    unit: str
    span: float | None
    why: str | None = None

    @property
    def margin(self) -> float | None:
        """Distance inside the bound, in `unit`; negative outside, None without a value."""
        if self.value is None:
            return None
        margin = self.value - self.bound if self.side == "at least" else self.bound - self.value
        return 0.0 if abs(margin) <= ROUNDING * max(1.0, abs(self.bound)) else margin

    @property
    def passed(self) -> bool:
        """Whether the demand is met; on the bound it is."""
        return self.margin is not None and self.margin >= 0.0

    @property
    def tightness(self) -> float:
        """What makes margins of different units comparable: the margin as a share of what is allowed.

        Where a demand has two bounds that is the span between them, with one bound the bound itself, and for
        temperatures ONE_SIDED_C.
        """
        if self.margin is None:
            return float("-inf")
        alone = ONE_SIDED_C if self.unit == "°C" else max(abs(self.bound), ROUNDING)
        return self.margin / (self.span or alone)


def between(
    limit: str, value: float | None, bounds: Bounds, unit: str, why: str | None = None
) -> list[Checked]:
    """A value against its bounds."""
    low, high = bounds.low, bounds.high
    span = high - low if low is not None and high is not None and high > low else None
    found = []
    if low is not None:
        found.append(Checked(limit, "at least", value, low, unit, span, why if value is None else None))
    if high is not None:
        found.append(Checked(limit, "at most", value, high, unit, span, why if value is None else None))
    return found


def joint_checks(trace: Trace, limits: Limits, levels: Levels, window: Bounds) -> list[Checked]:
    """All demands on a joint's sensor; `window` bounds its peak, °C."""
    top = peak(trace)
    return [
        *between("peak", top.value, window, "°C"),
        *between("time above solidus", time_above(trace, levels.solidus_c), limits.above_solidus_s, "s"),
        *between(
            "time at target liquid fraction",
            time_above(trace, levels.target_c, or_at=True),
            limits.at_target_s,
            "s",
        ),
        *_freezing(trace, limits, levels),
        *any_checks(trace, limits),
    ]


def any_checks(trace: Trace, limits: Limits) -> Iterator[Checked]:
    """The demands on any sensor, whether a joint or a part: rates and times."""
    top = peak(trace)
    if limits.rise_c_per_s != FREE or limits.fall_c_per_s != FREE:
        found = rates(trace, limits.averaging_s)
        short = f"the record is shorter than the averaging time of {limits.averaging_s:g} s"
        rise, fall = (None, None) if found is None else (found.rise.value, found.fall.value)
        yield from between("fastest rise", rise, limits.rise_c_per_s, "°C/s", short)
        yield from between("fastest fall", fall, limits.fall_c_per_s, "°C/s", short)
    if limits.soak is not None:
        soak = limits.soak
        held = 0.0
        if top.time_s > trace.start_s:
            held = time_within(trace.between(trace.start_s, top.time_s), soak.low_c, soak.high_c)
        yield from between(f"soak from {soak.low_c:g} to {soak.high_c:g} °C", held, soak.time_s, "s")
    if limits.near_peak is not None:
        near = limits.near_peak
        of_c = top.value if near.of_c is None else near.of_c
        what = "peak" if near.of_c is None else f"{near.of_c:g} °C"
        held = time_above(trace, of_c - near.within_c, or_at=True)
        yield from between(f"time within {near.within_c:g} °C of {what}", held, near.time_s, "s")
    if limits.to_peak is not None:
        begin = first_at(trace, limits.to_peak.from_c)
        name = f"time from {limits.to_peak.from_c:g} °C to peak"
        never = "the record never reaches that temperature"
        if begin == trace.start_s and trace.temperature_c[0] > limits.to_peak.from_c:
            begin, never = None, "the record begins above that temperature"
        yield from between(
            name, None if begin is None else top.time_s - begin, limits.to_peak.time_s, "s", never
        )


def _freezing(trace: Trace, limits: Limits, levels: Levels) -> list[Checked]:
    if limits.freezing_c_per_s == FREE:
        return []
    found = mean_fall(trace, levels.liquidus_c, levels.solidus_c, limits.averaging_s)
    why = "the record does not show the alloy melted and frozen again"
    value = None if found is None else found.value
    return between("cooling rate through freezing", value, limits.freezing_c_per_s, "°C/s", why)
