"""Which phases at a point: the boundary rule and the tie line, from the stored borders.

Rule. A point within `tolerances.ON_BORDER_WT` of a border is read as the single phase beside it. A
temperature within `tolerances.ON_INVARIANT_C` of a corner temperature is read just above it; where the
reading just below differs (an invariant), both are given. Either way the point is `on_boundary`.
"""

from bisect import bisect_right
from dataclasses import dataclass
from functools import cache

from diagrams.borders import Borders, Slab
from diagrams.diagram import Diagram, Region, RegionKind
from diagrams.errors import OutsideData
from diagrams.tolerances import ON_BORDER_WT, ON_INVARIANT_C


@dataclass(frozen=True, slots=True)
class PhaseShare:
    """One phase of an equilibrium: its share of the mass and its composition (wt% of the second element)."""

    name: str
    kind: RegionKind
    mass_fraction: float
    second_wt: float


@dataclass(frozen=True, slots=True)
class Reading:
    """The state at a point; `below` is the state just below, if the point is on an invariant line."""

    field: str
    phases: tuple[PhaseShare, ...]
    on_boundary: bool
    below: "Reading | None" = None

    @property
    def liquid_mass_fraction(self) -> float:
        """Share of the mass that is liquid, 0..1."""
        return sum(p.mass_fraction for p in self.phases if p.kind == "liquid")


@cache
def borders_of(diagram: Diagram) -> Borders:
    """The prepared borders of a diagram; computed once."""
    return Borders(diagram)


def check_range(diagram: Diagram, second_wt: float, temperature_c: float) -> None:
    """Raise OutsideData where a point lies outside what the diagram's data cover."""
    check_composition(diagram, second_wt)
    low, high = diagram.temperature_range_c
    if not low <= temperature_c <= high:
        raise OutsideData(
            f"{temperature_c:g} °C lies outside the data of {diagram.id}, "
            f"which reach from {low:g} to {high:g} °C.",
            field="temperature_c",
            remedy=f"Ask between {low:g} and {high:g} °C{_why(diagram)}.",
        )


def check_composition(diagram: Diagram, second_wt: float) -> None:
    """Raise OutsideData where a composition lies outside what the diagram's data cover."""
    low, high = diagram.composition_range_wt
    if not low <= second_wt <= high:
        second = diagram.elements[1]
        raise OutsideData(
            f"{second_wt:g} wt% {second} lies outside the data of {diagram.id}, "
            f"which reach from {low:g} to {high:g} wt% {second}.",
            field="composition_wt",
            remedy=f"Ask between {low:g} and {high:g} wt% {second}{_why(diagram)}.",
        )


def _why(diagram: Diagram) -> str:
    """Where to read why the data end; the notes speak of much else, too, and are too long for a remedy."""
    return f"; the notes on the diagram {diagram.id} tell what its data hold" if diagram.notes else ""


def locate(diagram: Diagram, second_wt: float, temperature_c: float) -> Reading:
    """The phases at a point (wt% of the second element, °C), by the boundary rule.

    Raises OutsideData outside the stored range.
    """
    check_range(diagram, second_wt, temperature_c)
    borders = borders_of(diagram)
    corners = borders.corners_c
    k = bisect_right(corners, temperature_c)
    last = len(borders.slabs) - 1
    near = -1
    if k <= last and corners[k] - temperature_c <= ON_INVARIANT_C:
        near = k
    elif 0 < k - 1 <= last and temperature_c - corners[k - 1] <= ON_INVARIANT_C:
        near = k - 1
    if 0 < near <= last:
        above = read_slab(borders.slabs[near], second_wt, max(temperature_c, corners[near]), ON_BORDER_WT)
        under = read_slab(borders.slabs[near - 1], second_wt, min(temperature_c, corners[near]), ON_BORDER_WT)
        if above.field == under.field and (above.on_boundary or under.on_boundary):
            # Borders may meet here in a point (a melting point): off it shows what lies on each side.
            upper_c = min(corners[near] + ON_INVARIANT_C, corners[near + 1])
            lower_c = max(corners[near] - ON_INVARIANT_C, corners[near - 1])
            upper = read_slab(borders.slabs[near], second_wt, upper_c, ON_BORDER_WT)
            lower = read_slab(borders.slabs[near - 1], second_wt, lower_c, ON_BORDER_WT)
            if len(upper.phases) == len(lower.phases) == 1:
                above, under = upper, lower
        if above.field != under.field:
            return Reading(above.field, above.phases, True, under)
        return above if above.on_boundary or not under.on_boundary else under
    return read_slab(borders.slabs[min(k - 1, last)], second_wt, temperature_c, ON_BORDER_WT)


def read_slab(slab: Slab, second_wt: float, temperature_c: float, tolerance_wt: float) -> Reading:
    """The reading inside one slab, whose strips are in order from left to right."""
    before = None
    for k, strip in enumerate(slab.strips):
        left = strip.left.at(temperature_c)
        gap = slab.gaps[k]
        if second_wt <= left + tolerance_wt:
            on = second_wt >= left - tolerance_wt
            on = on or (before is not None and second_wt <= before + tolerance_wt)
            return _single(gap, strip.region, 0, second_wt, on)
        right = strip.right.at(temperature_c)
        if second_wt < right - tolerance_wt:
            return _two_phase(strip.region, left, right, second_wt)
        if second_wt <= right + tolerance_wt and slab.gaps[k + 1] is None:
            return _single(None, strip.region, 1, second_wt, True)
        before = right
    return _single(
        slab.gaps[-1],
        slab.strips[-1].region if slab.strips else None,
        1,
        second_wt,
        before is not None and second_wt <= before + tolerance_wt,
    )


def _two_phase(region: Region, left: float, right: float, second_wt: float) -> Reading:
    share = (second_wt - left) / (right - left)
    a, b = region.phases
    ka, kb = region.kinds
    return Reading(
        region.name,
        (PhaseShare(a, ka, 1.0 - share, left), PhaseShare(b, kb, share, right)),
        False,
    )


def _single(gap: Region | None, beside: Region | None, end: int, second_wt: float, on: bool) -> Reading:
    """One phase: the gap's own, or a line compound where the gap has no width."""
    if gap is not None:
        name, kind = gap.phases[0], gap.kinds[0]
    elif beside is not None:
        name, kind = beside.phases[end], beside.kinds[end]
    else:  # a slab without strips always has one gap as wide as the frame
        raise OutsideData("the diagram holds no phase here", field="composition_wt")
    return Reading(name, (PhaseShare(name, kind, 1.0, second_wt),), on)
