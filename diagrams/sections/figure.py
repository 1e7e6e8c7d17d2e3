"""The picture of a section: fields with names, levels, and lines of equal liquid share."""

from collections.abc import Mapping, Sequence
from typing import TYPE_CHECKING

import numpy as np
import shapely

from diagrams.diagram import Region
from diagrams.figure_labels import Room
from diagrams.figure_scales import celsius_axis, even
from diagrams.figure_sheet import LEAST_HEIGHT, PLOT_WIDTH, Note, Sheet, origin_lines, plot_height
from diagrams.figure_style import (
    BORDER,
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
from diagrams.sections.section import Section

if TYPE_CHECKING:
    from matplotlib.axes import Axes

NAME_SIZES = (10.0, 8.5, 7.0)
SMALL = 7.0
LETTER = 1.25  # height of a line of text in text sizes
UNDER, OVER = 0.5, 0.25  # of the melting ranges' span: how much is shown under and over it
LEAST_MARGIN_C = 15.0
SPOTS = 40  # places tried along a contour
TINY = 4.0  # square points: fields smaller than this are not named
WORDS = {
    "liquid": "liquid",
    "liquid liquid": "two liquids",
    "liquid solid": "liquid and one or more solids",
    "solid": "one solid",
    "solid solid": "several solids",
}


def draw_section(section: Section, caution: Sequence[str], form: PictureFormat = "png") -> bytes:
    """The picture of a section as PNG or SVG; the same input gives the same bytes.

    It shows the temperatures at which something melts, with some room under and over them; the title says
    how far the section reaches. `caution` stands in a box under the plot, its first line in bold.
    """
    height = LEAST_HEIGHT
    for _ in range(3):
        picture = _Picture(section, height)
        needed = plot_height(picture.side)
        if needed <= height:
            break
        height = needed
    low, high = section.temperature_range_c
    subtitle = f"section computed from {low:g} to {high:g} °C, edition {section.edition}"
    title = f"{section.from_name} – {section.to_name}"
    sheet = Sheet(title, subtitle, origin_lines(section), caution, height)
    picture.draw(sheet.plot())
    sheet.notes(picture.side)
    return sheet.finished(form)


class _Picture:
    """Lays a section out in a plot of a given height, then draws it."""

    def __init__(self, section: Section, height: float) -> None:
        self.section = section
        self.east = section.to_share_max
        self.south, self.north = _window(section)
        self.per_share = PLOT_WIDTH / self.east
        self.per_c = height / (self.north - self.south)
        frame = shapely.box(0.0, 0.0, PLOT_WIDTH, height)
        self.fields = [
            shapely.intersection(shapely.transform(r.polygon, self._scaled), frame) for r in section.regions
        ]
        self.contours: list[tuple[float, shapely.Geometry]] = [
            (
                c.liquid_mass_fraction,
                shapely.intersection(shapely.LineString(self._scaled(np.array(line))), frame),
            )
            for c in section.contours
            for line in c.lines
        ]
        rings = [shapely.boundary(field) for field in self.fields if not field.is_empty]
        self.borders = shapely.union_all(rings)
        self.room = Room(PLOT_WIDTH, height, self.borders)
        self.texts: list[tuple[float, float, str, float, str, bool]] = []  # x, y, text, size, colour, upright
        self.pointers: list[tuple[float, float, float, float]] = []
        self.key: list[str] = []
        self._contour_names()
        self._field_names()
        self.side = self._side_notes()

    def _scaled(self, points: np.ndarray) -> np.ndarray:
        return (points - (0.0, self.south)) * (self.per_share, self.per_c)

    def _contour_names(self) -> None:
        """Each on its line, where it stands clear of borders; one after the other starts further right."""
        for k, (fraction, line) in enumerate(self.contours):
            text = f"{100 * fraction:g} %"
            width, high = text_width(text, SMALL) + 2.0, SMALL * LETTER
            shares = (np.arange(SPOTS) / SPOTS + 0.2 + 0.13 * k) % 1.0
            for share in shares.tolist():
                if not isinstance(line, shapely.LineString | shapely.MultiLineString) or line.is_empty:
                    break
                spot = shapely.line_interpolate_point(line, share, normalized=True)
                x, y = spot.x, spot.y
                box = shapely.box(x - width / 2, y - high / 2, x + width / 2, y + high / 2)
                if shapely.intersects(box, self.borders):
                    continue
                if self.room.inside(box.buffer(0.6, join_style="mitre"), width, high) is not None:
                    self.texts.append((x, y, text, SMALL, MARK, False))
                    break

    def _field_names(self) -> None:
        order = sorted(range(len(self.fields)), key=lambda k: self.fields[k].area)
        order = [k for k in order if self.fields[k].area > TINY]
        narrow = [
            k for k in order if not self._named_inside(self.section.regions[k], _largest(self.fields[k]))
        ]
        spots = {k: self.room.widest(_largest(self.fields[k])) for k in narrow}
        for spot in spots.values():
            self.room.take_thin(shapely.Point(spot).buffer(1.5))
        for k in narrow:
            name = shown(self.section.regions[k].name)
            if len(name) < 14 and self._with_pointer(*spots[k], name, NAME_SIZES[-1]):
                continue
            number = str(len(self.key) + 1)
            placed = self._with_pointer(*spots[k], number, SMALL)
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

    def _with_pointer(self, x: float, y: float, text: str, size: float) -> bool:
        width, high = text_width(text, size) + 2.0, size * LETTER
        found = self.room.beside(x, y, width, high)
        if found is None:
            return False
        self.texts.append((*found, text, size, INK, False))
        box = shapely.box(
            found[0] - width / 2, found[1] - high / 2, found[0] + width / 2, found[1] + high / 2
        )
        end = shapely.shortest_line(shapely.Point(x, y), box).coords[1]
        self.pointers.append((x, y, end[0], end[1]))
        return True

    def _side_notes(self) -> list[Note]:
        section = self.section
        notes = [
            Note("From – to", head=True),
            Note(f"{section.from_name}: {_percents(section.from_wt)} wt%"),
            Note(f"{section.to_name}: {_percents(section.to_wt)} wt%"),
            Note("Fields", head=True),
        ]
        kinds = {_kind(r) for r in section.regions}
        notes += [Note(words, swatch=FIELDS[kind][0]) for kind, words in WORDS.items() if kind in kinds]
        notes += [Note(f"{k}: {name}") for k, name in enumerate(self.key, 1)]
        drawn = sorted({fraction for fraction, _ in self.contours})
        if drawn:
            told = ", ".join(f"{100 * f:g}" for f in drawn)
            notes.append(Note("Dashed lines", head=True))
            notes.append(Note(f"from there on {told} % of the mass is liquid", colour=MARK))
        levels: dict[str, set[str]] = {}
        for i in reversed(section.invariants):
            if self.south < i.temperature_c < self.north:
                phases = levels.setdefault(both_scales(i.temperature_c), set())
                phases.update(*(field.split(" + ") for field in (i.under, i.over)))
        if levels:
            notes.append(Note("Levels, where these coexist", head=True))
        for level, phases in levels.items():
            notes.append(Note(level, colour=INVARIANT))
            notes.append(Note(shown(", ".join(sorted(phases, key=lambda p: (p != "L", p))))))
        return notes

    def draw(self, axes: "Axes") -> None:
        """Draw all of it into the axes."""
        section = self.section
        axes.set_xlim(0.0, self.east)
        axes.set_xticks(even(0.0, self.east, 11))
        axes.set_xlabel(f"mass percent of {section.to_name}   (the rest is {section.from_name})", fontsize=9)
        celsius_axis(axes, self.south, self.north)
        for region in section.regions:
            ring = [list(p) for p in region.polygon.exterior.coords]
            axes.add_patch(patch(ring, FIELDS[_kind(region)][0], BORDER, 0.8)).set_zorder(1)
        for i in section.invariants:
            axes.plot(
                [i.from_share, i.to_share], [i.temperature_c] * 2, color=INVARIANT, linewidth=1.3, zorder=3
            )
        for contour in section.contours:
            for line in contour.lines:
                xs, ys = zip(*line, strict=True)
                axes.plot(xs, ys, color=MARK, linewidth=0.8, linestyle=(0, (5, 3)), zorder=4)
        for x1, y1, x2, y2 in self.pointers:
            (ax, ay), (bx, by) = self._back(x1, y1), self._back(x2, y2)
            axes.plot([ax, bx], [ay, by], color=INK, linewidth=0.6, zorder=5, clip_on=False)
            axes.plot(ax, ay, ".", color=INK, markersize=2.5, zorder=5, clip_on=False)
        for x, y, text, size, colour, upright in self.texts:
            paper = {"facecolor": "white", "edgecolor": "none", "alpha": 0.75, "pad": 0.6}
            axes.text(
                *self._back(x, y),
                text,
                fontsize=size,
                color=colour,
                rotation=90 if upright else 0,
                ha="center",
                va="center" if upright else "center_baseline",
                zorder=7,
                bbox=paper if colour == MARK else None,
            )

    def _back(self, x: float, y: float) -> tuple[float, float]:
        return x / self.per_share, self.south + y / self.per_c


def _window(section: Section) -> tuple[float, float]:
    """Lowest and highest temperature shown: where there is liquid and solid, and some more."""
    melting = [r.polygon.bounds for r in section.regions if _kind(r) == "liquid solid"]
    low, high = section.temperature_range_c
    if not melting:
        return low, high
    south, north = min(b[1] for b in melting), max(b[3] for b in melting)
    under = max(LEAST_MARGIN_C, UNDER * (north - south))
    over = max(LEAST_MARGIN_C, OVER * (north - south))
    return max(low, 5.0 * np.floor((south - under) / 5.0)), min(high, 5.0 * np.ceil((north + over) / 5.0))


def _kind(region: Region) -> str:
    """Which of FIELDS a field of any number of phases is coloured as."""
    liquids, solids = region.kinds.count("liquid"), region.kinds.count("solid")
    if liquids and solids:
        return "liquid solid"
    word = "liquid" if liquids else "solid"
    return word if liquids + solids == 1 else f"{word} {word}"


def _largest(field: shapely.Geometry) -> shapely.Polygon:
    parts = [p for p in shapely.get_parts(field) if isinstance(p, shapely.Polygon)]
    return max(parts, key=lambda p: p.area)


def _percents(composition_wt: Mapping[str, float]) -> str:
    return " ".join(f"{el} {wt:.6g}" for el, wt in composition_wt.items())
