"""The picture of how one alloy melts: liquid share of the mass against temperature."""

from collections.abc import Sequence
from dataclasses import dataclass
from itertools import pairwise
from typing import TYPE_CHECKING, Protocol

import numpy as np

from diagrams.figure_scales import even
from diagrams.figure_sheet import Note, Origin, Sheet, origin_lines, plot_height
from diagrams.figure_style import (
    BORDER,
    FAINT,
    FIELDS,
    INK,
    INVARIANT,
    MARK,
    PictureFormat,
    both_scales,
    patch,
)
from diagrams.questions.melter import Curve
from diagrams.units import celsius_to_fahrenheit

if TYPE_CHECKING:
    from matplotlib.axes import Axes

STEPS_A_PIECE = 40
SHARES = (0.25, 0.5, 0.75, 0.9, 0.95)
LIQUID, PARTLY = FIELDS["liquid"][0], FIELDS["liquid solid"][0]


class Level(Protocol):
    """A temperature at the nominal composition and its extremes over the tolerance, °C."""

    @property
    def nominal(self) -> float:
        """At the nominal composition."""

    @property
    def safe_low(self) -> float:
        """Lowest."""

    @property
    def safe_high(self) -> float:
        """Highest."""


@dataclass(frozen=True)
class Melting:
    """What is drawn: the alloy's name, its curve, and solidus and liquidus over its tolerance.

    `target` is a liquid fraction with the temperatures from which on it is reached.
    """

    name: str
    origin: Origin
    curve: Curve
    solidus: Level
    liquidus: Level
    target: tuple[float, Level] | None = None


def draw_melting(melting: Melting, caution: Sequence[str], form: PictureFormat = "png") -> bytes:
    """The picture as PNG or SVG; the same input gives the same bytes.

    `caution` stands in a box under the plot, its first line in bold.
    """
    side = _side_notes(melting)
    origin = melting.origin
    what = "diagram" if len(origin.elements) <= 2 else "system"
    subtitle = (
        f"melting in equilibrium, from the {what} {'–'.join(origin.elements)}, edition {origin.edition}"
    )
    sheet = Sheet(melting.name, subtitle, origin_lines(origin), caution, plot_height(side))
    axes = sheet.plot()
    low_c, high_c = _range_c(melting)
    _scale(axes, low_c, high_c)
    _draw_curve(axes, melting.curve, low_c, high_c)
    _draw_level(axes, melting.solidus, "solidus", INVARIANT, left=True)
    _draw_level(axes, melting.liquidus, "liquidus", INVARIANT, left=False)
    if melting.target is not None:
        _draw_target(axes, *melting.target, low_c)
    sheet.notes(side)
    return sheet.finished(form)


def _range_c(melting: Melting) -> tuple[float, float]:
    """The melting range with a margin, inside the data."""
    low, high = melting.solidus.safe_low, melting.liquidus.safe_high
    margin = max(6.0, 0.2 * (high - low))
    points = melting.curve.points
    return max(low - margin, points[0][0]), min(high + margin, points[-1][0])


def _scale(axes: "Axes", low_c: float, high_c: float) -> None:
    axes.set_xlim(low_c, high_c)
    axes.set_ylim(0.0, 104.0)
    axes.set_xticks(even(low_c, high_c, 11))
    axes.set_yticks(even(0.0, 100.0, 10))
    axes.set_xlabel("temperature, °C", fontsize=9)
    axes.set_ylabel("liquid, % of the mass", fontsize=9)
    axes.tick_params(direction="out", labelsize=8, colors=INK, length=3)
    top = axes.twiny()
    top.set_xlim(low_c, high_c)
    fahrenheit = even(celsius_to_fahrenheit(low_c), celsius_to_fahrenheit(high_c), 11)
    top.set_xticks([(f - 32.0) / 1.8 for f in fahrenheit], [f"{f:g}" for f in fahrenheit])
    top.set_xlabel("temperature, °F", fontsize=9, color=FAINT, labelpad=3)
    top.tick_params(direction="out", labelsize=8, colors=FAINT, length=3)


