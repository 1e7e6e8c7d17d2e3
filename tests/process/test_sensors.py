"""Sensor classes by name, against tolerances worked out by hand from the standards."""

import itertools

import pytest

from diagrams.errors import InvalidInput, OutsideData
from service.process.sensors import sensor_class, sensor_classes
from tests.truth import truth


@pytest.mark.parametrize("row", truth("sensor_tolerances"), ids=lambda r: f"{r['sensor_class']} {r['at_c']}")
def test_tolerance(row: dict[str, str]) -> None:
    found = sensor_class(row["sensor_class"]).tolerance_c(float(row["at_c"]))
    assert found == pytest.approx(float(row["tolerance_c"]), abs=1e-12)


@pytest.mark.parametrize(
    "text", ["iec60584 k class1", "IEC-60584 Type K Class 1", "IEC 60584 type K  class 1"]
)
def test_names_are_found_however_written(text: str) -> None:
    assert sensor_class(text).name == "IEC 60584 type K class 1"


def test_every_class_has_one_name_and_no_gap() -> None:
    classes = sensor_classes()
    assert len(classes) == 30
    for sensor in classes.values():
        ends = [(part.from_c, part.to_c) for part in sensor.ranges]
        assert all(a[1] == b[0] for a, b in itertools.pairwise(ends)), sensor.name
        assert sensor.source.text


def test_unknown_and_beyond() -> None:
    with pytest.raises(InvalidInput) as unknown:
        sensor_class("type K")
    assert "IEC 60584 type K class 1" in unknown.value.remedy
    with pytest.raises(OutsideData, match="-40 to 350 °C"):
        sensor_class("IEC 60584 T class 1").tolerance_c(400.0)
