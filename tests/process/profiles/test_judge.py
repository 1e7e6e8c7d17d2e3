"""Verdicts on runs with known answers: margins, the tightest, hold-still time, parts beside joints."""

from itertools import permutations

import numpy as np
import pytest

from service.process.bounds import Bounds
from service.process.profiles.demands import (
    Demand,
    Freezing,
    Levels,
    NearPeak,
    Peak,
    Rate,
    Soak,
    TimeAbove,
    ToPeak,
)
from service.process.profiles.judge import Sensor, hold_still, judge
from service.process.profiles.limits import Checked
from service.process.profiles.trace import Trace

LEVELS = Levels(solidus_c=183.0, liquidus_c=190.0, target_c=190.0)
CURVE = [(25.0, 0.0), (183.0, 0.0), (183.0, 0.5), (190.0, 1.0), (400.0, 1.0)]
DEMANDS: list[Demand] = [
    Rate("rise", Bounds(high=3.0), 10.0),
    Rate("fall", Bounds(high=5.0), 10.0),
    Freezing(Bounds(low=2.0, high=4.5), 10.0),
    TimeAbove("solidus", Bounds(low=30.0, high=90.0)),
    TimeAbove("target", Bounds(low=20.0)),
    Soak(120.0, 160.0, Bounds(60.0, 120.0)),
    NearPeak(5.0, Bounds(high=30.0)),
    ToPeak(25.0, Bounds(high=300.0)),
]


def run(name: str, peak_c: float, start_c: float = 25.0) -> Trace:
    """25 °C, at 2 °C/s to 120, 80 s to 160, at 2 °C/s to the peak, 8 s there, at 4 °C/s to 60."""
    rise = (peak_c - 160.0) / 2.0
    times = np.cumsum([0.0, (120.0 - start_c) / 2.0, 80.0, rise, 8.0, (peak_c - 60.0) / 4.0])
    return Trace(name, times, np.array([start_c, 120.0, 160.0, peak_c, peak_c, 60.0]))


def by_name(checks: tuple[Checked, ...], limit: str, side: str) -> Checked:
    return next(c for c in checks if (c.limit, c.side) == (limit, side))


def test_known_margins() -> None:
    found = judge([Sensor(run("pad", 215.0))], DEMANDS, LEVELS, Bounds(205.0, 225.0), 183.0, CURVE)
    (pad,) = found.sensors
    # 32 °C over the solidus at 2 °C/s, 8 s, 32 °C at 4 °C/s
    assert pad.time_above_solidus_s == pytest.approx(16.0 + 8.0 + 8.0)
    assert pad.time_at_target_s == pytest.approx(12.5 + 8.0 + 6.25)
    wanted = {
        ("peak", "at least"): 10.0,
        ("peak", "at most"): 10.0,
        ("time above solidus", "at least"): 2.0,
        ("time above solidus", "at most"): 58.0,
        ("time at target liquid fraction", "at least"): 6.75,
        ("cooling rate through freezing", "at least"): 2.0,
        ("cooling rate through freezing", "at most"): 0.5,
        ("fastest rise", "at most"): 1.0,
        ("fastest fall", "at most"): 1.0,
        ("soak from 120 to 160 °C", "at least"): 20.0,
        ("soak from 120 to 160 °C", "at most"): 40.0,
        ("time within 5 °C of peak", "at most"): 30.0 - (2.5 + 8.0 + 1.25),
        ("time from 25 °C to peak", "at most"): 300.0 - (47.5 + 80.0 + 27.5),
    }
    for (limit, side), margin in wanted.items():
        assert by_name(pad.checks, limit, side).margin == pytest.approx(margin, abs=1e-9), (limit, side)
    assert len(pad.checks) == len(wanted)
    assert found.passed
    # 2 s of the 60 s allowed is the smallest share
    assert found.tightest is not None
    assert (found.tightest.limit, found.tightest.side) == ("time above solidus", "at least")
    assert found.tightest_sensor == "pad"
    assert found.hold_still.lasts_s == pytest.approx(32.0)


def test_on_the_bound_passes_with_no_margin() -> None:
    window = Bounds(215.0, 225.0)
    found = judge([Sensor(run("pad", 215.0))], DEMANDS, LEVELS, window, 183.0, CURVE)
    check = by_name(found.sensors[0].checks, "peak", "at least")
    assert check.margin == 0.0
    assert check.passed
    assert found.passed
    assert found.tightest == check
    under = judge([Sensor(run("pad", 215.0 - 1e-5))], DEMANDS, LEVELS, window, 183.0, CURVE)
    assert not under.passed


