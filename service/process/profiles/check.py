"""The check of a recorded run, from question to answer."""

from collections.abc import Sequence
from dataclasses import dataclass

from diagrams.errors import InvalidInput
from service.process.bounds import Bounds
from service.process.budget import Budget
from service.process.placed import Placed, about, placed
from service.process.profiles.asked import channels_of, demands_of, rules_of, window_given
from service.process.profiles.demands import Levels
from service.process.profiles.judge import Judged, Sensor, judge
from service.process.profiles.recording import Mended, Recording, traces_of
from service.process.profiles.standards import StandardProfile
from service.process.profiles.suspicion import check_unit, dead_sensors
from service.process.solidification import hold_still_c
from service.process.window import Demands, Window, find_window
from service.process.window_answer import demands_of as window_demands_of
from service.process.window_terms import EarlierJoint, remelting_term
from service.schemas.profile import ProfileQuestion


@dataclass(frozen=True, eq=False)
class Run:
    """A run that was judged, with all that its answer and picture need."""

    filler: Placed
    demands: Demands
    bounds: Bounds
    window: Window | None
    levels: Levels
    hold_still_c: float
    hold_still_by: str
    judged: Judged
    mended: tuple[Mended, ...]
    standard: StandardProfile | None

    @property
    def hottest_c(self) -> float:
        """The highest reading of any sensor."""
        return max(sensor.peak.value for sensor in self.judged.sensors)


def checked_run(question: ProfileQuestion) -> Run:
    """Judge a run; raises InvalidInput and its like naming the field."""
    given = window_given(question)
    limits, standard = demands_of(question)
    filler, demands = placed(question.alloy), window_demands_of(question)
    channels = channels_of(question)
    window = None if given is not None else find_window(filler, demands)
    if window is None:
        assert given is not None  # one of both
        bounds = _with_earlier(given, demands)
    else:
        bounds = Bounds(window.minimum_peak_c, window.maximum_peak_c)
    with about(filler, "alloy"):
        solidus, liquidus = filler.melter.kept(0.0), filler.melter.needed(1.0)
        target = filler.melter.needed(demands.target_liquid_fraction)
    levels = Levels(solidus.nominal, liquidus.nominal, target.safe_high)
    recording = _plausible(traces_of(channels, rules_of(question)), question, _wanted_c(bounds, levels))
    asked = {sensor.name: sensor for sensor in question.sensors}
    sensors = [Sensor(t, asked[t.name].on, asked[t.name].limit_c) for t in recording.traces]
    if all(sensor.kind == "part" for sensor in sensors):
        raise InvalidInput(
            "No sensor with readings sits on a joint.",
            field="sensors",
            remedy='Send at least one record with "on": "joint".',
        )
    curve = filler.melter.curve
    with about(filler, "alloy"):
        frozen_c, frozen_by = hold_still_c(filler, solidus.safe_low)
    judged = judge(
        sensors,
        limits,
        levels,
        bounds,
        frozen_c,
        None if curve is None else curve.points,
        question.limits.peak_spread_c,
    )
    return Run(
        filler, demands, bounds, window, levels, frozen_c, frozen_by, judged, recording.mended, standard
    )


def _with_earlier(given: Bounds, demands: Demands) -> Bounds:
    """A given window, cut where an earlier joint would take harm."""
    tops = [] if given.high is None else [given.high]
    for k, joint in enumerate(demands.earlier_joints):
        tops += _keeps(joint, demands.budget, f"earlier_joints.{k}.alloy")
    return Bounds(given.low, min(tops, default=None))


def _keeps(joint: EarlierJoint, budget: Budget, where: str) -> list[float]:
    with about(joint.subject, where):
        return [term.value_c for term in remelting_term(joint, budget)]


def _wanted_c(bounds: Bounds, levels: Levels) -> float:
    """The peak that the run is for, as near as it is known."""
    ends = [c for c in (bounds.low, bounds.high) if c is not None]
    return sum(ends) / len(ends) if ends else levels.target_c


def _plausible(recording: Recording, question: ProfileQuestion, wanted_c: float) -> Recording:
    """Records whose unit and whose sensors can be believed."""
    dead = {found.sensor: found for found in dead_sensors(recording.traces, wanted_c)}
    living = tuple(trace for trace in recording.traces if trace.name not in dead)
    if living and not question.readings_are_celsius:
        check_unit(living, wanted_c)
    if not dead:
        return recording
    found = next(iter(dead.values()))
    if "leave out dead sensors" not in question.repairs or not living:
        k = next(k for k, sensor in enumerate(question.sensors) if sensor.name == found.sensor)
        raise InvalidInput(
            f"Sensor “{found.sensor}” does not move from {found.from_s:g} to {found.to_s:g} s while the run "
            "does: it is dead, or not where it should be.",
            field=f"sensors.{k}",
            remedy="Send a sound record"
            + (
                ", or ask for the repair “leave out dead sensors”."
                if living
                else "; no sensor follows the run."
            ),
        )
    counts: Sequence[Mended] = [
        Mended("leave out dead sensors", trace.name, len(trace.time_s))
        for trace in recording.traces
        if trace.name in dead
    ]
    return Recording(living, (*recording.mended, *counts))
