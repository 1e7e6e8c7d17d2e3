"""From recorded columns to traces: what is wrong with a record is refused, or mended if that was asked for.

Nothing is mended silently: each repair that was made is listed with the sensor and the number of samples.
"""

from collections.abc import Sequence
from dataclasses import dataclass
from functools import cached_property

import numpy as np
from numpy.typing import NDArray

from diagrams.errors import InvalidInput
from service.process.profiles.trace import Floats, Trace
from service.schemas.profile_words import Repair

Flags = NDArray[np.bool_]
Ints = NDArray[np.int64]

GAP_INTERVALS = 10.0  # a pause longer than this many usual intervals is a gap
LEAST_GAP_S = 2.0  # but pauses up to this are none
JUMP_C = 30.0  # a change from sample to sample of more than this, at more than the fastest rate, is a jump
LATEST_S, SHORTEST_S = 1e13, 1e-6  # milliseconds since 1970 are still believed
COLDEST_C, HOTTEST_C = -200.0, 3000.0


@dataclass(frozen=True, eq=False)
class Channel:
    """Columns as recorded: `time_s` (n,), `temperature_c` (n,), NaN where a sample is missing."""

    name: str
    time_s: Floats
    temperature_c: Floats
    field: str


@dataclass(frozen=True)
class Mended:
    """A repair that was made: which, on which sensor, how many samples (or gaps) it touched."""

    repair: Repair
    sensor: str
    count: int


@dataclass(frozen=True)
class Rules:
    """What counts as a fault, and which repairs are wanted.

    `longest_gap_s` None: GAP_INTERVALS times the record's own usual interval, LEAST_GAP_S at least.
    """

    repairs: frozenset[Repair] = frozenset()
    longest_gap_s: float | None = None
    fastest_c_per_s: float = 200.0


@dataclass(frozen=True, eq=False)
class Recording:
    """Traces fit to be judged, and what was mended."""

    traces: tuple[Trace, ...]
    mended: tuple[Mended, ...]


def traces_of(channels: Sequence[Channel], rules: Rules) -> Recording:
    """Check every channel; raises InvalidInput naming channel, sample and remedy for the first fault."""
    _check_names(channels)
    mended: list[Mended] = []
    traces = []
    clocks: dict[int, _Clock] = {}  # most sensors share their times
    for channel in channels:
        held = np.isfinite(channel.temperature_c)
        if not held.any():
            _mend("leave out empty sensors", channel, "holds no reading.", rules)
            mended.append(Mended("leave out empty sensors", channel.name, len(held)))
            continue
        key = id(channel.time_s)
        if key not in clocks:
            clocks[key] = _Clock(channel.time_s)
        traces.append(_trace(channel, held, rules, mended, clocks[key]))
    if not traces:
        raise InvalidInput(
            "No sensor holds any reading.", field="sensors", remedy="Send a record with readings in it."
        )
    return Recording(tuple(traces), tuple(mended))


class _Clock:
    """What there is to know of a column of times, found out once."""

    def __init__(self, times: Floats) -> None:
        self.times = times
        self.steps = np.diff(times)

    @cached_property
    def in_order(self) -> bool:
        """Whether no time is earlier than, or the same as, the one before."""
        return bool((self.steps > 0.0).all())

    @cached_property
    def usual_s(self) -> float:
        """The interval in the middle of all."""
        return float(np.median(self.steps))

    @cached_property
    def longest_s(self) -> float:
        """The longest interval."""
        return float(self.steps.max())


def _trace(channel: Channel, held: Flags, rules: Rules, mended: list[Mended], clock: _Clock) -> Trace:
    number = np.arange(len(held))  # of the samples as they were sent, for messages
    times, readings = channel.time_s, channel.temperature_c
    if not held.all():
        k, missing = int(np.argmin(held)), int(np.count_nonzero(~held))
        more = f" and at {missing - 1} more" if missing > 1 else ""
        _mend("leave out missing samples", channel, f"has no reading at sample {k}{more}.", rules, k)
        mended.append(Mended("leave out missing samples", channel.name, missing))
        times, readings, number = times[held], readings[held], number[held]
    _check_span(channel, readings, number)
    _check_times(channel, times, number)
    if len(times) != len(clock.times):
        clock = _Clock(times)
    if not clock.in_order:
        times, readings, number = _put_in_order(channel, times, readings, number, rules, mended)
        clock = _Clock(times)
    jumped = _jumped(channel, clock, readings, number, rules)
    if jumped.any():
        mended.append(Mended("leave out jumps", channel.name, int(np.count_nonzero(jumped))))
        times, readings, number = times[~jumped], readings[~jumped], number[~jumped]
        clock = _Clock(times)
    if len(times) < 2:
        raise InvalidInput(
            f"{_named(channel)} has fewer than two samples to judge.",
            field=channel.field,
            remedy="Send at least two samples of every sensor, or leave the sensor out.",
        )
    _check_gaps(channel, clock, number, rules, mended)
    return Trace(channel.name, times, readings)


