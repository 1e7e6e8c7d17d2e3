"""Columns put in order for drawing: runs of one sequence, which share their levels exactly where they meet.

Where the sequence changes both sides stand on one upright. Changes that meet there become one vertex;
boundaries that run through have one level on both sides. Everything drawn later uses these numbers only.
"""

from itertools import groupby, pairwise

from diagrams.sections.align import levels, meetings
from diagrams.sections.line import Line
from diagrams.sections.naming import Named, field_of, phases_of
from diagrams.sections.section import Liquids, Run, Station
from diagrams.sections.upright import Part, Upright

DECIMALS_SHARE = 7
DECIMALS_C = 5
DECIMALS_LIQUID = 5
MEET_C = 0.05  # changes at a node within this are one
THROUGH_C = 0.05  # so much may the levels of a boundary differ that runs through a node


def runs_of(line: Line, columns: list[Upright]) -> tuple[tuple[Run, ...], list[list[list[Named]]]]:
    """The runs of a section and the phases of their parts; the outermost columns stand for its ends."""
    groups = [list(group) for _, group in groupby(columns, key=lambda c: c.sequence)]
    places = [0.0]
    snapped: list[tuple[list[float], list[float]]] = []
    for before, after in pairwise(groups):
        places.append(round(0.5 * (before[-1].to_share + after[0].to_share), DECIMALS_SHARE))
        snapped.append(_meet(before[-1], after[0]))
    places.append(line.most)
    runs: list[Run] = []
    named: list[list[list[Named]]] = []
    for k, group in enumerate(groups):
        first = snapped[k - 1][1] if k else _rounded(levels(group[0]))
        last = snapped[k][0] if k < len(snapped) else _rounded(levels(group[-1]))
        stations = [_station(group[0], places[k], first)]
        for column in group[1:-1]:
            place = round(column.to_share, DECIMALS_SHARE)
            if stations[-1].to_share < place < places[k + 1]:
                stations.append(_station(column, place, _rounded(levels(column))))
        stations.append(_station(group[-1], places[k + 1], last))
        middle = group[len(group) // 2]
        named.append([phases_of(line, part.states) for part in middle.parts])
        runs.append(Run(tuple(field_of(phases) for phases in named[-1]), tuple(stations)))
    return tuple(runs), named


def _rounded(values: list[float]) -> list[float]:
    """Levels between the ends of the frame, which stay as they were asked for."""
    low, high = values[0], values[-1]
    return [low, *(min(max(round(t, DECIMALS_C), low), high) for t in values[1:-1]), high]


def _meet(one: Upright, two: Upright) -> tuple[list[float], list[float]]:
    """Levels of both columns as they are drawn on the upright between them."""
    left, right = levels(one), levels(two)
    low, high = left[0], left[-1]
    found_left, found_right = list(left), list(right)
    for meeting in meetings(one, two):
        if meeting.through:
            (i,), (j,) = meeting.left, meeting.right
            if abs(left[i] - right[j]) <= THROUGH_C:
                found_left[i] = found_right[j] = 0.5 * (left[i] + right[j])
            continue
        values = sorted({*(left[i] for i in meeting.left), *(right[j] for j in meeting.right)})
        to: dict[float, float] = {}
        cluster = [values[0]]
        for value in [*values[1:], float("inf")]:
            if value - cluster[-1] <= MEET_C:
                cluster.append(value)
                continue
            frame = [t for t in cluster if t in (low, high)]
            mean = frame[0] if frame else sum(cluster) / len(cluster)
            to |= dict.fromkeys(cluster, mean)
            cluster = [value]
        for i in meeting.left:
            found_left[i] = to[left[i]]
        for j in meeting.right:
            found_right[j] = to[right[j]]
    for found in (found_left, found_right):
        for k in range(1, len(found)):
            found[k] = max(found[k], found[k - 1])
    return _rounded(found_left), _rounded(found_right)


def _station(column: Upright, place: float, at: list[float]) -> Station:
    return Station(place, tuple(at), tuple(_liquids(part) for part in column.parts))


def _liquids(part: Part) -> Liquids:
    values = tuple(round(min(max(v, 0.0), 1.0), DECIMALS_LIQUID) for v in part.liquid.tolist())
    return values[:1] if len(set(values)) == 1 else values
