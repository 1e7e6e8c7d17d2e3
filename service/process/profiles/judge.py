"""The verdict on a run: every demand on every sensor, the tightest margin, how long nothing may move."""

from collections.abc import Sequence
from dataclasses import dataclass
from typing import Literal

from service.process.bounds import Bounds
from service.process.profiles.demands import Demand, Levels
from service.process.profiles.limits import Checked, held
from service.process.profiles.liquid import Points, liquid_along
from service.process.profiles.trace import (
    Moment,
    Trace,
    first_at,
    last_at,
    peak,
    time_above,
)

Kind = Literal["joint", "part"]


@dataclass(frozen=True, eq=False)
class Sensor:
    """A record and what it sits on; a part knows its own limit (°C on the reading) or none."""

    trace: Trace
    kind: Kind = "joint"
    limit_c: float | None = None


@dataclass(frozen=True, eq=False)
class SensorJudged:
    """What one sensor saw; liquid fraction as (s, fraction), only of joints."""

    sensor: Sensor
    peak: Moment
    checks: tuple[Checked, ...]
    time_above_solidus_s: float
    time_at_target_s: float
    liquid: tuple[tuple[float, float], ...]


@dataclass(frozen=True)
class HoldStill:
    """From the first liquid in any joint to the last one frozen; None of a time that the record lacks."""

    from_s: float | None
    to_s: float | None

    @property
    def lasts_s(self) -> float | None:
        """How long the work must not be moved, s; 0 if nothing melted."""
        if self.from_s is None:
            return 0.0
        return None if self.to_s is None else self.to_s - self.from_s


@dataclass(frozen=True, eq=False)
class Judged:
    """The run: `run_checks` are demands on all sensors together."""

    sensors: tuple[SensorJudged, ...]
    run_checks: tuple[Checked, ...]
    tightest: Checked | None
    tightest_sensor: str | None
    hold_still: HoldStill

    @property
    def passed(self) -> bool:
        """Whether every demand is met."""
        return all(c.passed for s in self.sensors for c in s.checks) and all(
            c.passed for c in self.run_checks
        )


def judge(
    sensors: Sequence[Sensor],
    demands: Sequence[Demand],
    levels: Levels,
    window: Bounds,
    hold_still_c: float,
    curve: Points | None,
    most_spread_c: float | None = None,
) -> Judged:
    """Hold a run against its demands. At least one sensor has to sit on a joint.

    `window` bounds the peaks of joints (°C); parts are held to its upper bound and their own. `curve` is
    the melting curve as (°C, liquid fraction) upwards, None where it is unknown. `most_spread_c` bounds the
    difference between the highest and the lowest peak of joints.
    """
    judged = tuple(_sensor(sensor, demands, levels, window, curve) for sensor in sensors)
    joints = [s for s in judged if s.sensor.kind == "joint"]
    run_checks: list[Checked] = []
    if most_spread_c is not None:
        peaks = [s.peak.value for s in joints]
        bounds = Bounds(high=most_spread_c)
        run_checks += held("peak spread between joints", max(peaks) - min(peaks), bounds, "°C")
    named = [(c, s.sensor.trace.name) for s in judged for c in s.checks]
    everything: list[tuple[Checked, str | None]] = [*named, *((c, None) for c in run_checks)]
    # the order of the sensors must not decide: equals are told apart by name
    tightest = min(
        everything,
        key=lambda pair: (pair[0].tightness, pair[0].limit, pair[0].side, pair[1] or ""),
        default=None,
    )
    return Judged(
        judged,
        tuple(run_checks),
        None if tightest is None else tightest[0],
        None if tightest is None else tightest[1],
        hold_still([s.sensor.trace for s in joints], levels.solidus_c, hold_still_c),
    )


def hold_still(joints: Sequence[Trace], solidus_c: float, frozen_c: float) -> HoldStill:
    """How long the work must not move: from the first joint at the solidus to the last under `frozen_c`."""
    begins = [t for t in (first_at(trace, solidus_c) for trace in joints) if t is not None]
    if not begins:
        return HoldStill(None, None)
    ends = [last_at(trace, frozen_c) or trace.start_s for trace in joints]
    open_end = any(trace.temperature_c[-1] >= frozen_c for trace in joints)
    return HoldStill(min(begins), None if open_end else max(ends))


def _sensor(
    sensor: Sensor, demands: Sequence[Demand], levels: Levels, window: Bounds, curve: Points | None
) -> SensorJudged:
    trace, joint = sensor.trace, sensor.kind == "joint"
    top = peak(trace)
    own = [c for c in (window.high, sensor.limit_c) if c is not None]
    bounds = Bounds(window.low if joint else None, min(own, default=None))
    checks = held("peak", top.value, bounds, "°C")
    for demand in demands:
        if joint or not demand.joints_only:
            checks += demand.check(trace, levels)
    return SensorJudged(
        sensor,
        top,
        tuple(checks),
        time_above(trace, levels.solidus_c),
        time_above(trace, levels.target_c, or_at=True),
        liquid_along(trace, curve) if joint and curve is not None else (),
    )
