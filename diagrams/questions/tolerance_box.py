"""All compositions that a tolerance allows, and the extremes of a temperature over them by bounded search.

The compositions are a polytope: every element between its limits, all together 100 wt%. Liquidus and solidus
bend and jump inside it, so its corners alone do not do: corners, centre, the middles between corners and
the nominal are tried, then a pattern search walks on from the best, passing mass from one element to
another in ever smaller amounts, until it gains nothing.
"""

import math
from collections.abc import Callable, Mapping
from dataclasses import dataclass
from itertools import combinations, permutations, product

from diagrams.alloys import Alloy
from diagrams.errors import InvalidComposition, InvalidInput, OutsideData
from diagrams.questions.melter import Span

MOST_CORNERS = 32
MOST_MIDDLES = 15
SHARES = (0.25, 0.1, 0.025)  # amounts passed, as shares of the width of a limit
GAIN_C = 0.01  # a step that gains less is none
MOST_STEPS = 60  # of each search
SLACK_WT = 1e-7  # rounding of limits and sums

Composition = Mapping[str, float]
Question = Callable[[Composition], float]
Point = tuple[float, ...]  # wt% of each member


@dataclass(frozen=True)
class Member:
    """One element between limits, or all without limits: what the others leave, `parts` of it each."""

    parts: Mapping[str, float]
    low: float
    high: float


@dataclass(frozen=True)
class Box:
    """The allowed compositions; points count wt% of `members`, `nominal` and `corners` are points."""

    members: tuple[Member, ...]
    nominal: Point
    corners: tuple[Point, ...]

    def composition(self, point: Point) -> Composition:
        """A point in full, sorted, without what it does not hold."""
        wt = {el: x * part for m, x in zip(self.members, point, strict=True) for el, part in m.parts.items()}
        return {el: wt[el] for el in sorted(wt) if wt[el] > 0.0}

    @property
    def starts(self) -> list[Point]:
        """What to try first: nominal, corners, centre, middles between corners."""
        pairs = list(combinations(self.corners, 2))
        stride = max(1, math.ceil(len(pairs) / MOST_MIDDLES))
        middles = [_mean(pair) for pair in pairs[::stride]]
        return list(dict.fromkeys([self.nominal, *self.corners, _mean(self.corners), *middles]))

    def passed(self, point: Point, share: float) -> list[Point]:
        """The points reached by passing mass from one member to another, within the limits."""
        found = []
        for giver, taker in permutations(range(len(point)), 2):
            gives, takes = self.members[giver], self.members[taker]
            amount = share * min(gives.high - gives.low, takes.high - takes.low)
            amount = min(amount, point[giver] - gives.low, takes.high - point[taker])
            if amount > SLACK_WT:
                there = list(point)
                there[giver] -= amount
                there[taker] += amount
                found.append(tuple(there))
        return found


def box_of(alloy: Alloy) -> Box:
    """The compositions an alloy's limits allow.

    Elements without limits share what the others leave, in their nominal proportions. Limits of elements
    that the nominal does not hold are left aside: impurities have no place in an alloy of known elements.
    Raises InvalidComposition where the nominal lies outside the limits, InvalidInput for too many corners.
    """
    nominal = alloy.composition_wt
    members, point = [], []
    for el, wt in nominal.items():
        if el in alloy.limits_wt:
            low, high = alloy.limits_wt[el]
            if not low - SLACK_WT <= wt <= high + SLACK_WT:
                raise InvalidComposition(
                    f"The nominal {wt:g} wt% {el} lies outside the limits {low:g} to {high:g} wt%.",
                    field="tolerance_wt",
                    remedy="Give limits that hold the nominal composition.",
                )
            members.append(Member({el: 1.0}, low, high))
            point.append(wt)
    free = {el: wt for el, wt in nominal.items() if el not in alloy.limits_wt}
    if free:
        total = math.fsum(free.values())
        members.append(Member({el: wt / total for el, wt in free.items()}, 0.0, 100.0))
        point.append(total)
    corners = _corners(members)
    if len(corners) > MOST_CORNERS:
        raise InvalidInput(
            f"The tolerance has {len(corners)} corners, more than the {MOST_CORNERS} that are searched.",
            field="tolerance_wt",
            remedy="Give tolerances for fewer elements; one may take the balance.",
        )
    return Box(tuple(members), tuple(point), corners if len(corners) > 1 else (tuple(point),))


def span_over(box: Box, question: Question, gain: float = GAIN_C) -> Span:
    """A value at the nominal composition and its extremes over the box, each with its composition.

    A step of the search that gains less than `gain` is none.

    Raises OutsideData naming the tolerance where a composition tried lies beyond the data.
    """
    nominal_wt = box.composition(box.nominal)
    nominal = question(nominal_wt)
    if len(box.corners) < 2:
        return Span(nominal, nominal, nominal, nominal_wt, nominal_wt, 1)
    tried = {box.nominal: nominal}

    def ask(point: Point) -> float:
        if point not in tried:
            tried[point] = _named(box.composition(point), question)
        return tried[point]

    for point in box.starts:
        ask(point)
    low = _walk(box, ask, min(tried, key=lambda p: tried[p]), -1.0, gain)
    high = _walk(box, ask, max(tried, key=lambda p: tried[p]), 1.0, gain)
    return Span(nominal, tried[low], tried[high], box.composition(low), box.composition(high), len(tried))


def _walk(box: Box, ask: Callable[[Point], float], here: Point, sign: float, gain: float) -> Point:
    steps = 0
    for share in SHARES:
        gained = True
        while gained and steps < MOST_STEPS:
            gained = False
            for there in box.passed(here, share):
                steps += 1
                if sign * (ask(there) - ask(here)) > gain:
                    here, gained = there, True
                    break
    return here


def _named(composition: Composition, question: Question) -> float:
    """Ask; what lies beyond the data is the tolerance's doing."""
    try:
        return question(composition)
    except OutsideData as error:
        told = ", ".join(f"{wt:.4g} wt% {el}" for el, wt in composition.items())
        raise OutsideData(
            f"Within the tolerance, at {told}: {error}", field="tolerance_wt", remedy=error.remedy
        ) from error


def _corners(members: list[Member]) -> tuple[Point, ...]:
    """All but one member at an end of its limits, that one taking what is left, where its limits allow it."""
    found: list[Point] = []
    for k, last in enumerate(members):
        ends = [(m.low, m.high) if m.low < m.high else (m.low,) for m in members[:k] + members[k + 1 :]]
        for others in product(*ends):
            rest = 100.0 - math.fsum(others)
            if last.low - SLACK_WT <= rest <= last.high + SLACK_WT:
                corner = (*others[:k], min(max(rest, last.low), last.high), *others[k:])
                if not any(math.dist(corner, other) < SLACK_WT for other in found):
                    found.append(corner)
    return tuple(found)


def _mean(points: tuple[Point, ...]) -> Point:
    return tuple(math.fsum(wts) / len(points) for wts in zip(*points, strict=True))
