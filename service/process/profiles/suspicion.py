"""Records that can be read but hardly mean what they say: sensors that are dead, other units than °C."""

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np

from diagrams.errors import InvalidInput
from diagrams.units import fahrenheit_to_celsius, kelvin_to_celsius
from service.process.profiles.trace import Floats, Trace

FLAT_C = 0.5  # a sensor that moves by no more than this
MOVED_C = 30.0  # while another moves by more than this is dead
STUCK_SHARE = 0.2  # of the record: a reading that stays the same to the last digit for longer is stuck
ROOM_C = (-10.0, 60.0)  # where a run begins, in whatever unit
FAR_C = 40.0  # of the wanted peak: a unit is doubted only where the record misses it by more than this


@dataclass(frozen=True)
class Dead:
    """A sensor that does not follow the run; `from_s` and `to_s` say while the others moved."""

    sensor: str
    from_s: float
    to_s: float


def dead_sensors(traces: Sequence[Trace], wanted_c: float) -> tuple[Dead, ...]:
    """Sensors that stay where they are although the run moves; `wanted_c` is the peak the run is for.

    A sensor alone, or all alike, counts as dead if it stays flat more than MOVED_C away from that peak.
    """
    found = []
    for trace in traces:
        others = [other for other in traces if other is not trace]
        start, end = _flattest(trace)
        flat = trace.temperature_c[(trace.time_s >= start) & (trace.time_s <= end)]
        whole = np.ptp(trace.temperature_c) <= FLAT_C
        if not whole and end - start < STUCK_SHARE * (trace.end_s - trace.start_s):
            continue
        moved = any(_span(other, start, end) > MOVED_C for other in others)
        cold = whole and abs(float(flat[0]) - wanted_c) > MOVED_C
        if moved or cold:
            found.append(Dead(trace.name, start, end))
    return tuple(found)


def check_unit(traces: Sequence[Trace], wanted_c: float) -> None:
    """Raise InvalidInput if the readings make sense as kelvin or degrees Fahrenheit and none as Celsius."""
    starts = [float(trace.temperature_c[0]) for trace in traces]
    peak = max(float(trace.temperature_c.max()) for trace in traces)
    away_c = abs(peak - wanted_c)
    if away_c <= FAR_C:
        return
    for unit, converted in (("kelvin", kelvin_to_celsius), ("degrees Fahrenheit", fahrenheit_to_celsius)):
        starts_c, peak_c = [converted(start) for start in starts], converted(peak)
        begins_cold = all(ROOM_C[0] <= start_c <= ROOM_C[1] for start_c in starts_c)
        if begins_cold and abs(peak_c - wanted_c) <= FAR_C:
            raise InvalidInput(
                f"Taken as °C the run peaks at {peak:.1f} °C, {away_c:.0f} °C away from the "
                f"{wanted_c:.0f} °C it is for; taken as {unit} it begins at {min(starts_c):.0f} °C and peaks "
                f"at {peak_c:.0f} °C.",
                field="sensors",
                remedy=f"If the readings are {unit}, convert them to degrees Celsius; if they are Celsius, "
                "say so with readings_are_celsius.",
            )


def _flattest(trace: Trace) -> tuple[float, float]:
    """The whole record if it is flat, else the longest stretch of one and the same reading: from, to (s)."""
    if np.ptp(trace.temperature_c) <= FLAT_C:
        return trace.start_s, trace.end_s
    changes = np.flatnonzero(np.diff(trace.temperature_c) != 0.0)
    starts = np.concatenate([[0], changes + 1])
    ends = np.concatenate([changes, [len(trace.time_s) - 1]])
    lasting = trace.time_s[ends] - trace.time_s[starts]
    k = int(np.argmax(lasting))
    return float(trace.time_s[starts[k]]), float(trace.time_s[ends[k]])


def _span(trace: Trace, from_s: float, to_s: float) -> float:
    """How far a sensor moves between two times, °C; 0 where it has no record of them."""
    start, end = max(from_s, trace.start_s), min(to_s, trace.end_s)
    if end <= start:
        return 0.0
    readings: Floats = trace.between(start, end).temperature_c
    return float(np.ptp(readings))