def _put_in_order(
    channel: Channel, times: Floats, readings: Floats, number: Ints, rules: Rules, mended: list[Mended]
) -> tuple[Floats, Floats, Ints]:
    """Times that only rise: sorted, those that stand twice merged, if that was asked for."""
    steps = np.diff(times)
    if (steps < 0.0).any():
        k = int(np.argmax(steps < 0.0)) + 1
        what = f"steps back in time at sample {number[k]}, from {times[k - 1]:g} to {times[k]:g} s."
        _mend("sort times", channel, what, rules, int(number[k]))
        mended.append(Mended("sort times", channel.name, int(np.count_nonzero(steps < 0.0))))
        order = np.argsort(times, kind="stable")
        times, readings, number = times[order], readings[order], number[order]
        steps = np.diff(times)
    if (steps == 0.0).any():
        k = int(np.argmax(steps == 0.0)) + 1
        what = f"has two samples at {times[k]:g} s (sample {number[k]})."
        _mend("merge equal times", channel, what, rules, int(number[k]))
        mended.append(Mended("merge equal times", channel.name, int(np.count_nonzero(steps == 0.0))))
        times, first, where, counts = np.unique(
            times, return_index=True, return_inverse=True, return_counts=True
        )
        readings, number = np.bincount(where, weights=readings) / counts, number[first]
    return times, readings, number


def _jumped(channel: Channel, clock: _Clock, readings: Floats, number: Ints, rules: Rules) -> Flags:
    """Samples reached by a jump, up to the next one reached without: a torn wire reads nonsense a while."""
    times, steps = clock.times, clock.steps
    size = np.abs(np.diff(readings))
    with np.errstate(over="ignore"):  # after an endless pause nothing is a jump
        jumps = (size > JUMP_C) & (size > rules.fastest_c_per_s * steps)
    jumped = np.zeros(len(times), dtype=np.bool_)
    if not jumps.any():
        return jumped
    k = int(np.argmax(jumps)) + 1
    what = (
        f"jumps from {readings[k - 1]:.1f} to {readings[k]:.1f} °C within {steps[k - 1]:.3g} s (sample "
        f"{number[k]}), faster than {rules.fastest_c_per_s:g} °C/s: a loose or broken sensor, most likely."
    )
    _mend("leave out jumps", channel, what, rules, int(number[k]), " or set fastest_c_per_s")
    # a record may begin with nonsense, too: the side of the first jump that leaves more is believed
    first, behind = (_left_behind(clock.times, readings, rules, start) for start in (0, k))
    return first if np.count_nonzero(first) <= np.count_nonzero(behind) else behind


def _left_behind(times: Floats, readings: Floats, rules: Rules, start: int) -> Flags:
    """Samples that cannot be reached from one that is believed, those before it among them."""
    jumped = np.zeros(len(times), dtype=np.bool_)
    jumped[:start] = True
    last = start
    for j in range(start + 1, len(times)):
        apart = abs(readings[j] - readings[last])
        jumped[j] = apart > JUMP_C and apart > rules.fastest_c_per_s * (times[j] - times[last])
        last = last if jumped[j] else j
    return jumped


def _check_gaps(channel: Channel, clock: _Clock, number: Ints, rules: Rules, mended: list[Mended]) -> None:
    longest = rules.longest_gap_s
    if longest is None:
        longest = max(LEAST_GAP_S, GAP_INTERVALS * clock.usual_s)
    if clock.longest_s <= longest:
        return
    times, gaps = clock.times, clock.steps > longest
    k = int(np.argmax(gaps))
    what = f"pauses from {times[k]:g} to {times[k + 1]:g} s; more than {longest:g} s counts as a gap here."
    _mend("bridge gaps", channel, what, rules, int(number[k + 1]), " or set longest_gap_s")
    mended.append(Mended("bridge gaps", channel.name, int(np.count_nonzero(gaps))))


def _check_span(channel: Channel, readings: Floats, number: Ints) -> None:
    wrong = (readings < COLDEST_C) | (readings > HOTTEST_C)
    if wrong.any():
        k = int(np.argmax(wrong))
        raise InvalidInput(
            f"{_named(channel)} reads {readings[k]:g} °C at sample {number[k]}; possible is from "
            f"{COLDEST_C:g} to {HOTTEST_C:g} °C.",
            field=f"{channel.field}.temperature_c.{number[k]}",
            remedy="Send degrees Celsius; take the readings of a broken sensor out.",
        )


def _check_times(channel: Channel, times: Floats, number: Ints) -> None:
    wrong = np.abs(times) > LATEST_S
    if wrong.any():
        k = int(np.argmax(wrong))
        raise InvalidInput(
            f"{_named(channel)} has a sample at {times[k]:g} s; possible is up to {LATEST_S:g} s either way.",
            field=f"{channel.field}.time_s.{number[k]}",
            remedy="Send seconds, from the start of the run or from any other moment.",
        )
    if len(times) > 1 and float(np.ptp(times)) < SHORTEST_S:
        raise InvalidInput(
            f"{_named(channel)} lasts less than {SHORTEST_S:g} s.",
            field=f"{channel.field}.time_s",
            remedy="Send seconds, and at least two samples at different times.",
        )


def _check_names(channels: Sequence[Channel]) -> None:
    seen: set[str] = set()
    for channel in channels:
        key = " ".join(channel.name.split()).casefold()
        if not key or key in seen:
            raise InvalidInput(
                f"The sensor name “{channel.name}” is {'taken' if key else 'empty'}.",
                field=f"{channel.field}.name",
                remedy="Give every sensor a name of its own.",
            )
        seen.add(key)


def _mend(
    repair: Repair, channel: Channel, what: str, rules: Rules, sample: int | None = None, also: str = ""
) -> None:
    """Raise InvalidInput unless this repair was asked for."""
    if repair in rules.repairs:
        return
    column = "temperature_c" if repair in ("leave out missing samples", "leave out jumps") else "time_s"
    field = channel.field if sample is None else f"{channel.field}.{column}.{sample}"
    raise InvalidInput(
        f"{_named(channel)} {what}",
        field=field,
        remedy=f"Send a sound record, or ask for the repair “{repair}”{also}.",
    )


def _named(channel: Channel) -> str:
    return f"Sensor “{channel.name}”"
