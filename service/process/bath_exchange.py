"""How much of a bath to draw off and replace, so that every element comes back within its target."""

from collections.abc import Mapping
from dataclasses import dataclass

from service.process.bounds import Bounds

ROUNDING_WT = 1e-12


@dataclass(frozen=True)
class Exchange:
    """Share of the bath to replace (0..1) and the element that asks for it; what the bath then holds, wt%.

    `share` None: no share helps, because the replacement itself lies outside the target of `element`.
    """

    share: float | None
    element: str | None
    after_wt: Mapping[str, float]


def exchange(
    bath_wt: Mapping[str, float], feed_wt: Mapping[str, float], targets: Mapping[str, Bounds]
) -> Exchange:
    """The least share that brings all elements with a target within it; drawing off c leaves c (1 − s) + f s.

    Elements missing in bath or feed count as zero.
    """
    needed, asking = 0.0, None
    for element in sorted(targets):
        held, fed = bath_wt.get(element, 0.0), feed_wt.get(element, 0.0)
        for bound, over in ((targets[element].high, 1.0), (targets[element].low, -1.0)):
            if bound is None or over * (held - bound) <= ROUNDING_WT:
                continue
            if over * (fed - bound) > ROUNDING_WT:
                return Exchange(None, element, dict(bath_wt))
            share = (held - bound) / (held - fed)
            if share > needed:
                needed, asking = share, element
    after = {
        el: bath_wt.get(el, 0.0) * (1.0 - needed) + feed_wt.get(el, 0.0) * needed
        for el in sorted({*bath_wt, *feed_wt})
    }
    # coming in, the feed may carry an element past its other bound
    for element in sorted(targets):
        bounds, held = targets[element], after.get(element, 0.0)
        over = bounds.high is not None and held > bounds.high + 1e-9
        if over or (bounds.low is not None and held < bounds.low - 1e-9):
            return Exchange(None, element, dict(bath_wt))
    return Exchange(needed, asking, after)
