"""The picture of a phase diagram, with the state at one point if a point is asked about."""

from collections.abc import Sequence
from itertools import pairwise
from typing import TYPE_CHECKING

import numpy as np
import shapely

from diagrams.diagram import Diagram, Region
from diagrams.figure_labels import Room
from diagrams.figure_mark import Mark, mark_at
from diagrams.figure_scales import scale_axes
from diagrams.figure_sheet import LEAST_HEIGHT, PLOT_WIDTH, Note, Sheet, origin_lines, plot_height
from diagrams.figure_style import (
    BORDER,
    COMPOUND,
    FIELDS,
    INK,
    INVARIANT,
    MARK,
    PictureFormat,
    both_scales,
    patch,
    shown,
    text_width,
)

if TYPE_CHECKING:
    from matplotlib.axes import Axes

NAME_SIZES = (10.5, 9.0, 7.5)
SMALL = 7.0
LETTER = 1.25  # height of a line of text in text sizes
CLOSE = 8.0  # a temperature this near to its dot needs no pointer


def draw_diagram(
    diagram: Diagram,
    caution: Sequence[str],
    point: tuple[float, float] | None = None,
    form: PictureFormat = "png",
) -> bytes:
    """The picture of a diagram as PNG or SVG; the same input gives the same bytes.

    `caution` stands in a box under the plot, its first line in bold. `point` is wt% of the second element
    and °C; its tie line and amounts are shown. Raises OutsideData for a point beyond the data.
    """
    mark = None if point is None else mark_at(diagram, *point)
    height = LEAST_HEIGHT
    for _ in range(3):  # more notes make the plot higher, which can only make room for more names
        picture = _Picture(diagram, mark, height)
        needed = plot_height(picture.side)
        if needed <= height:
            break
        height = needed
    first, second = diagram.elements
    fitted = any(source.how == "own fit" for source in diagram.sources)
    computed = "computed with parameters fitted by this project" if fitted else "computed from an assessment"
    way = computed if diagram.kind == "parameters" else "drawn through points"
    subtitle = f"phase diagram in equilibrium, {way}, edition {diagram.edition}"
    sheet = Sheet(f"{first}–{second}", subtitle, origin_lines(diagram), caution, height)
    picture.draw(sheet.plot())
    sheet.notes(picture.side)
    return sheet.finished(form)


