import math

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from diagrams.elements import MOLAR_MASS, symbol
from diagrams.errors import InvalidComposition
from diagrams.units import (
    at_to_wt,
    celsius_to_fahrenheit,
    celsius_to_kelvin,
    kelvin_to_celsius,
    second_wt_to_x,
    wt_to_at,
    x_to_second_wt,
)
from tests.truth import truth

ELEMENTS = sorted(MOLAR_MASS)
compositions = st.dictionaries(st.sampled_from(ELEMENTS), st.floats(0.001, 100.0), min_size=1, max_size=6)
pairs = st.lists(st.sampled_from(ELEMENTS), min_size=2, max_size=2, unique=True)


@given(compositions)
def test_mass_and_atomic_percent_undo_each_other(parts: dict[str, float]) -> None:
    total = math.fsum(parts.values())
    wt = {el: 100.0 * value / total for el, value in parts.items()}
    at = wt_to_at(wt)
    assert math.fsum(at.values()) == pytest.approx(100.0, abs=1e-9)
    assert at_to_wt(at) == pytest.approx(wt, abs=1e-9)


@given(pairs, st.floats(0.0, 100.0))
def test_second_mass_percent_and_mole_fraction_undo_each_other(pair: list[str], second_wt: float) -> None:
    first, second = pair
    x = second_wt_to_x(second_wt, first, second)
    assert 0.0 <= x <= 1.0
    assert x_to_second_wt(x, first, second) == pytest.approx(second_wt, abs=1e-9)


@given(pairs, st.floats(0.0, 100.0))
def test_the_two_ways_to_atomic_percent_agree(pair: list[str], second_wt: float) -> None:
    first, second = pair
    at = wt_to_at({first: 100.0 - second_wt, second: second_wt})
    assert 100.0 * second_wt_to_x(second_wt, first, second) == pytest.approx(at[second], abs=1e-9)


def test_arrays_give_what_scalars_give() -> None:
    second_wt = np.linspace(0.0, 100.0, 11)
    x = second_wt_to_x(second_wt, "Pb", "Sn")
    assert x.tolist() == [second_wt_to_x(float(value), "Pb", "Sn") for value in second_wt]
    assert x_to_second_wt(x, "Pb", "Sn") == pytest.approx(second_wt, abs=1e-9)


def test_handbook_points_given_in_atomic_percent_convert_to_the_printed_mass_percent() -> None:
    rows = [row for row in truth("invariants_handbook") if row["basis"].endswith("at% converted")]
    assert len(rows) == 17
    for row in rows:
        element = symbol(row["element"])
        (other,) = {symbol(part) for part in row["system"].split("-")} - {element}
        at = float(row["basis"].split()[0])
        assert at_to_wt({element: at, other: 100.0 - at})[element] == pytest.approx(
            float(row["wt_percent"]), abs=0.006
        ), row


def test_temperature_scales_meet_at_their_fixed_points() -> None:
    assert celsius_to_kelvin(0.01) == pytest.approx(273.16, abs=1e-12)
    assert kelvin_to_celsius(0.0) == -273.15
    assert celsius_to_fahrenheit(0.0) == 32.0
    assert celsius_to_fahrenheit(100.0) == 212.0
    assert celsius_to_fahrenheit(-40.0) == -40.0


def test_symbols_are_known_or_refused() -> None:
    assert symbol("sn") == "Sn"
    for text in (" Sn", "Sn ", "S n", "", " "):
        with pytest.raises(InvalidComposition):
            symbol(text)
    with pytest.raises(InvalidComposition, match="a space"):
        symbol(" Sn")
    with pytest.raises(InvalidComposition) as refused:
        symbol("Xx", "composition_wt")
    assert refused.value.field == "composition_wt"
    assert "Sn" in refused.value.remedy