def test_order_of_sensors_does_not_matter() -> None:
    runs = [run("a", 214.0), run("b", 214.0), run("c", 221.0)]
    verdicts = set()
    for order in permutations(runs):
        found = judge([Sensor(t) for t in order], DEMANDS, LEVELS, Bounds(205.0, 225.0), 183.0, CURVE)
        assert found.tightest is not None
        verdicts.add((found.passed, found.tightest, found.tightest_sensor, found.hold_still))
    assert len(verdicts) == 1


def test_spread_is_between_joints_and_parts_know_their_limit() -> None:
    part = Sensor(run("relay", 240.0), "part", limit_c=230.0)
    found = judge(
        [Sensor(run("a", 212.0)), Sensor(run("b", 218.0)), part],
        DEMANDS,
        LEVELS,
        Bounds(205.0, 245.0),
        183.0,
        CURVE,
        most_spread_c=10.0,
    )
    (spread,) = found.run_checks
    assert spread.value == pytest.approx(6.0)
    relay = found.sensors[2]
    assert next((c.limit, c.side) for c in relay.checks) == ("peak", "at most")
    assert relay.checks[0].margin == pytest.approx(-10.0)
    assert not found.passed
    assert found.tightest_sensor == "relay"
    assert relay.liquid == ()


def test_what_the_record_does_not_show_is_not_met() -> None:
    whole = run("pad", 215.0)
    cut = whole.between(0.0, whole.end_s - 40.0)  # ends while the joint is still molten
    assert cut.temperature_c[-1] > 190.0
    found = judge([Sensor(cut)], DEMANDS, LEVELS, Bounds(205.0, 225.0), 183.0, CURVE)
    check = by_name(found.sensors[0].checks, "cooling rate through freezing", "at least")
    assert (check.value, check.margin, check.passed) == (None, None, False)
    assert check.why is not None
    assert found.hold_still.lasts_s is None
    assert not found.passed


def test_hold_still_runs_from_the_first_to_the_last() -> None:
    early, late = run("early", 215.0), run("late", 225.0, start_c=5.0)
    found = hold_still([late, early], 183.0, 170.0)
    assert found.from_s == pytest.approx(47.5 + 80.0 + 11.5)
    assert found.to_s == pytest.approx(57.5 + 80.0 + 32.5 + 8.0 + 55.0 / 4.0)
    cold = run("cold", 180.0)
    assert hold_still([cold], 183.0, 170.0).lasts_s == 0.0


def test_a_limit_never_makes_a_failed_run_pass() -> None:
    trace = run("pad", 215.0)
    window = Bounds(205.0, 225.0)
    free = judge([Sensor(trace)], [], LEVELS, window, 183.0, CURVE)
    held = judge([Sensor(trace)], [TimeAbove("solidus", Bounds(low=40.0))], LEVELS, window, 183.0, CURVE)
    assert free.passed
    assert not held.passed


def test_demands_of_a_standard_stand_beside_ones_own() -> None:
    standard = "J-STD-020D Pb-free assembly: "
    demands: list[Demand] = [
        TimeAbove(183.0, Bounds(60.0, 150.0), standard),
        Rate("rise", Bounds(high=3.0), 10.0, above_c=183.0, origin=standard),
        Rate("fall", Bounds(high=3.5), 1000.0, above_c=183.0, origin=standard),
        NearPeak(5.0, Bounds(high=5.0), of_c=218.0, origin=standard),
        Peak(Bounds(high=218.0), standard),
    ]
    found = judge([Sensor(run("pad", 215.0))], [*DEMANDS, *demands], LEVELS, Bounds(), 183.0, CURVE)
    (pad,) = found.sensors
    wanted = {
        ("time above 183 °C", "at least"): -28.0,
        ("fastest rise above 183 °C", "at most"): 1.0,
        # 8 s held and 8 s falling by 32 °C: the whole of it is shorter than the averaging time
        ("fastest fall above 183 °C", "at most"): 3.5 - 2.0,
        ("time within 5 °C of 218 °C", "at most"): 5.0 - (1.0 + 8.0 + 0.5),
        ("peak", "at most"): 3.0,
    }
    for (limit, side), margin in wanted.items():
        assert by_name(pad.checks, standard + limit, side).margin == pytest.approx(margin, abs=1e-9), limit
