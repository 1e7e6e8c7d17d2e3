"""The scales round a diagram: mass percent below, atomic percent above, °C on the left, °F on the right."""

from typing import TYPE_CHECKING

import numpy as np

from diagrams.diagram import Diagram
from diagrams.figure_style import FAINT, INK
from diagrams.units import celsius_to_fahrenheit, second_wt_to_x, x_to_second_wt

if TYPE_CHECKING:
    from matplotlib.axes import Axes

STEPS = (0.5, 1.0, 2.0, 5.0, 10.0, 20.0, 25.0, 50.0, 100.0, 200.0, 250.0, 500.0)
CLOSEST = 0.032  # share of the axis that two numbers keep between them


def scale_axes(axes: "Axes", diagram: Diagram) -> None:
    """Set range, ticks and labels of the plot."""
    first, second = diagram.elements
    west, east = diagram.composition_range_wt
    axes.set_xlim(west, east)
    axes.set_xticks(even(west, east, 11))
    axes.set_xlabel(f"wt% {second}   (the rest is {first})", fontsize=9)
    celsius_axis(axes, *diagram.temperature_range_c)

    top = axes.twiny()
    top.set_xlim(west, east)
    low, high = (100.0 * second_wt_to_x(wt, first, second) for wt in (west, east))
    at = even(low, high, 11)
    ticks = [(x_to_second_wt(v / 100.0, first, second), f"{v:g}") for v in at]
    ticks = _apart(ticks, CLOSEST * (east - west))
    top.set_xticks([wt for wt, _ in ticks], [text for _, text in ticks])
    top.set_xlabel(f"at% {second}", fontsize=9, color=FAINT, labelpad=3)
    top.tick_params(direction="out", labelsize=8, colors=FAINT, length=3)


def _apart(ticks: list[tuple[float, str]], least: float) -> list[tuple[float, str]]:
    """The ticks without those that stand too close to the one kept before, or to the last one."""
    kept: list[tuple[float, str]] = []
    for k, tick in enumerate(ticks):
        after = ticks[-1][0] - tick[0]
        if k in (0, len(ticks) - 1) or (tick[0] - kept[-1][0] >= least and after >= least):
            kept.append(tick)
    return kept


def celsius_axis(axes: "Axes", south: float, north: float) -> None:
    """Set the temperature scales: °C on the left, °F on the right."""
    axes.set_ylim(south, north)
    axes.set_yticks(even(south, north, 12))
    axes.set_ylabel("temperature, °C", fontsize=9)
    axes.tick_params(direction="out", labelsize=8, colors=INK, length=3)
    right = axes.twinx()
    right.set_ylim(south, north)
    fahrenheit = even(celsius_to_fahrenheit(south), celsius_to_fahrenheit(north), 12)
    right.set_yticks([(f - 32.0) / 1.8 for f in fahrenheit], [f"{f:g}" for f in fahrenheit])
    right.set_ylabel("temperature, °F", fontsize=9, color=FAINT, labelpad=3)
    right.tick_params(direction="out", labelsize=8, colors=FAINT, length=3)


def even(low: float, high: float, most: int) -> list[float]:
    """Round values from low to high in even steps, no more than `most` of them."""
    step = next((s for s in STEPS if (high - low) / s <= most), STEPS[-1])
    first, last = np.ceil(low / step - 1e-9), np.floor(high / step + 1e-9)
    return [float(k * step) + 0.0 for k in np.arange(first, last + 1)]  # + 0.0: no “−0”
