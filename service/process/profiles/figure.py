"""The picture of a judged run: curves, window, melting range and, on the same time axis, liquid fraction."""

from typing import TYPE_CHECKING

import numpy as np

from diagrams.figure_scales import celsius_axis, even
from diagrams.figure_sheet import TITLE_SIZE, WIDTH, Sheet, origin_lines, plot_height
from diagrams.figure_style import (
    CAUTION,
    FAINT,
    FIELDS,
    INK,
    INVARIANT,
    PictureFormat,
    text_width,
)
from service.process.caution import caution_lines
from service.process.profiles.check import Run
from service.process.profiles.figure_notes import (
    FAILS,
    PASSES,
    colour_of,
    passes,
    side_notes,
    style_of,
    verdict_told,
)
from service.process.profiles.trace import Floats, Trace
from service.process.window_terms import label

if TYPE_CHECKING:
    from matplotlib.axes import Axes

COLUMNS = 1000  # of the plot: more samples than this cannot be told apart
LIQUID_HEIGHT, BETWEEN = 92.0, 14.0  # points


def draw_run(run: Run, form: PictureFormat) -> bytes:
    """The picture as PNG or SVG; the same run gives the same bytes."""
    notes = side_notes(run)
    origins = origin_lines(run.filler.melter)
    if run.standard is not None:
        found = run.standard.source
        origins.append(f"Limits of {run.standard.key}: {found.text}, {found.how}; {run.standard.edition}.")
    caution = caution_lines(_elements(run), run.filler.process)
    height = max(plot_height(notes), 300.0 + LIQUID_HEIGHT + BETWEEN)
    title, subtitle = label(run.filler), f"recorded run, {verdict_told(run)}"
    if text_width(title, TITLE_SIZE, True) + text_width(subtitle, 8.5) > WIDTH - 60.0:
        subtitle = "recorded run"  # the side notes say the rest
    sheet = Sheet(title, subtitle, origins, caution, height)
    upper = LIQUID_HEIGHT + BETWEEN
    _draw_curves(sheet.plot(upper, height - upper), run)
    _draw_liquid(sheet.plot(0.0, LIQUID_HEIGHT), run)
    sheet.notes(notes)
    return sheet.finished(form)


def thinned(trace: Trace, columns: int = COLUMNS) -> tuple[Floats, Floats]:
    """Times (s) and temperatures (°C) that draw the same line.

    Of each column of the plot the first, the least, the greatest and the last sample.
    """
    if len(trace.time_s) <= 4 * columns:
        return trace.time_s, trace.temperature_c
    place = (trace.time_s - trace.start_s) / (trace.end_s - trace.start_s) * columns
    starts = np.flatnonzero(np.diff(np.floor(place), prepend=-1.0))
    ends = np.append(starts[1:], len(place))
    kept = set(starts.tolist()) | set((ends - 1).tolist())
    for start, end in zip(starts.tolist(), ends.tolist(), strict=True):
        part = trace.temperature_c[start:end]
        kept |= {start + int(part.argmin()), start + int(part.argmax())}
    chosen = np.array(sorted(kept))
    return trace.time_s[chosen], trace.temperature_c[chosen]


def _elements(run: Run) -> frozenset[str]:
    return run.filler.elements.union(*(joint.subject.elements for joint in run.demands.earlier_joints))


def _draw_curves(axes: "Axes", run: Run) -> None:
    traces = [judged.sensor.trace for judged in run.judged.sensors]
    start_s, end_s = min(t.start_s for t in traces), max(t.end_s for t in traces)
    levels, bounds = run.levels, run.bounds
    temperatures = [c for t in traces for c in (float(t.temperature_c.min()), float(t.temperature_c.max()))]
    own = [judged.sensor.limit_c for judged in run.judged.sensors]
    known = (levels.solidus_c, levels.liquidus_c, bounds.low, bounds.high, *own)
    marks = [c for c in known if c is not None]
    low_c, high_c = min(temperatures), max(*temperatures, *marks)
    room_c = 0.06 * (high_c - low_c)
    axes.set_xlim(start_s, end_s)
    celsius_axis(axes, low_c - room_c, high_c + 1.4 * room_c)
    axes.set_xticks(even(start_s, end_s, 11))
    axes.tick_params(labelbottom=False)
    _draw_melting(axes, levels.solidus_c, levels.liquidus_c)
    _draw_window(axes, bounds.low, bounds.high)
    for k, judged in enumerate(run.judged.sensors):
        times, readings = thinned(judged.sensor.trace)
        axes.plot(times, readings, color=colour_of(k), linestyle=style_of(judged, k), linewidth=1.4, zorder=5)
        if judged.sensor.limit_c is not None:
            axes.axhline(judged.sensor.limit_c, color=colour_of(k), linewidth=0.9, linestyle=":", zorder=3)
        axes.plot(
            judged.peak.time_s,
            judged.peak.value,
            "o" if passes(judged) else "X",
            color=PASSES if passes(judged) else FAILS,
            markeredgecolor="white",
            markersize=6.5,
            zorder=7,
        )


