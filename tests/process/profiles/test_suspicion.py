"""Dead sensors and mistaken units are noticed; sound records are left alone."""

import numpy as np
import pytest

from diagrams.errors import InvalidInput
from service.process.profiles.suspicion import check_unit, dead_sensors
from service.process.profiles.trace import Trace

TIMES = np.arange(0.0, 300.0)


def run(peak_c: float = 235.0, start_c: float = 25.0) -> np.ndarray:
    return start_c + (peak_c - start_c) * np.sin(np.pi * TIMES / 300.0) ** 2


def trace(readings: np.ndarray, name: str = "pad") -> Trace:
    return Trace(name, TIMES, readings)


@pytest.mark.parametrize(
    ("recorded", "unit"), [(run() + 273.15, "kelvin"), (run() * 1.8 + 32.0, "degrees Fahrenheit")]
)
def test_other_units_are_named(recorded: np.ndarray, unit: str) -> None:
    with pytest.raises(InvalidInput, match="it begins at 25 °C and peaks at 235 °C") as refused:
        check_unit([trace(recorded)], wanted_c=230.0)
    assert unit in refused.value.remedy
    assert "readings_are_celsius" in refused.value.remedy


@pytest.mark.parametrize(
    "recorded",
    [
        run(),
        run(peak_c=150.0),  # far too cold: that is what the verdict is for
        run(peak_c=330.0),  # far too hot, but no unit explains it
        run(peak_c=500.0, start_c=400.0),  # begins hot in any unit
    ],
)
def test_celsius_is_left_alone(recorded: np.ndarray) -> None:
    check_unit([trace(recorded)], wanted_c=230.0)


def test_dead_from_the_start() -> None:
    dead = trace(np.full(300, 24.8), "left")
    (found,) = dead_sensors([trace(run()), dead], wanted_c=230.0)
    assert (found.sensor, found.from_s, found.to_s) == ("left", 0.0, 299.0)
    assert [d.sensor for d in dead_sensors([dead], wanted_c=230.0)] == ["left"]  # alone, and nowhere near


def test_stuck_on_the_way() -> None:
    readings = run()
    readings[100:200] = readings[100]
    (found,) = dead_sensors([trace(run()), trace(readings, "right")], wanted_c=230.0)
    assert (found.sensor, found.from_s, found.to_s) == ("right", 100.0, 199.0)


def test_an_oven_that_holds_is_not_dead() -> None:
    """A steady bath or a furnace at temperature, alone or all sensors alike."""
    steady = [trace(np.full(300, 231.0) + k, f"zone {k}") for k in range(3)]
    assert dead_sensors(steady, wanted_c=230.0) == ()
    plateau = np.clip(run(peak_c=300.0), 25.0, 231.0)  # reads the same while it holds, as the others do
    assert dead_sensors([trace(plateau), trace(plateau - 3.0, "b")], wanted_c=230.0) == ()
