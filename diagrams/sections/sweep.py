"""The columns a section is drawn from: so many that straight lines between neighbours are true.

Between neighbours with the same sequence of phases columns are set until boundaries and liquid fractions
run straight. Between others the place where the sequence changes is closed in on.
"""

from dataclasses import dataclass, field
from itertools import pairwise

import numpy as np

from diagrams.errors import NotConverged
from diagrams.sections.align import levels, spread
from diagrams.sections.carry import carried
from diagrams.sections.line import Line
from diagrams.sections.places import places_between
from diagrams.sections.upright import Sequence, Upright, upright

START = 3  # columns from nothing to begin with
STRAIGHT_C = 0.02
STRAIGHT_SHARE = 2e-4  # of the section's length, for boundaries that run steeply
STRAIGHT_LIQUID = 0.002
HALVED = 4.0  # times as much may the middle be off if it stays: halves of a bent strip are four times truer
NODE_C = 0.05  # changes this near to each other meet at a node
NARROW = 1e-4  # of the section's length: where the sequence has changed within this, it changes here
NARROWEST = 1e-7  # the same where the changes do not come near each other: an upright boundary
WIDEST = 0.045  # of the section's length: strips without a column between
MOST_ROUNDS = 80
MOST_COLUMNS = 3000


@dataclass(eq=False)
class _Wish:
    """A column wanted at a place, and columns it may be carried on from; `after` numbers the strip."""

    to_share: float
    starts: list[Upright]
    strip: int
    needed: bool
    found: Upright | None = field(default=None)


def swept(line: Line) -> list[Upright]:
    """All columns of a section, by mass percent; raises NotConverged where one cannot be proven."""
    west, east = line.inner
    beside = 0.25 * NARROWEST * line.most
    places = {
        *np.linspace(west, east, START).tolist(),
        *(x + d for x in line.compounds for d in (-beside, beside)),
    }
    columns = [_fresh(line, x) for x in sorted(places)]
    settled: set[tuple[float, float]] = set()
    for _ in range(MOST_ROUNDS):
        wishes = _wishes(line, columns, settled)
        if not wishes:
            return columns
        _grant(line, wishes)
        columns = _joined(line, columns, wishes, settled)
        if len(columns) > MOST_COLUMNS:
            break
    raise NotConverged("the section does not settle")


def _wishes(line: Line, columns: list[Upright], settled: set[tuple[float, float]]) -> list[_Wish]:
    wishes = []
    for k, (one, two) in enumerate(pairwise(columns)):
        if (one.to_share, two.to_share) in settled:
            continue
        if one.sequence == two.sequence:
            if two.to_share - one.to_share <= NARROW * line.most:
                continue
            wishes.append(_Wish(0.5 * (one.to_share + two.to_share), [one, two], k, needed=True))
        elif not _is_node(line, one, two):
            before = columns[k - 1] if k else None
            after = columns[k + 2] if k + 2 < len(columns) else None
            for place, from_west in places_between(line.most, before, one, two, after):
                wishes.append(_Wish(place, [one, two] if from_west else [two, one], k, needed=False))
    return wishes


def _is_node(line: Line, one: Upright, two: Upright) -> bool:
    width = (two.to_share - one.to_share) / line.most
    return width <= NARROWEST or (width <= NARROW and spread(one, two) <= NODE_C)


def _grant(line: Line, wishes: list[_Wish]) -> None:
    """Find the columns: carried on where that leads there, one a strip from nothing where it does not."""
    for choice in range(2):
        groups: dict[Sequence, list[_Wish]] = {}
        for wish in wishes:
            if wish.found is None:
                groups.setdefault(wish.starts[choice].sequence, []).append(wish)
        for group in groups.values():
            places = np.array([wish.to_share for wish in group])
            for wish, column in zip(
                group, carried(line, [wish.starts[choice] for wish in group], places), strict=True
            ):
                wish.found = column
    strips: dict[int, list[_Wish]] = {}
    for wish in wishes:
        strips.setdefault(wish.strip, []).append(wish)
    for strip in strips.values():
        missing = [wish for wish in strip if wish.found is None]
        middle = sorted(missing, key=lambda wish: abs(strip.index(wish) - 0.5 * len(strip)))
        for tries, wish in enumerate(middle):
            try:
                wish.found = _fresh(line, wish.to_share)
                break
            except NotConverged:
                if wish.needed or (tries == len(middle) - 1 and len(missing) == len(strip)):
                    raise


def _fresh(line: Line, to_share: float) -> Upright:
    """A column from nothing, its changes found once more as exactly as where they are carried on."""
    found = upright(line, to_share)
    return carried(line, [found], np.array([to_share]))[0] or found


def _joined(
    line: Line, columns: list[Upright], wishes: list[_Wish], settled: set[tuple[float, float]]
) -> list[Upright]:
    """The columns with those found; strips that are straight are settled."""
    between: dict[int, list[Upright]] = {}
    for wish in wishes:
        if wish.found is not None:
            between.setdefault(wish.strip, []).append(wish.found)
    joined = list(columns)
    for k, found in between.items():
        one, two = columns[k], columns[k + 1]
        run = [one, *sorted(found, key=lambda c: c.to_share), two]
        if one.sequence != two.sequence:
            joined += _changing(run)
            continue
        middle = run[1]
        off = _off(line, one, middle, two) if middle.sequence == one.sequence else np.inf
        if off <= 1.0:
            settled.add((one.to_share, two.to_share))
            continue
        joined.append(middle)
        if off <= HALVED:
            settled |= {(one.to_share, middle.to_share), (middle.to_share, two.to_share)}
    return sorted(joined, key=lambda c: c.to_share)


def _changing(run: list[Upright]) -> list[Upright]:
    """The inner columns beside a change of sequence; others only lie on the way."""
    return [
        here
        for before, here, after in zip(run, run[1:], run[2:], strict=False)
        if not before.sequence == here.sequence == after.sequence
    ]


def _off(line: Line, one: Upright, middle: Upright, two: Upright) -> float:
    """How far a strip is from straight, in allowances; infinite for a strip too wide to tell."""
    width = two.to_share - one.to_share
    if width > 2.0 * WIDEST * line.most:
        return np.inf
    off = 1.01 if width > WIDEST * line.most else 0.0
    for a, m, b in zip(levels(one), levels(middle), levels(two), strict=True):
        away = abs(m - 0.5 * (a + b))
        aside = away * width / (STRAIGHT_SHARE * line.most * abs(b - a)) if a != b else np.inf
        off = max(off, min(away / STRAIGHT_C, aside) if away else 0.0)
    for p, q, r in zip(one.parts, middle.parts, two.parts, strict=True):
        bent = float(np.abs(q.liquid - 0.5 * (p.liquid + r.liquid)).max())
        off = max(off, bent / STRAIGHT_LIQUID)
    return off
