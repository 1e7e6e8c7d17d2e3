"""One sensor's record, taken as straight lines between its samples, and what can be read off it.

Every time is found where the line crosses a level, not at the nearest sample, so that the answer does not
depend on how often the logger looked.
"""

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

Floats = NDArray[np.float64]


@dataclass(frozen=True, eq=False)
class Trace:
    """`time_s` (n,) strictly rising and `temperature_c` (n,), finite, n ≥ 2."""

    name: str
    time_s: Floats
    temperature_c: Floats

    @property
    def start_s(self) -> float:
        """Time of the first sample."""
        return float(self.time_s[0])

    @property
    def end_s(self) -> float:
        """Time of the last sample."""
        return float(self.time_s[-1])

    def at(self, time_s: Floats) -> Floats:
        """Temperatures at times within the record."""
        return np.interp(time_s, self.time_s, self.temperature_c)

    def between(self, from_s: float, to_s: float) -> "Trace":
        """The record from one time to a later one, cut where the lines are, ends included."""
        inside = (self.time_s > from_s) & (self.time_s < to_s)
        ends = self.at(np.array([from_s, to_s]))
        return Trace(
            self.name,
            np.concatenate([[from_s], self.time_s[inside], [to_s]]),
            np.concatenate([ends[:1], self.temperature_c[inside], ends[1:]]),
        )


@dataclass(frozen=True)
class Moment:
    """A value and the time (s) at which it stands."""

    value: float
    time_s: float


def peak(trace: Trace) -> Moment:
    """The highest temperature, °C, and when it is first reached."""
    k = int(np.argmax(trace.temperature_c))
    return Moment(float(trace.temperature_c[k]), float(trace.time_s[k]))


def time_above(trace: Trace, level_c: float, *, or_at: bool = False) -> float:
    """Seconds above a level; with `or_at` stretches lying exactly on it count too."""
    there = trace.temperature_c >= level_c
    k = np.flatnonzero(there[:-1] | there[1:])  # the lines that reach it; most of a run does not
    start, end = trace.temperature_c[k] - level_c, trace.temperature_c[k + 1] - level_c
    both = np.abs(start) + np.abs(end)
    on_it = 1.0 if or_at else 0.0
    up = np.maximum(start, 0.0) + np.maximum(end, 0.0)
    share = np.where(both > 0.0, up / np.where(both > 0.0, both, 1.0), on_it)
    lasts = trace.time_s[k + 1] - trace.time_s[k]
    return float((lasts * share).sum())  # no dot product: it would call up threads


def time_within(trace: Trace, low_c: float, high_c: float) -> float:
    """Seconds between two levels, both included (low_c ≤ high_c)."""
    return time_above(trace, low_c, or_at=True) - time_above(trace, high_c)


def first_at(trace: Trace, level_c: float) -> float | None:
    """When the record first is at a level or above it, s; None if never."""
    over = trace.temperature_c >= level_c
    if not over.any():
        return None
    k = int(np.argmax(over))
    return trace.start_s if k == 0 else _crossing(trace, k - 1, level_c)


def last_at(trace: Trace, level_c: float) -> float | None:
    """When the record last is at a level or above it, s; None if never; the end if it still is."""
    over = trace.temperature_c >= level_c
    if not over.any():
        return None
    k = len(over) - 1 - int(np.argmax(over[::-1]))
    return trace.end_s if k == len(over) - 1 else _crossing(trace, k, level_c)


@dataclass(frozen=True)
class Rates:
    """The fastest rise and fall over an averaging time, °C/s, both counted positive; where each begins."""

    rise: Moment
    fall: Moment


def rates(trace: Trace, over_s: float) -> Rates | None:
    """Steepest change of temperature over `over_s` seconds; None for a shorter record.

    The difference across a sliding span bends only where one of its ends passes a sample, so its extremes
    lie there: they are exact. A record that never rises (falls) has the rate 0, at its start.
    """
    last_start = trace.end_s - over_s
    if last_start < trace.start_s:
        return None
    times, readings = trace.time_s, trace.temperature_c
    begins = times[times <= last_start]  # spans that begin at a sample
    ends = times[times - over_s >= trace.start_s]  # and those that end at one, the last of all among them
    after = trace.at(begins + over_s) - readings[: len(begins)]
    before = readings[len(times) - len(ends) :] - trace.at(ends - over_s)
    starts = np.concatenate([begins, ends - over_s])
    change = np.concatenate([after, before]) / over_s
    return Rates(_steepest(starts, change, trace.start_s), _steepest(starts, -change, trace.start_s))


def mean_fall(trace: Trace, from_c: float, to_c: float, over_s: float) -> Moment | None:
    """Mean rate of cooling (°C/s, positive) from one level down to another, the last time this happens.

    The span is widened evenly to `over_s` seconds where it is shorter, as for an alloy that freezes at one
    temperature. None if the record never falls through both levels or ends within the span.
    """
    leaves = last_at(trace, from_c)
    if leaves is None or leaves >= trace.end_s:
        return None
    after = trace.between(leaves, trace.end_s)
    under = after.temperature_c <= to_c
    if not under.any():
        return None
    k = int(np.argmax(under))
    arrives = leaves if k == 0 else _crossing(after, k - 1, to_c)
    widened = max(0.0, over_s - (arrives - leaves)) / 2.0
    start, end = leaves - widened, arrives + widened
    if start < trace.start_s or end > trace.end_s or end <= start:
        return None
    levels = trace.at(np.array([start, end]))
    return Moment(float(levels[0] - levels[1]) / (end - start), start)


def _steepest(starts: Floats, change: Floats, at_rest_s: float) -> Moment:
    best = float(change.max())
    if best <= 0.0:
        return Moment(0.0, at_rest_s)
    return Moment(best, float(starts[change == best].min()))


def _crossing(trace: Trace, k: int, level_c: float) -> float:
    """When the line from sample k to the next crosses a level that lies between them."""
    t0, t1 = trace.time_s[k : k + 2].tolist()
    c0, c1 = trace.temperature_c[k : k + 2].tolist()
    return float(t0 + (t1 - t0) * (level_c - c0) / (c1 - c0))
