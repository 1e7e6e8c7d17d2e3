"""Where to look for the place at which the sequence of phases changes between two columns."""

import numpy as np

from diagrams.sections.align import levels, meetings
from diagrams.sections.upright import Upright

BETWEEN = 6
NEAR_END = 0.05  # of the strip: an end of the section this near makes the places go by powers
LEAST = 1e-7  # of the section's length
STEPS_AWAY = (2e-4, 4e-3, 0.06)  # of the strip, to both sides of where the change is expected


def places_between(
    most: float, before: Upright | None, one: Upright, two: Upright, after: Upright | None
) -> list[tuple[float, bool]]:
    """Places between `one` and `two`, each with whether it should belong to the left one.

    `before` and `after` are the columns beyond, if any, from which the change may be foreseen.
    """
    west, east = one.to_share, two.to_share
    foreseen = _foreseen(before, one, two, after)
    if foreseen is None:
        return [(place, k < BETWEEN // 2) for k, place in enumerate(_even(most, west, east))]
    width = east - west
    away = sorted({-d for d in STEPS_AWAY} | {*STEPS_AWAY})
    places = [(foreseen + d * width, d < 0.0) for d in away]
    places += [(west + d * width, west + d * width < foreseen) for d in (0.25, 0.5, 0.75)]  # if it was not so
    return sorted((place, left) for place, left in places if west < place < east)


def _even(most: float, west: float, east: float) -> list[float]:
    steps = np.arange(1, BETWEEN + 1) / (BETWEEN + 1)
    width = east - west
    near_west, near_east = west < NEAR_END * width, most - east < NEAR_END * width
    if near_west and not near_east:
        low = max(west, LEAST * most)
        return [float(low ** (1.0 - s) * east**s) for s in steps]
    if near_east and not near_west:
        low = max(most - east, LEAST * most)
        return [float(most - (most - west) ** (1.0 - s) * low**s) for s in steps]
    return [float(west + width * s) for s in steps]


def _foreseen(before: Upright | None, one: Upright, two: Upright, after: Upright | None) -> float | None:
    """Where the widest parts that end between two columns come to nothing, by straight lines."""
    west, east = one.to_share, two.to_share
    places = []
    for meeting in meetings(one, two):
        if meeting.through:
            continue
        left, right = levels(one), levels(two)
        on_left = left[meeting.left[-1]] - left[meeting.left[0]]
        on_right = right[meeting.right[-1]] - right[meeting.right[0]]
        if on_left > 0.0 and on_right > 0.0:
            places.append(west + (east - west) * on_left / (on_left + on_right))
        elif on_left > 0.0 and before is not None and before.sequence == one.sequence:
            further = levels(before)
            wider = further[meeting.left[-1]] - further[meeting.left[0]]
            if wider > on_left:
                places.append(west + on_left * (west - before.to_share) / (wider - on_left))
        elif on_right > 0.0 and after is not None and after.sequence == two.sequence:
            further = levels(after)
            wider = further[meeting.right[-1]] - further[meeting.right[0]]
            if wider > on_right:
                places.append(east - on_right * (after.to_share - east) / (wider - on_right))
    if not places or not all(west < place < east for place in places):
        return None
    if max(places) - min(places) > 0.1 * (east - west):
        return None  # more than one change: they have to be told apart first
    return float(np.mean(places))
