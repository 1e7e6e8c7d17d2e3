"""Conversions between mass and mole fractions and between temperature scales."""

from collections.abc import Mapping
from typing import overload

import numpy as np
from numpy.typing import NDArray

from diagrams.elements import MOLAR_MASS

ZERO_CELSIUS_K = 273.15  # SI definition of the Celsius scale (BIPM SI brochure, 9th edition 2019)


def celsius_to_kelvin(temperature_c: float) -> float:
    """Kelvin from degrees Celsius."""
    return temperature_c + ZERO_CELSIUS_K


def kelvin_to_celsius(temperature_k: float) -> float:
    """Degrees Celsius from kelvin."""
    return temperature_k - ZERO_CELSIUS_K


def celsius_to_fahrenheit(temperature_c: float) -> float:
    """Degrees Fahrenheit from degrees Celsius."""
    return temperature_c * 1.8 + 32.0


def fahrenheit_to_celsius(temperature_f: float) -> float:
    """Degrees Celsius from degrees Fahrenheit."""
    return (temperature_f - 32.0) / 1.8


def wt_to_at(composition: Mapping[str, float]) -> dict[str, float]:
    """Atomic percent from mass percent; keys are element symbols, the sum becomes 100."""
    moles = {el: value / MOLAR_MASS[el] for el, value in composition.items()}
    total = sum(moles.values())
    return {el: 100.0 * n / total for el, n in moles.items()}


def at_to_wt(composition: Mapping[str, float]) -> dict[str, float]:
    """Mass percent from atomic percent; keys are element symbols, the sum becomes 100."""
    masses = {el: value * MOLAR_MASS[el] for el, value in composition.items()}
    total = sum(masses.values())
    return {el: 100.0 * m / total for el, m in masses.items()}


@overload
def second_wt_to_x(second_wt: float, first: str, second: str) -> float: ...
@overload
def second_wt_to_x(second_wt: NDArray[np.float64], first: str, second: str) -> NDArray[np.float64]: ...
def second_wt_to_x(
    second_wt: float | NDArray[np.float64], first: str, second: str
) -> float | NDArray[np.float64]:
    """Mole fraction of the second element (0..1) from its mass percent (0..100)."""
    n2 = second_wt / MOLAR_MASS[second]
    n1 = (100.0 - second_wt) / MOLAR_MASS[first]
    return n2 / (n1 + n2)


@overload
def x_to_second_wt(x: float, first: str, second: str) -> float: ...
@overload
def x_to_second_wt(x: NDArray[np.float64], first: str, second: str) -> NDArray[np.float64]: ...
def x_to_second_wt(x: float | NDArray[np.float64], first: str, second: str) -> float | NDArray[np.float64]:
    """Mass percent of the second element (0..100) from its mole fraction (0..1)."""
    m2 = x * MOLAR_MASS[second]
    m1 = (1.0 - x) * MOLAR_MASS[first]
    return 100.0 * m2 / (m1 + m2)