class _Picture:
    """Lays a diagram out in a plot of a given height, then draws it."""

    def __init__(self, diagram: Diagram, mark: Mark | None, height: float) -> None:
        self.diagram, self.mark, self.height = diagram, mark, height
        (self.west, east), (self.south, north) = diagram.composition_range_wt, diagram.temperature_range_c
        self.per_wt = PLOT_WIDTH / (east - self.west)
        self.per_c = height / (north - self.south)
        self.fields = [shapely.transform(r.polygon, self._scaled) for r in diagram.regions]
        rings = [field.exterior for field in self.fields]
        self.room = Room(PLOT_WIDTH, height, shapely.union_all(rings))
        self.texts: list[tuple[float, float, str, float, str, bool]] = []  # x, y, text, size, colour, upright
        self.pointers: list[tuple[float, float, float, float]] = []
        self.dots: list[tuple[float, float]] = []
        self.key: list[str] = []
        self._keep_mark_free()
        self._compound_names()
        self._invariant_temperatures()
        self._field_names()
        self.side = self._side_notes()

    def _scaled(self, points: np.ndarray) -> np.ndarray:
        return (points - (self.west, self.south)) * (self.per_wt, self.per_c)

    def _at(self, second_wt: float, temperature_c: float) -> tuple[float, float]:
        x = min(max((second_wt - self.west) * self.per_wt, 0.0), PLOT_WIDTH)
        return x, (temperature_c - self.south) * self.per_c

    def _keep_mark_free(self) -> None:
        if self.mark is None:
            return
        self.room.take(*self._at(self.mark.second_wt, self.mark.temperature_c), 14.0, 14.0)
        for a, b in self.mark.spans_wt:
            ends = [self._at(wt, self.mark.temperature_c) for wt in (a, b)]
            self.room.take_thin(shapely.LineString(ends).buffer(4.0))

    def _compound_names(self) -> None:
        for compound in self.diagram.compounds:
            name = shown(compound.name)
            length, high = text_width(name, SMALL + 1) + 2.0, (SMALL + 1) * LETTER
            x, low = self._at(compound.second_wt, compound.from_c)
            top = self._at(compound.second_wt, compound.to_c)[1]
            beside = shapely.box(x - high - 3.0, low, x + high + 3.0, top)
            for field in sorted(self.fields, key=lambda f: -f.area):
                part = shapely.intersection(beside, field)
                if not isinstance(part, shapely.Polygon) or part.is_empty:
                    continue
                if (found := self.room.inside(part, high, length)) is not None:
                    self.texts.append((*found, name, SMALL + 1, COMPOUND, True))
                    break
            else:
                self._with_pointer(x, 0.5 * (low + top), name, SMALL + 1, COMPOUND)

    def _invariant_temperatures(self) -> None:
        spots = []  # points and lines too short for their temperature: named after all lines have been
        lines = []
        for invariant in self.diagram.invariants:
            wts = invariant.compositions_wt.values()
            (x1, y), (x2, _) = (self._at(wt, invariant.temperature_c) for wt in (min(wts), max(wts)))
            text = f"{invariant.temperature_c:.1f} °C"
            if x2 - x1 > 1.0:
                lines.append((x1, x2, y, text))
                continue
            self.dots.append((x1, y))
            self.room.take_thin(shapely.Point(x1, y).buffer(2.0))
            spots.append((x1, y, text))
        for x1, x2, y, text in lines:
            width, high = text_width(text, SMALL) + 2.0, SMALL * LETTER
            found = self.room.along(shapely.LineString([(x1, y), (x2, y)]), width, high)
            if found is None:
                spots.append((0.5 * (x1 + x2), y, text))
            else:
                self.texts.append((*found, text, SMALL, INVARIANT, False))
        for spot in spots:
            self._with_pointer(*spot, SMALL, INVARIANT, over=True)

    def _field_names(self) -> None:
        order = sorted(range(len(self.fields)), key=lambda k: self.fields[k].area)
        narrow = [k for k in order if not self._named_inside(self.diagram.regions[k], self.fields[k])]
        spots = {k: self.room.widest(self.fields[k]) for k in narrow}
        for spot in spots.values():
            self.room.take_thin(shapely.Point(spot).buffer(1.5))
        for k in narrow:
            name = shown(self.diagram.regions[k].name)
            if self._with_pointer(*spots[k], name, NAME_SIZES[-1], INK):
                continue
            number = str(len(self.key) + 1)
            placed = self._with_pointer(*spots[k], number, SMALL, INK)
            self.key.append(name if placed else f"{name} (too narrow to be numbered in the plot)")

    def _named_inside(self, region: Region, field: shapely.Polygon) -> bool:
        name = shown(region.name)
        for upright in (False, True):
            for size in NAME_SIZES[upright:]:
                width, high = text_width(name, size) + 3.0, size * LETTER
                found = self.room.inside(field, *((high, width) if upright else (width, high)))
                if found is not None:
                    self.texts.append((*found, name, size, INK, upright))
                    return True
        return False

    def _with_pointer(
        self, x: float, y: float, text: str, size: float, colour: str, *, over: bool = False
    ) -> bool:
        width, high = text_width(text, size) + 2.0, size * LETTER
        found = self.room.beside(x, y, width, high, over=over)
        if found is None:
            return False
        self.texts.append((*found, text, size, colour, False))
        box = shapely.box(
            found[0] - width / 2, found[1] - high / 2, found[0] + width / 2, found[1] + high / 2
        )
        end_x, end_y = shapely.shortest_line(shapely.Point(x, y), box).coords[1]
        if colour == INK or np.hypot(end_x - x, end_y - y) > CLOSE:
            self.pointers.append((x, y, end_x, end_y))
        return True

    def _side_notes(self) -> list[Note]:
        notes = [] if self.mark is None else [Note(t, k == 0, MARK) for k, t in enumerate(self.mark.lines)]
        kinds = {" ".join(sorted(r.kinds)) for r in self.diagram.regions}
        notes.append(Note("Fields", head=True))
        notes += [Note(words, swatch=colour) for kind, (colour, words) in FIELDS.items() if kind in kinds]
        notes += [Note(f"{k}: {name}") for k, name in enumerate(self.key, 1)]
        if self.diagram.invariants:
            notes.append(Note("On cooling", head=True))
        for invariant in reversed(self.diagram.invariants):
            notes.append(Note(f"{both_scales(invariant.temperature_c)}, {invariant.kind}", colour=INVARIANT))
            parting = invariant.kind == "critical point"
            notes.append(Note("one phase parts into two" if parting else shown(invariant.reaction)))
        return notes

    def draw(self, axes: "Axes") -> None:
        """Draw all of it into the axes."""
        scale_axes(axes, self.diagram)
        for region in self.diagram.regions:
            colour = FIELDS[" ".join(sorted(region.kinds))][0]
            ring = [list(p) for p in region.polygon.exterior.coords]
            axes.add_patch(patch(ring, colour, BORDER, 0.9)).set_zorder(1)
        for compound in self.diagram.compounds:
            span = [compound.from_c, compound.to_c]
            axes.plot([compound.second_wt] * 2, span, color=COMPOUND, linewidth=1.8, zorder=3)
        low, high = self.diagram.composition_range_wt
        for invariant in self.diagram.invariants:
            wts = sorted(min(max(wt, low), high) for wt in invariant.compositions_wt.values())
            level = [invariant.temperature_c] * 2
            for pair in pairwise(wts):
                axes.plot(pair, level, color=INVARIANT, linewidth=1.3, zorder=3)
        for x, y in self.dots:
            axes.plot(
                self.west + x / self.per_wt, self.south + y / self.per_c, "o", color=INVARIANT,
                markersize=3.6, zorder=6, clip_on=False,
            )  # fmt: skip
        if self.mark is not None:
            self.mark.draw(axes, self.diagram)
        for x1, y1, x2, y2 in self.pointers:
            xs = [self.west + x / self.per_wt for x in (x1, x2)]
            ys = [self.south + y / self.per_c for y in (y1, y2)]
            axes.plot(xs, ys, color=INK, linewidth=0.6, zorder=5, clip_on=False)
            axes.plot(xs[0], ys[0], ".", color=INK, markersize=2.5, zorder=5, clip_on=False)
        for x, y, text, size, colour, upright in self.texts:
            axes.text(
                self.west + x / self.per_wt, self.south + y / self.per_c, text, fontsize=size, color=colour,
                rotation=90 if upright else 0, ha="center", va="center_baseline" if not upright else "center",
                zorder=7,
            )  # fmt: skip
