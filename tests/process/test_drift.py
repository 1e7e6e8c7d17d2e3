"""Drift of a bath: the line against closed forms and against chance."""

import numpy as np
import pytest

from service.process.drift import drift_of, meeting

DAYS = [0.0, 7.0, 14.0, 21.0, 28.0, 35.0]


def test_a_perfect_line() -> None:
    drift = drift_of(DAYS, [0.10 + 0.004 * d for d in DAYS])
    assert drift is not None
    assert drift.slope == pytest.approx(0.004)
    found = meeting(drift, 0.30, today=35.0)
    assert found.outlook == "will meet it"
    assert found.day == pytest.approx(50.0)
    assert found.earliest == found.day == found.latest
    down = meeting(drift_of(DAYS, [3.0 - 0.01 * d for d in DAYS]), 2.5, today=35.0, upwards=False)
    assert down.day == pytest.approx(50.0)


def test_against_numpy() -> None:
    random = np.random.default_rng(3)
    values = 0.2 + 0.003 * np.array(DAYS) + random.normal(0.0, 0.01, 6)
    drift = drift_of(DAYS, values.tolist())
    assert drift is not None
    (slope, start), covariance = np.polyfit(DAYS, values, 1, cov="unscaled")
    left = values - start - slope * np.array(DAYS)
    sd = np.sqrt(left @ left / 4.0)
    assert drift.slope == pytest.approx(slope)
    assert drift.at(0.0) == pytest.approx(start)
    assert drift.residual_sd == pytest.approx(sd)
    assert drift.slope_error == pytest.approx(sd * np.sqrt(covariance[0, 0]))


def test_the_interval_holds_the_true_day_as_often_as_it_says() -> None:
    random = np.random.default_rng(11)
    held = 0
    tries = 2000
    for _ in range(tries):
        values = 0.10 + 0.004 * np.array(DAYS) + random.normal(0.0, 0.005, 6)
        found = meeting(drift_of(DAYS, values.tolist()), 0.30, today=35.0)
        assert found.outlook == "will meet it"
        assert found.earliest is not None
        assert found.earliest <= found.day <= (found.latest or np.inf)
        held += found.earliest <= 50.0 <= (np.inf if found.latest is None else found.latest)
    assert held / tries == pytest.approx(0.95, abs=0.02)  # four standard errors


def test_too_few_is_said() -> None:
    assert drift_of([3.0], [0.1]) is None
    assert drift_of([3.0, 3.0], [0.1, 0.2]) is None
    assert meeting(None, 0.3, 5.0).outlook == "too few analyses"
    assert meeting(drift_of([0.0, 7.0], [0.1, 0.2]), 0.3, 7.0).outlook == "too few analyses"


def test_no_drift_and_met_already() -> None:
    steady = drift_of(DAYS, [0.2, 0.19, 0.2, 0.18, 0.19, 0.18])
    found = meeting(steady, 0.3, 35.0)
    assert (found.outlook, found.day) == ("no drift towards it", None)
    full = drift_of(DAYS, [0.31, 0.32, 0.31, 0.33, 0.34, 0.34])
    assert meeting(full, 0.3, 35.0).outlook == "meets it already"


def test_a_weak_drift_has_no_latest_day() -> None:
    noisy = drift_of(DAYS, [0.15, 0.19, 0.14, 0.20, 0.15, 0.21])
    found = meeting(noisy, 0.3, 35.0)
    assert found.outlook == "will meet it"
    assert found.latest is None
    assert found.earliest is not None
    assert found.earliest < found.day
