"""What becomes of alloys that melt together: the composition by mass."""

import math
from collections.abc import Sequence
from dataclasses import dataclass

from diagrams.alloys import Alloy, alloy_from_wt
from diagrams.errors import InvalidInput

LEAST_WT = 1e-6  # wt%; less of an element than this is nothing that data or scales could tell


@dataclass(frozen=True)
class Portion:
    """So much (grams) of an alloy."""

    alloy: Alloy
    mass_g: float


def element_masses(portions: Sequence[Portion]) -> dict[str, float]:
    """Grams of each element, sorted by symbol."""
    elements = sorted({el for portion in portions for el in portion.alloy.composition_wt})
    return {
        el: math.fsum(p.mass_g * p.alloy.composition_wt.get(el, 0.0) / 100.0 for p in portions)
        for el in elements
    }


def mixed(portions: Sequence[Portion], field: str = "parts", least_wt: float = LEAST_WT) -> Alloy:
    """The alloy of all portions together, at nominal compositions; portions of one alloy give that alloy.

    Raises InvalidInput, naming `field`, for a mixture of nothing, and where an element would be there in a
    share too small to be told.
    """
    if not portions or not all(portion.mass_g > 0.0 for portion in portions):
        raise InvalidInput(
            "There is nothing to mix.", field=field, remedy="Give parts with masses greater than zero."
        )
    first = portions[0].alloy
    if all(p.alloy.composition_wt == first.composition_wt for p in portions):
        return next((p.alloy for p in portions if p.alloy.filler is not None), first)
    masses = element_masses(portions)
    total_g = math.fsum(masses.values())
    shares = {el: 100.0 * mass_g / total_g for el, mass_g in masses.items()}
    for el, share in shares.items():
        if share < least_wt:
            raise InvalidInput(
                f"The mixture would hold {share:.3g} wt% {el}, less than any data can tell.",
                field=field,
                remedy=f"Leave out what brings {el}, or give amounts that are nearer to each other.",
            )
    return alloy_from_wt(shares)
