"""The point asked about: its tie line, the compositions at both ends, and the amounts in words."""

from dataclasses import dataclass
from typing import TYPE_CHECKING

from diagrams.diagram import Diagram
from diagrams.figure_style import MARK, both_scales, percent_of_mass, shown
from diagrams.questions.lever import Equilibrium, equilibrium

if TYPE_CHECKING:
    from matplotlib.axes import Axes


@dataclass(frozen=True)
class Mark:
    """A point, the spans of its tie lines (wt%; two on an invariant line), and the side notes about it."""

    second_wt: float
    temperature_c: float
    spans_wt: tuple[tuple[float, float], ...]
    lines: tuple[str, ...]

    def draw(self, axes: "Axes", diagram: Diagram) -> None:
        """Draw tie line, its ends and the point; ends beyond the frame are cut there."""
        low, high = diagram.composition_range_wt
        for span in self.spans_wt:
            inside = [min(max(wt, low), high) for wt in span]
            axes.plot(inside, [self.temperature_c] * 2, color=MARK, linewidth=1.8, zorder=8, clip_on=False)
            for wt in span:
                if low <= wt <= high:
                    axes.plot(
                        wt, self.temperature_c, "o", color="white", markeredgecolor=MARK,
                        markeredgewidth=1.4, markersize=5.0, zorder=9, clip_on=False,
                    )  # fmt: skip
        axes.plot(
            self.second_wt, self.temperature_c, "D", color=MARK, markeredgecolor="white",
            markeredgewidth=0.8, markersize=7.0, zorder=10, clip_on=False,
        )  # fmt: skip


def mark_at(diagram: Diagram, second_wt: float, temperature_c: float) -> Mark:
    """The mark of a point; raises OutsideData beyond the data."""
    state = equilibrium(diagram, second_wt, temperature_c)
    second = diagram.elements[1]
    states = [state] if state.below is None else [state, state.below]
    lines = [f"{second_wt:g} wt% {second} at {both_scales(temperature_c)}"]
    for k, each in enumerate(states):
        when = "" if len(states) == 1 else ("Just above: ", "Just below: ")[k]
        lines += _told(each, when, second, diagram.composition_range_wt)
    spans = tuple(
        (each.phases[0].composition_wt[second], each.phases[1].composition_wt[second])
        for each in states
        if len(each.phases) == 2
    )
    return Mark(second_wt, temperature_c, spans, tuple(lines))


def _told(state: Equilibrium, when: str, second: str, frame: tuple[float, float]) -> list[str]:
    told = [f"{when}{shown(state.field)}", percent_of_mass(state.liquid_mass_fraction)]
    if len(state.phases) == 1:
        return told
    low, high = frame
    for phase in state.phases:
        wt = phase.composition_wt[second]
        where = "" if low <= wt <= high else " (beyond the picture)"
        share = f"{100.0 * phase.mass_fraction:.1f} % of the mass"
        told.append(f"{shown(phase.name)}: {share}, {wt:.2f} wt% {second}{where}")
    return told
