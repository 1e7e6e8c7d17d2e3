"""The same question as locate.py for arrays of points: columns in, columns out, the same boundary rule."""

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from diagrams.borders import Slab
from diagrams.diagram import Diagram, Region
from diagrams.errors import InvalidInput
from diagrams.questions.locate import borders_of
from diagrams.tolerances import ON_BORDER_WT, ON_INVARIANT_C

Floats = NDArray[np.float64]
OUTSIDE = "outside"


@dataclass(frozen=True)
class Readings:
    """Columns of equal length; `outside` marks points beyond the data, whose fraction is NaN."""

    names: tuple[str, ...]
    codes: NDArray[np.int32]
    liquid_mass_fraction: Floats
    outside: NDArray[np.bool_]

    @property
    def fields(self) -> list[str]:
        """Name of the field of each point; `outside` where no data reach."""
        table = np.array([*self.names, OUTSIDE], dtype=object)
        found: list[str] = table[self.codes].tolist()
        return found


def locate_many(diagram: Diagram, second_wt: Floats, temperature_c: Floats) -> Readings:
    """Field and liquid mass fraction at each point; both arrays one-dimensional and of equal length.

    Points outside the data are marked, never moved. Raises InvalidInput for shapes or values that are wrong.
    """
    x = np.asarray(second_wt, dtype=np.float64)
    t = np.asarray(temperature_c, dtype=np.float64)
    if x.ndim != 1 or x.shape != t.shape:
        raise InvalidInput(
            f"second_wt has {x.size} and temperature_c has {t.size} values.",
            field="temperature_c",
            remedy="Give both the same length.",
        )
    if not (np.isfinite(x).all() and np.isfinite(t).all()):
        raise InvalidInput("a value is not a finite number.", field="second_wt", remedy="Give numbers only.")
    borders = borders_of(diagram)
    corners = np.array(borders.corners_c)
    (wt_low, wt_high), (t_low, t_high) = diagram.composition_range_wt, diagram.temperature_range_c
    outside = (x < wt_low) | (x > wt_high) | (t < t_low) | (t > t_high)
    last = len(borders.slabs) - 1
    slab_of = np.clip(np.searchsorted(corners, t + ON_INVARIANT_C, side="right") - 1, 0, last)
    writer = _Writer(x.size)
    order = np.argsort(slab_of, kind="stable")
    bounds = np.searchsorted(slab_of[order], np.arange(last + 2))
    for k, slab in enumerate(borders.slabs):
        rows = order[bounds[k] : bounds[k + 1]]
        rows = rows[~outside[rows]]
        if rows.size:
            _read(slab, rows, x[rows], _above(slab, x[rows], t[rows]), writer)
    writer.codes[outside] = len(writer.names)
    return Readings(tuple(writer.names), writer.codes, writer.liquid, outside)


class _Writer:
    def __init__(self, size: int) -> None:
        self.codes = np.zeros(size, dtype=np.int32)
        self.liquid = np.full(size, np.nan)
        self.names: list[str] = []
        self._known: dict[str, int] = {}

    def code(self, name: str) -> int:
        if name not in self._known:
            self._known[name] = len(self.names)
            self.names.append(name)
        return self._known[name]

    def single(self, rows: NDArray[np.intp], gap: Region | None, beside: Region | None, end: int) -> None:
        if gap is not None:
            name, kind = gap.phases[0], gap.kinds[0]
        else:
            assert beside is not None  # a slab without strips has one gap as wide as the frame
            name, kind = beside.phases[end], beside.kinds[end]
        self.codes[rows] = self.code(name)
        self.liquid[rows] = float(kind == "liquid")


def _above(slab: Slab, x: Floats, t: Floats) -> Floats:
    """Temperatures moved into the slab; where borders meet in a point on its floor, off that point."""
    t = np.maximum(t, slab.low_c)
    off_c = min(slab.low_c + ON_INVARIANT_C, slab.high_c)
    for strip in slab.strips:
        point = strip.left.at(slab.low_c)
        if point == strip.right.at(slab.low_c):
            t = np.where((t < off_c) & (np.abs(x - point) <= ON_BORDER_WT), off_c, t)
    return t


def _read(slab: Slab, rows: NDArray[np.intp], x: Floats, t: Floats, writer: _Writer) -> None:
    """Peel the points off from left to right: what lies left of a strip, then in it."""
    for k, strip in enumerate(slab.strips):
        left, right = strip.left.at_many(t), strip.right.at_many(t)
        in_gap = x <= left + ON_BORDER_WT
        if in_gap.any():
            writer.single(rows[in_gap], slab.gaps[k], strip.region, 0)
        inside = ~in_gap & (x < right - ON_BORDER_WT)
        here = rows[inside]
        if here.size:
            writer.codes[here] = writer.code(strip.region.name)
            share = (x[inside] - left[inside]) / (right[inside] - left[inside])
            first, second = (float(kind == "liquid") for kind in strip.region.kinds)
            writer.liquid[here] = first * (1.0 - share) + second * share
        on_compound = ~in_gap & ~inside & (x <= right + ON_BORDER_WT) & (slab.gaps[k + 1] is None)
        if on_compound.any():
            writer.single(rows[on_compound], None, strip.region, 1)
        rest = ~(in_gap | inside | on_compound)
        rows, x, t = rows[rest], x[rest], t[rest]
    if rows.size:
        writer.single(rows, slab.gaps[-1], slab.strips[-1].region if slab.strips else None, 1)