def _draw_curve(axes: "Axes", curve: Curve, low_c: float, high_c: float) -> None:
    line: list[tuple[float, float]] = []
    for (start_c, first), (end_c, last) in pairwise(curve.points):
        if end_c < low_c or start_c > high_c:
            continue
        if start_c >= low_c:
            line.append((start_c, 100.0 * first))
        inner = np.linspace(max(start_c, low_c), min(end_c, high_c), STEPS_A_PIECE).tolist()
        line += [(t, 100.0 * curve.liquid_fraction(t)) for t in inner if start_c < t < end_c]
        if end_c <= high_c:
            line.append((end_c, 100.0 * last))
    under = [list(point) for point in [(low_c, 0.0), *line, (high_c, 0.0)]]
    axes.set_facecolor(PARTLY)
    axes.add_patch(patch(under, LIQUID)).set_zorder(1)
    axes.plot(*zip(*line, strict=True), color=BORDER, linewidth=1.8, zorder=4)


def _draw_level(axes: "Axes", level: Level, name: str, colour: str, *, left: bool) -> None:
    """An upright line at a temperature, with the band its tolerance spans."""
    if level.safe_low < level.safe_high:
        axes.axvspan(level.safe_low, level.safe_high, color=colour, alpha=0.18, linewidth=0, zorder=2)
    axes.axvline(level.nominal, color=colour, linewidth=1.2, zorder=3)
    axes.annotate(
        f"{name} {level.nominal:.1f} °C",
        (level.nominal, 52.0 if left else 48.0),
        xytext=(-4 if left else 4, 0),
        textcoords="offset points",
        rotation=90,
        ha="right" if left else "left",
        va="center",
        fontsize=8.5,
        color=colour,
        zorder=6,
    )


def _draw_target(axes: "Axes", fraction: float, reached: Level, low_c: float) -> None:
    share = 100.0 * fraction
    axes.plot([low_c, reached.nominal], [share, share], color=MARK, linewidth=1.0, linestyle="--", zorder=5)
    axes.plot([reached.nominal] * 2, [0.0, share], color=MARK, linewidth=1.0, linestyle="--", zorder=5)
    axes.plot(
        reached.nominal,
        share,
        "D",
        color=MARK,
        markeredgecolor="white",
        markersize=7.0,
        zorder=7,
        clip_on=False,
    )


def _side_notes(melting: Melting) -> list[Note]:
    notes = [Note("Melting range", head=True)]
    for name, level in (("solidus", melting.solidus), ("liquidus", melting.liquidus)):
        notes += _level_notes(name, level, INVARIANT)
    if melting.target is not None:
        fraction, reached = melting.target
        notes.append(Note("Target", head=True, colour=MARK))
        notes += _level_notes(f"{100.0 * fraction:g} % liquid from", reached, MARK)
    jumps = [
        (a[0], a[1], b[1])
        for a, b in zip(melting.curve.points, melting.curve.points[1:], strict=False)
        if a[0] == b[0]
    ]
    if jumps:
        notes.append(Note("At one temperature", head=True))
    notes += [
        Note(f"{both_scales(t)}: from {100.0 * a:.1f} to {100.0 * b:.1f} % liquid") for t, a, b in jumps
    ]
    notes.append(Note("This much is liquid", head=True))
    notes += [Note(f"{100.0 * s:g} % from {both_scales(melting.curve.stays_above(s))}") for s in SHARES]
    return notes


def _level_notes(name: str, level: Level, colour: str) -> list[Note]:
    notes = [Note(f"{name} {both_scales(level.nominal)}", colour=colour)]
    if level.safe_low < level.safe_high:
        notes.append(Note(f"over the tolerance {level.safe_low:.1f} to {level.safe_high:.1f} °C"))
    return notes
