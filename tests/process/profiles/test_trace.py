"""What is read off a record, against closed forms, at several sampling rates."""

import numpy as np
import pytest

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

# Ramp, soak, spike, all straight: 25 °C, at 2 °C/s to 150, 60 s up to 180, at 3 °C/s to 240, at 4 °C/s to 40.
CORNERS_S = [0.0, 62.5, 122.5, 142.5, 192.5]
CORNERS_C = [25.0, 150.0, 180.0, 240.0, 40.0]


def sampled(step_s: float) -> Trace:
    """The straight-lined profile looked at every so often, and at its corners."""
    times = np.union1d(np.arange(0.0, CORNERS_S[-1], step_s), CORNERS_S)
    return Trace("board", times, np.interp(times, CORNERS_S, CORNERS_C))


STEPS = [1e-4, 0.1, 1.0, 7.3, 60.0, 1000.0]


@pytest.mark.parametrize("step_s", STEPS)
def test_ramp_soak_spike(step_s: float) -> None:
    trace = sampled(step_s)
    assert peak(trace).value == 240.0
    assert peak(trace).time_s == 142.5
    # above 217 °C: 23 °C at 3 °C/s up, 23 °C at 4 °C/s down
    assert time_above(trace, 217.0) == pytest.approx(23.0 / 3.0 + 23.0 / 4.0, abs=1e-9)
    # within 5 °C of the peak
    assert time_above(trace, 235.0, or_at=True) == pytest.approx(5.0 / 3.0 + 5.0 / 4.0, abs=1e-9)
    # 150 to 180 °C: the soak, and again on the way down at 4 °C/s
    assert time_within(trace, 150.0, 180.0) == pytest.approx(60.0 + 30.0 / 4.0, abs=1e-9)
    assert time_within(trace.between(0.0, 142.5), 150.0, 180.0) == pytest.approx(60.0, abs=1e-9)
    assert first_at(trace, 217.0) == pytest.approx(122.5 + 37.0 / 3.0, abs=1e-9)
    assert last_at(trace, 217.0) == pytest.approx(142.5 + 23.0 / 4.0, abs=1e-9)
    found = rates(trace, 10.0)
    assert found is not None
    assert found.rise.value == pytest.approx(3.0, abs=1e-9)
    assert found.fall.value == pytest.approx(4.0, abs=1e-9)
    # over 30 s the spike's rise takes in 10 s of the soak at 0.5 °C/s: (60 + 5) / 30
    slow = rates(trace, 30.0)
    assert slow is not None
    assert slow.rise.value == pytest.approx(65.0 / 30.0, abs=1e-9)
    assert slow.rise.time_s == pytest.approx(112.5, abs=1e-6)
    through = mean_fall(trace, 219.0, 217.0, 0.4)
    assert through is not None
    assert through.value == pytest.approx(4.0, abs=1e-9)


@pytest.mark.parametrize("rate_hz", [50, 1000])
def test_sine_on_a_plateau(rate_hz: int) -> None:
    """200 + 10 sin(2πt/20): half the time above 200, a third above 205, the rate of its steepest second."""
    times = np.arange(0, 200 * rate_hz + 1) / rate_hz
    trace = Trace("oven", times, 200.0 + 10.0 * np.sin(2 * np.pi * times / 20.0))
    bend = 10.0 * (2 * np.pi / 20.0) ** 2 / 8.0 / rate_hz**2  # a chord's distance from the sine at most
    assert peak(trace).value == pytest.approx(210.0, abs=bend)
    assert time_above(trace, 200.0) == pytest.approx(100.0, abs=1e-6)
    assert time_above(trace, 205.0) == pytest.approx(200.0 / 3.0, abs=20 * bend)
    steepest = 20.0 * np.sin(np.pi / 20.0)  # 10 · 2 sin(ω/2) for one second across the zero
    found = rates(trace, 1.0)
    assert found is not None
    assert found.rise.value == pytest.approx(steepest, abs=2 * bend)
    assert found.fall.value == pytest.approx(steepest, abs=2 * bend)


def test_on_the_level_counts_only_where_asked() -> None:
    trace = Trace("flat", np.array([0.0, 10.0, 20.0, 30.0]), np.array([100.0, 200.0, 200.0, 100.0]))
    assert time_above(trace, 200.0) == 0.0
    assert time_above(trace, 200.0, or_at=True) == 10.0
    assert time_within(trace, 200.0, 250.0) == 10.0
    assert time_above(trace, 150.0) == 20.0


def test_never_and_always() -> None:
    trace = Trace("x", np.array([0.0, 10.0]), np.array([100.0, 200.0]))
    assert first_at(trace, 201.0) is None
    assert last_at(trace, 201.0) is None
    assert first_at(trace, 50.0) == 0.0
    assert last_at(trace, 50.0) == 10.0
    assert time_above(trace, 50.0) == 10.0
    assert rates(trace, 10.5) is None
    whole = rates(trace, 10.0)
    assert whole is not None
    assert (whole.rise.value, whole.fall.value) == (10.0, 0.0)
    assert mean_fall(trace, 180.0, 170.0, 1.0) is None


def test_rates_by_brute_force() -> None:
    """A random walk with uneven times: a fine scan finds nothing steeper, and comes close."""
    random = np.random.default_rng(5)
    times = np.cumsum(random.uniform(0.05, 3.0, 200))
    trace = Trace("walk", times, 150.0 + np.cumsum(random.normal(0.0, 2.0, 200)))
    for over_s in (0.5, 4.0, 30.0):
        found = rates(trace, over_s)
        assert found is not None
        starts = np.linspace(trace.start_s, trace.end_s - over_s, 400_001)
        change = (trace.at(starts + over_s) - trace.at(starts)) / over_s
        assert change.max() <= found.rise.value + 1e-9
        assert -change.min() <= found.fall.value + 1e-9
        assert change.max() == pytest.approx(found.rise.value, abs=0.02)
        at = found.rise.time_s
        again = (trace.at(np.array([at + over_s])) - trace.at(np.array([at]))) / over_s
        assert again[0] == pytest.approx(found.rise.value, abs=1e-9)


def test_freezing_of_a_eutectic_is_averaged_about_it() -> None:
    trace = sampled(1.0)
    found = mean_fall(trace, 183.0, 183.0, 6.0)
    assert found is not None
    assert found.value == pytest.approx(4.0, abs=1e-9)
    assert found.time_s == pytest.approx(142.5 + 57.0 / 4.0 - 3.0, abs=1e-9)
    assert mean_fall(trace, 41.0, 41.0, 6.0) is None  # the record ends within the span
