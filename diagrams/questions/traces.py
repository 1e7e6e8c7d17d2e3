"""Leaving out trace elements that no data cover, where the question allows it, and saying which."""

import math
from collections.abc import Iterable, Mapping
from dataclasses import replace
from types import MappingProxyType

from diagrams.alloys import Alloy

MOST_TRACE_WT = 1.0  # wt%; more of an element than this is no trace


def without_traces(
    alloy: Alloy, below_wt: float, covered: Iterable[frozenset[str]]
) -> tuple[Alloy, Mapping[str, float]]:
    """The alloy without the elements under `below_wt` wt% that keep it from being covered, and their wt%.

    `covered` are the sets of elements that data cover together. As little mass as possible is left out; the
    rest is taken as 100 wt%, and its limits grow by the same factor. Nothing is left out where all elements
    are covered, or where leaving out does not help.
    """
    elements = frozenset(alloy.composition_wt)
    traces = frozenset(el for el, wt in alloy.composition_wt.items() if wt < below_wt)
    possible = [elements & together for together in covered if elements - together <= traces]
    possible = [kept for kept in possible if kept]
    if not possible:
        return alloy, {}

    def lost_wt(kept: frozenset[str]) -> float:
        return math.fsum(alloy.composition_wt[el] for el in elements - kept)

    kept = min(possible, key=lambda some: (lost_wt(some), sorted(some)))
    left_out = {el: alloy.composition_wt[el] for el in sorted(elements - kept)}
    if not left_out:
        return alloy, {}
    factor = 100.0 / math.fsum(alloy.composition_wt[el] for el in kept)
    composition = {el: wt * factor for el, wt in alloy.composition_wt.items() if el in kept}
    limits = {
        el: (low * factor, min(100.0, high * factor))
        for el, (low, high) in alloy.limits_wt.items()
        if el in kept
    }
    slim = replace(alloy, composition_wt=MappingProxyType(composition), limits_wt=MappingProxyType(limits))
    return slim, MappingProxyType(left_out)
