"""How an alloy melts: liquid mass fraction against temperature, exactly as the polygons give it.

Within one two-phase region borders are straight between vertices, so the liquid fraction there is a ratio of
two straight lines in temperature: kinks, jumps and inversions are exact.
"""

from dataclasses import dataclass
from functools import cache, cached_property, lru_cache
from itertools import pairwise

import numpy as np
from numpy.typing import NDArray

from diagrams.diagram import Diagram
from diagrams.errors import InvalidInput, OutsideData
from diagrams.questions.locate import borders_of, check_composition, read_slab

Floats = NDArray[np.float64]


@dataclass(frozen=True, slots=True)
class Piece:
    """Between two temperatures the liquid fraction is (n0 + (n1−n0)s) / (d0 + (d1−d0)s), s from 0 to 1."""

    low_c: float
    high_c: float
    n0: float
    n1: float
    d0: float
    d1: float

    @property
    def first(self) -> float:
        """Liquid fraction at the lower end."""
        return self.n0 / self.d0

    @property
    def last(self) -> float:
        """Liquid fraction at the upper end."""
        return self.n1 / self.d1

    def at(self, temperature_c: float) -> float:
        """Liquid fraction at a temperature inside the piece."""
        if self.high_c == self.low_c:
            return self.last
        s = (temperature_c - self.low_c) / (self.high_c - self.low_c)
        return (self.n0 + (self.n1 - self.n0) * s) / (self.d0 + (self.d1 - self.d0) * s)

    def where(self, fraction: float) -> float:
        """Temperature inside the piece at which a fraction between its ends is met."""
        rise = (self.n1 - self.n0) - fraction * (self.d1 - self.d0)
        if rise == 0.0:
            return self.low_c
        s = (fraction * self.d0 - self.n0) / rise
        return self.low_c + min(1.0, max(0.0, s)) * (self.high_c - self.low_c)


class MeltingCurve:
    """The melting of one alloy over the whole range of a diagram: pieces upwards in temperature, no holes."""

    def __init__(self, pieces: tuple[Piece, ...], diagram_id: str) -> None:
        self.pieces = pieces
        self._diagram_id = diagram_id

    @cached_property
    def points(self) -> tuple[tuple[float, float], ...]:
        """(°C, liquid fraction) at every kink; a jump shows as two points at one temperature."""
        points: list[tuple[float, float]] = []
        for piece in self.pieces:
            for point in ((piece.low_c, piece.first), (piece.high_c, piece.last)):
                if not points or points[-1] != point:
                    points.append(point)
        return tuple(points)

    @property
    def solidus_c(self) -> float:
        """Temperature of the first liquid on heating; OutsideData if some is liquid all the way down."""
        return self.first_exceeds(0.0)

    @property
    def liquidus_c(self) -> float:
        """Lowest temperature from which on all is liquid; OutsideData if solid is left at the top."""
        return self.stays_above(1.0)

    def liquid_fraction(self, temperature_c: float) -> float:
        """Liquid mass fraction at a temperature; at a jump the value just above."""
        low, high = self.pieces[0].low_c, self.pieces[-1].high_c
        if not low <= temperature_c <= high:
            raise OutsideData(
                f"{temperature_c:g} °C lies outside the data of {self._diagram_id}, {low:g} to {high:g} °C.",
                field="temperatures_c",
                remedy=f"Ask between {low:g} and {high:g} °C.",
            )
        for piece in reversed(self.pieces):
            if piece.low_c <= temperature_c:
                return piece.at(temperature_c)
        raise AssertionError("the first piece starts at the lowest temperature")

    def liquid_fractions(self, temperatures_c: Floats) -> Floats:
        """The same for an array of temperatures."""
        lows = np.array([p.low_c for p in self.pieces])
        t = np.asarray(temperatures_c, dtype=np.float64)
        if t.size and (t.min() < lows[0] or t.max() > self.pieces[-1].high_c):
            self.liquid_fraction(float(t.min() if t.min() < lows[0] else t.max()))
        k = np.searchsorted(lows, t, side="right") - 1
        p = np.array(
            [(q.low_c, q.high_c - q.low_c, q.n0, q.n1 - q.n0, q.d0, q.d1 - q.d0) for q in self.pieces]
        )[k]
        s = (t - p[..., 0]) / p[..., 1]
        found: Floats = (p[..., 2] + p[..., 3] * s) / (p[..., 4] + p[..., 5] * s)
        return found

    def first_exceeds(self, fraction: float) -> float:
        """Temperature up to which the liquid fraction stays at or under `fraction` (0 ≤ fraction < 1)."""
        _check_fraction(fraction)
        for k, piece in enumerate(self.pieces):
            if piece.first > fraction:
                if k == 0:
                    raise self._beyond("already holds more liquid at the lowest temperature of the data")
                return piece.low_c
            if piece.last > fraction:
                return piece.where(fraction)
        raise self._beyond("holds no more liquid even at the highest temperature of the data")

    def stays_above(self, fraction: float) -> float:
        """Lowest temperature from which on the liquid fraction is at least `fraction` (0 < fraction ≤ 1)."""
        _check_fraction(fraction)
        for k in range(len(self.pieces) - 1, -1, -1):
            piece = self.pieces[k]
            if piece.last < fraction:
                if k == len(self.pieces) - 1:
                    raise self._beyond("is not that far molten at the highest temperature of the data")
                return piece.high_c
            if piece.first < fraction:
                return piece.where(fraction)
        raise self._beyond("is that far molten already at the lowest temperature of the data")

    def _beyond(self, what: str) -> OutsideData:
        return OutsideData(
            f"The alloy {what} ({self._diagram_id}).",
            field="alloy",
            remedy="The temperature asked for lies outside the data: choose another alloy or fraction.",
        )