def _draw_melting(axes: "Axes", solidus_c: float, liquidus_c: float) -> None:
    """Solidus and liquidus are named on the left, where a run is still cold."""
    axes.axhspan(liquidus_c, axes.get_ylim()[1], color=FIELDS["liquid"][0], alpha=0.35, linewidth=0, zorder=0)
    axes.axhspan(solidus_c, liquidus_c, color=FIELDS["liquid"][0], alpha=0.7, linewidth=0, zorder=0)
    if liquidus_c - solidus_c < 0.02 * (axes.get_ylim()[1] - axes.get_ylim()[0]):
        named = [(liquidus_c, f"melts at {solidus_c:.1f} to {liquidus_c:.1f} °C", "bottom")]
    else:
        named = [
            (solidus_c, f"solidus {solidus_c:.1f} °C", "top"),
            (liquidus_c, f"liquidus {liquidus_c:.1f} °C", "bottom"),
        ]
    for level_c in (solidus_c, liquidus_c):
        axes.axhline(level_c, color=CAUTION, linewidth=0.9, zorder=2)
    for level_c, text, side in named:
        _name(axes, 0.012, level_c, text, CAUTION, side)


def _draw_window(axes: "Axes", low_c: float | None, high_c: float | None) -> None:
    """The window of the peak is named on the right, where a run has cooled down."""
    south, north = axes.get_ylim()
    if low_c is None or high_c is None or low_c <= high_c:
        south_c, north_c = south if low_c is None else low_c, north if high_c is None else high_c
        axes.axhspan(south_c, north_c, color=INVARIANT, alpha=0.16, linewidth=0, zorder=1)
    for level_c, text, side in ((low_c, "lowest peak", "top"), (high_c, "highest peak", "bottom")):
        if level_c is not None:
            axes.axhline(level_c, color=INVARIANT, linewidth=1.1, linestyle=(0, (5, 2)), zorder=3)
            _name(axes, 0.988, level_c, f"{text} {level_c:.1f} °C", INVARIANT, side)


def _name(axes: "Axes", share: float, level_c: float, text: str, colour: str, side: str) -> None:
    left, right = axes.get_xlim()
    axes.annotate(
        text,
        (left + share * (right - left), level_c),
        xytext=(0, 2 if side == "bottom" else -2),
        textcoords="offset points",
        ha="left" if share < 0.5 else "right",
        va="bottom" if side == "bottom" else "top",
        fontsize=8.0,
        color=colour,
        zorder=8,
        bbox={"facecolor": "white", "alpha": 0.75, "edgecolor": "none", "pad": 0.8},
    )


def _draw_liquid(axes: "Axes", run: Run) -> None:
    traces = [judged.sensor.trace for judged in run.judged.sensors]
    start_s, end_s = min(t.start_s for t in traces), max(t.end_s for t in traces)
    axes.set_xlim(start_s, end_s)
    axes.set_ylim(0.0, 106.0)
    axes.set_xticks(even(start_s, end_s, 11))
    axes.set_yticks([0.0, 50.0, 100.0])
    axes.set_xlabel("time, s", fontsize=9)
    axes.set_ylabel("liquid, % of mass", fontsize=9)
    axes.tick_params(direction="out", labelsize=8, colors=INK, length=3)
    still = run.judged.hold_still
    if still.from_s is not None:
        until_s = end_s if still.to_s is None else still.to_s
        axes.axvspan(still.from_s, until_s, color=CAUTION, alpha=0.10, linewidth=0, zorder=1)
    for k, judged in enumerate(run.judged.sensors):
        if judged.liquid:
            times, fractions = np.array(judged.liquid).T
            axes.plot(
                times,
                100.0 * fractions,
                color=colour_of(k),
                linestyle=style_of(judged, k),
                linewidth=1.4,
                zorder=5,
            )
    if run.filler.melter.curve is None:
        axes.annotate(
            "no data tell the liquid fraction",
            (0.5, 0.5),
            xycoords="axes fraction",
            ha="center",
            va="center",
            fontsize=8.5,
            color=FAINT,
        )
