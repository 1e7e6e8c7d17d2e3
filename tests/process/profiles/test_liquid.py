"""Liquid fraction along a record: exact at every kink and jump of the curve, whatever the sampling."""

import itertools

import numpy as np
import pytest

from service.process.profiles.liquid import fractions_at, liquid_along
from service.process.profiles.trace import Trace

# a eutectic jump to 40 %, then straight to all liquid (made up)
CURVE = [(100.0, 0.0), (180.0, 0.0), (180.0, 0.4), (200.0, 0.6), (220.0, 1.0), (300.0, 1.0)]


def test_reading_the_curve() -> None:
    at = np.array([50.0, 100.0, 179.999, 180.0, 190.0, 200.0, 210.0, 220.0, 300.0, 400.0])
    wanted = [0.0, 0.0, 0.0, 0.4, 0.5, 0.6, 0.8, 1.0, 1.0, 1.0]
    assert fractions_at(CURVE, at) == pytest.approx(wanted, abs=1e-12)


@pytest.mark.parametrize("step_s", [0.01, 1.0, 3.7, 240.0])
def test_up_and_down(step_s: float) -> None:
    """From 100 °C at 1 °C/s to 240 and down again."""
    corners_s, corners_c = [0.0, 140.0, 280.0], [100.0, 240.0, 100.0]
    times = np.union1d(np.arange(0.0, 280.0, step_s), corners_s)
    trace = Trace("pad", times, np.interp(times, corners_s, corners_c))
    found = np.array(liquid_along(trace, CURVE))
    up = [(0, 0), (80, 0), (80, 0.4), (100, 0.6), (120, 1)]
    wanted = np.array([*up, *((280 - t, f) for t, f in reversed(up))], dtype=float)
    # the shortened curve may lie off by a thousandth of the run or of the fraction
    for t, f in wanted:
        near = np.min(np.hypot((found[:, 0] - t) / 280.0, found[:, 1] - f))
        assert near <= 0.0015, (t, f)
    assert len(found) <= 12


def test_noise_about_a_jump_stays_in_order() -> None:
    random = np.random.default_rng(2)
    times = np.arange(0.0, 100.0)
    trace = Trace("pad", times, 180.0 + random.normal(0.0, 2.0, 100))
    found = liquid_along(trace, CURVE)
    assert all(t0 <= t1 + 1e-9 for (t0, _), (t1, _) in itertools.pairwise(found))
    assert {round(f, 3) for _, f in found} >= {0.0, 0.4}