def _check_fraction(fraction: float) -> None:
    if not 0.0 <= fraction <= 1.0:
        raise InvalidInput(
            f"A liquid fraction of {fraction:g} is not possible.",
            field="target_liquid_fraction",
            remedy="Give a mass fraction from 0 to 1.",
        )


@dataclass(frozen=True, slots=True)
class Mixed:
    """Tie lines of a field of liquid and solid: their ends (wt%) at every kink of either border (°C)."""

    temperatures_c: Floats
    left: Floats
    right: Floats
    liquid_right: bool

    def contour(self, fraction: float) -> Floats:
        """Compositions of a liquid fraction, straight between these temperatures."""
        share = fraction if self.liquid_right else 1.0 - fraction
        return self.left + share * (self.right - self.left)


@cache
def mixed_fields(diagram: Diagram) -> tuple[Mixed, ...]:
    """The fields of liquid and solid; prepared once."""
    found = []
    for strip in borders_of(diagram).strips:
        if sorted(strip.region.kinds) == ["liquid", "solid"]:
            t = np.union1d(strip.left.t_array, strip.right.t_array)
            left, right = strip.left.at_many(t), strip.right.at_many(t)
            found.append(Mixed(t, left, right, strip.region.kinds[1] == "liquid"))
    return tuple(found)


# Diagrams compare by identity, and the catalogue holds each once for the life of the process.
@lru_cache(maxsize=1024)
def melting_curve(diagram: Diagram, second_wt: float) -> MeltingCurve:
    """The melting curve of one composition (wt% of the second element); OutsideData beyond the data."""
    check_composition(diagram, second_wt)
    borders = borders_of(diagram)
    mixed = [piece for field in mixed_fields(diagram) for piece in _pieces(field, second_wt)]
    mixed.sort(key=lambda p: p.low_c)
    pieces: list[Piece] = []
    here = borders.corners_c[0]
    for piece in mixed:
        if piece.low_c > here:
            pieces += _between(diagram, second_wt, here, piece.low_c)
        pieces.append(piece)
        here = piece.high_c
    pieces += _between(diagram, second_wt, here, borders.corners_c[-1])
    return MeltingCurve(tuple(pieces), diagram.id)


def _pieces(field: Mixed, second_wt: float) -> list[Piece]:
    """Where a composition lies inside a field of liquid and solid."""
    t, left, right = field.temperatures_c, field.left, field.right
    above_left, below_right = second_wt - left, right - second_wt
    may = np.flatnonzero(
        (np.maximum(above_left[:-1], above_left[1:]) > 0)
        & (np.maximum(below_right[:-1], below_right[1:]) > 0)
    )
    found = []
    for k in may.tolist():
        low, high = 0.0, 1.0
        for a, b in ((above_left[k], above_left[k + 1]), (below_right[k], below_right[k + 1])):
            if a < 0.0:
                low = max(low, a / (a - b))
            if b < 0.0:
                high = min(high, a / (a - b))
        if high <= low:
            continue
        ends = []
        for s in (low, high):
            xl, xr = left[k] + s * (left[k + 1] - left[k]), right[k] + s * (right[k + 1] - right[k])
            # on a border the fraction is exactly 0 or 1, whatever the rounding
            part = min(max((second_wt - xl) if field.liquid_right else (xr - second_wt), 0.0), xr - xl)
            ends.append((float(t[k] + s * (t[k + 1] - t[k])), float(part), float(xr - xl)))
        (t0, n0, d0), (t1, n1, d1) = ends
        if t1 > t0 and (d0 > 0.0 or d1 > 0.0):
            if d0 <= 0.0:  # opens in a point: all of one phase there
                n0, d0 = n1, d1
            if d1 <= 0.0:
                n1, d1 = n0, d0
            found.append(Piece(t0, t1, n0, n1, d0, d1))
    return found


def _between(diagram: Diagram, second_wt: float, low_c: float, high_c: float) -> list[Piece]:
    """The all-solid or all-liquid stretches between two temperatures."""
    borders = borders_of(diagram)
    inner = [t for t in borders.corners_c if low_c < t < high_c]
    marks = [low_c, *inner, high_c] if high_c > low_c else []
    found: list[Piece] = []
    for a, b in pairwise(marks):
        slab = next(s for s in borders.slabs if s.low_c <= 0.5 * (a + b) <= s.high_c)
        fraction = read_slab(slab, second_wt, 0.5 * (a + b), 0.0).liquid_mass_fraction
        value = float(fraction > 0.5)
        if found and found[-1].n0 == value:
            found[-1] = Piece(found[-1].low_c, b, value, value, 1.0, 1.0)
        else:
            found.append(Piece(a, b, value, value, 1.0, 1.0))
    return found
