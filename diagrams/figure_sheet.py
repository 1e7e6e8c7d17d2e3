"""The sheet every picture stands on: title, plot, side notes, sources and cautions. Lengths are points."""

from collections.abc import Iterable, Sequence
from dataclasses import dataclass
from itertools import groupby
from typing import TYPE_CHECKING, Protocol

import numpy as np

from diagrams.figure_style import (
    CAUTION,
    CAUTION_PAPER,
    FAINT,
    INK,
    PictureFormat,
    new_figure,
    patch,
    text_width,
    to_bytes,
    wrapped,
)
from diagrams.sources import Source

if TYPE_CHECKING:
    from matplotlib.axes import Axes
    from matplotlib.figure import Figure

WIDTH = 860.0
LEFT, PLOT_WIDTH, SIDE_LEFT = 58.0, 545.0, 664.0
SIDE_WIDTH = WIDTH - SIDE_LEFT - 14.0
TOP, BELOW_PLOT, MARGIN = 74.0, 42.0, 14.0
LEAST_HEIGHT = 400.0
TITLE_SIZE, SIDE_SIZE, FOOT_SIZE = 15.0, 8.0, 7.0
LINE = 1.38  # from line to line, in text sizes


@dataclass(frozen=True)
class Note:
    """A line of the side notes: head lines stand out, a colour marks what belongs to a mark in the plot."""

    text: str
    head: bool = False
    colour: str = INK
    swatch: str = ""

    @property
    def lines(self) -> list[str]:
        """The text as it fits beside the plot."""
        room = SIDE_WIDTH - (16.0 if self.swatch else 0.0)
        return wrapped(self.text, SIDE_SIZE, room, self.head)

    @property
    def height(self) -> float:
        """Room it takes, with the gap over a head line."""
        return SIDE_SIZE * LINE * len(self.lines) + (7.0 if self.head else 1.5)


def plot_height(notes: Iterable[Note]) -> float:
    """Height of a plot beside which these notes fit."""
    return max(LEAST_HEIGHT, sum(note.height for note in notes) - BELOW_PLOT - 20.0)


class Sheet:
    """A sheet with a plot of the given height; the foot takes the room its text needs."""

    def __init__(
        self, title: str, subtitle: str, sources: Sequence[str], caution: Sequence[str], height: float
    ) -> None:
        room = WIDTH - 2 * MARGIN
        self._origin = [line for text in sources for line in wrapped(text, FOOT_SIZE, room)]
        self._caution = [line for text in caution for line in wrapped(text, FOOT_SIZE, room - 12.0)]
        step = FOOT_SIZE * LINE
        self._caution_top = 14.0 + step * len(self._caution) + 5.0
        self._origin_top = self._caution_top + 6.0 + step * len(self._origin)
        self.title = f"{title}, {subtitle}"
        self.plot_height = height
        self.bottom = self._origin_top + BELOW_PLOT
        self.height = self.bottom + height + TOP
        self.figure: Figure = new_figure(WIDTH, self.height)
        self._text(MARGIN + 6.0, self.height - 27.0, title, TITLE_SIZE, bold=True)
        beside = MARGIN + 20.0 + text_width(title, TITLE_SIZE, True)
        self._text(beside, self.height - 27.0, subtitle, 8.5, FAINT)
        self._foot()

    def plot(self, above: float = 0.0, height: float | None = None) -> "Axes":
        """The axes of the plot; or of a part of it that begins so far above its foot."""
        return self.figure.add_axes(
            (
                LEFT / WIDTH,
                (self.bottom + above) / self.height,
                PLOT_WIDTH / WIDTH,
                (self.plot_height if height is None else height) / self.height,
            )
        )

    def notes(self, notes: Iterable[Note]) -> None:
        """Write the side notes, from the top down."""
        top = self.height - 44.0
        for note in notes:
            top -= 7.0 if note.head else 1.5
            indent = 0.0
            if note.swatch:
                indent = 16.0
                self._box(SIDE_LEFT, top - SIDE_SIZE * 1.15, 11.0, SIDE_SIZE, note.swatch, INK)
            for line in note.lines:
                top -= SIDE_SIZE * LINE
                self._text(SIDE_LEFT + indent, top + 2.0, line, SIDE_SIZE, note.colour, bold=note.head)

    def finished(self, form: PictureFormat) -> bytes:
        """The picture."""
        return to_bytes(self.figure, form, self.title)

    def _foot(self) -> None:
        step = FOOT_SIZE * LINE
        for k, line in enumerate(self._origin):
            self._text(MARGIN, self._origin_top - step * (k + 1), line, FOOT_SIZE, FAINT)
        self._box(MARGIN, 8.0, WIDTH - 2 * MARGIN, self._caution_top - 8.0, CAUTION_PAPER, CAUTION)
        for k, line in enumerate(self._caution):
            y = self._caution_top - 2.0 - step * (k + 1)
            self._text(MARGIN + 6.0, y, line, FOOT_SIZE, CAUTION, bold=k == 0)

    def _text(
        self, x: float, y: float, text: str, size: float, colour: str = INK, *, bold: bool = False
    ) -> None:
        weight = "bold" if bold else "normal"
        self.figure.text(
            x / WIDTH, y / self.height, text, fontsize=size, color=colour, fontweight=weight, va="baseline"
        )

    def _box(self, x: float, y: float, width: float, height: float, paper: str, edge: str) -> None:
        corners = [(x, y), (x + width, y), (x + width, y + height), (x, y + height)]
        shares = np.array(corners) / (WIDTH, self.height)
        box = self.figure.add_artist(patch(shares.tolist(), paper, edge))
        box.set_transform(self.figure.transFigure)


class Origin(Protocol):
    """Data a picture is drawn from: a diagram, a section or a system."""

    @property
    def elements(self) -> tuple[str, ...]:
        """Symbols, sorted."""

    @property
    def edition(self) -> str:
        """Edition of the data."""

    @property
    def sources(self) -> tuple[Source, ...]:
        """Where they come from."""

    @property
    def notes(self) -> tuple[str, ...]:
        """Known weak spots."""


def origin_lines(diagram: Origin) -> list[str]:
    """Sources, each with how its value came here, and the known weak spots, as the foot prints them."""
    told = []
    for (how, confidence), sources in groupby(diagram.sources, key=lambda s: (s.how, s.confidence)):
        works = "; ".join(source.text.rstrip(".") for source in sources)
        told.append(f"Source ({how}, confidence {confidence}): {works}.")
    told += [f"Mind: {note}" for note in diagram.notes]
    return told
