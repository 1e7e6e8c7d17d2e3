"""Broken records: refused with the place and the remedy, or mended on request and listed."""

import numpy as np
import pytest

from diagrams.errors import InvalidInput
from service.process.profiles.recording import Channel, Repair, Rules, traces_of

TIMES = np.arange(0.0, 60.0)
READINGS = 25.0 + 3.0 * TIMES


def channel(times: np.ndarray = TIMES, readings: np.ndarray = READINGS, name: str = "pad") -> Channel:
    return Channel(name, np.asarray(times, float), np.asarray(readings, float), "sensors.0")


def with_missing() -> Channel:
    readings = READINGS.copy()
    readings[[7, 9]] = np.nan
    return channel(readings=readings)


def stepping_back() -> Channel:
    order = np.arange(60)
    order[[20, 21]] = [21, 20]
    return channel(TIMES[order], READINGS[order])


def with_equal_times() -> Channel:
    times = TIMES.copy()
    times[31] = times[30]
    return channel(times)


def with_a_jump() -> Channel:
    readings = READINGS.copy()
    readings[40:43] = 1370.0
    return channel(readings=readings)


def with_a_gap() -> Channel:
    kept = (TIMES < 30) | (TIMES > 44)
    return channel(TIMES[kept], READINGS[kept])


@pytest.mark.parametrize(
    ("broken", "repair", "field", "count"),
    [
        (with_missing(), "leave out missing samples", "sensors.0.temperature_c.7", 2),
        (stepping_back(), "sort times", "sensors.0.time_s.21", 1),
        (with_equal_times(), "merge equal times", "sensors.0.time_s.31", 1),
        (with_a_jump(), "leave out jumps", "sensors.0.temperature_c.40", 3),
        (with_a_gap(), "bridge gaps", "sensors.0.time_s.30", 1),
    ],
)
def test_fault_is_refused_or_mended(broken: Channel, repair: Repair, field: str, count: int) -> None:
    with pytest.raises(InvalidInput) as refused:
        traces_of([broken], Rules())
    assert refused.value.field == field
    assert repair in refused.value.remedy
    found = traces_of([broken], Rules(repairs=frozenset({repair})))
    assert [(m.repair, m.count) for m in found.mended] == [(repair, count)]
    (trace,) = found.traces
    assert (np.diff(trace.time_s) > 0).all()
    # what is left lies on the line the record was made from; merged times take the mean
    off = np.abs(trace.temperature_c - (25.0 + 3.0 * trace.time_s))
    assert off.max() <= (1.5 if repair == "merge equal times" else 0.0)


def test_sound_records_pass_untouched() -> None:
    found = traces_of([channel(), channel(name="lead")], Rules())
    assert found.mended == ()
    assert [t.name for t in found.traces] == ["pad", "lead"]


def test_fast_sampling_of_a_fast_but_possible_rise_is_no_jump() -> None:
    times = np.arange(0.0, 2.0, 1e-4)
    readings = 25.0 + 150.0 * times + np.where(np.arange(len(times)) % 2, 0.5, -0.5)  # with noise
    assert traces_of([channel(times, readings)], Rules()).mended == ()


def test_a_sample_a_minute_is_no_gap() -> None:
    assert traces_of([channel(TIMES * 60.0)], Rules()).mended == ()


def test_empty_sensors() -> None:
    empty = Channel("spare", TIMES, np.full(60, np.nan), "sensors.1")
    with pytest.raises(InvalidInput, match="holds no reading"):
        traces_of([channel(), empty], Rules())
    found = traces_of([channel(), empty], Rules(repairs=frozenset({"leave out empty sensors"})))
    assert [t.name for t in found.traces] == ["pad"]
    assert [(m.repair, m.sensor) for m in found.mended] == [("leave out empty sensors", "spare")]
    with pytest.raises(InvalidInput, match="No sensor"):
        traces_of([empty], Rules(repairs=frozenset({"leave out empty sensors"})))


@pytest.mark.parametrize("names", [("pad", "PAD"), ("pad", " pad"), ("", "pad")])
def test_names_must_differ(names: tuple[str, str]) -> None:
    with pytest.raises(InvalidInput, match="sensor name"):
        traces_of([channel(name=n) for n in names], Rules())


@pytest.mark.parametrize("reading", [-250.0, 3200.0])
def test_impossible_readings(reading: float) -> None:
    readings = READINGS.copy()
    readings[11] = reading
    with pytest.raises(InvalidInput) as refused:
        traces_of([channel(readings=readings)], Rules())
    assert refused.value.field == "sensors.0.temperature_c.11"


def test_a_single_sample_is_no_record() -> None:
    with pytest.raises(InvalidInput, match="fewer than two"):
        traces_of([channel(TIMES[:1], READINGS[:1])], Rules())


def test_a_given_gap_length_decides() -> None:
    with pytest.raises(InvalidInput, match="pauses"):
        traces_of([channel()], Rules(longest_gap_s=0.5))
    assert traces_of([with_a_gap()], Rules(longest_gap_s=20.0)).mended == ()


@pytest.mark.parametrize("wrong", [[0], [0, 1, 2], [40], [40, 41], [79], [78, 79]])
def test_the_side_of_a_jump_that_leaves_more_is_believed(wrong: list[int]) -> None:
    """A wire off at the start, on the way or at the end: those samples go and no others."""
    times = np.arange(80.0)
    readings = 24.0 + 0.95 * times
    spoilt = readings.copy()
    spoilt[wrong] = 1500.0
    channel = Channel("pad", times, spoilt, "sensors.0")
    mended = traces_of([channel], Rules(frozenset({"leave out jumps"})))
    (trace,) = mended.traces
    assert [m.count for m in mended.mended if m.repair == "leave out jumps"] == [len(wrong)]
    assert trace.temperature_c.tolist() == np.delete(readings, wrong).tolist()
