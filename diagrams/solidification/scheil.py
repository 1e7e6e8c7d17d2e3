"""Freezing without diffusion in the solid: what froze stays as it is, the liquid goes on at equilibrium.

After G.H. Gulliver, J. Inst. Metals 9 (1913) 120, and E. Scheil, Z. Metallkd. 34 (1942) 70, from memory.

The temperature goes down in steps. In each, the liquid parts into solids and less liquid by the lever rule;
the solids of a step are taken halfway between what freezes at its beginning and at its end, which makes the
error of a step of third order. Steps are halved until the set of phases does not change within them, or they
are as short as SHORTEST_C.
"""

from dataclasses import dataclass

import numpy as np

from diagrams.gibbs import Floats
from diagrams.solidification.states import Freezing, PhasePart

SHORTEST_C = 0.01
MOST_FROZEN = 0.08  # of the liquid, in one step
ROUNDS = 3  # of the correction within a step
GONE = 1e-9  # share of the alloy that counts as no liquid
FIRST_C = 1e-3  # under the liquidus, where the first solid is looked at


@dataclass(frozen=True, eq=False)
class Step:
    """Liquid left at a temperature (share of the alloy's mass, 0..1), what froze on the way there.

    `formed` are the masses of each solid by name, as shares of the alloy.
    """

    temperature_c: float
    liquid: float
    formed: dict[str, float]


@dataclass(frozen=True, eq=False)
class Frozen:
    """The whole way down; `unfrozen` is the liquid left where the data end, 0 if all froze.

    `last_w` are the mass fractions (n,) of the last liquid, `solids` what each solid came to in all with its
    mean composition.
    """

    steps: tuple[Step, ...]
    unfrozen: float
    last_w: Floats
    solids: dict[str, tuple[float, Floats]]

    def falls_to(self, fraction: float) -> float | None:
        """Temperature at which the liquid falls to a fraction (0 < fraction < 1); None if it does not."""
        for above, below in zip(self.steps, self.steps[1:], strict=False):
            if below.liquid <= fraction < above.liquid:
                if above.temperature_c - below.temperature_c <= 2 * SHORTEST_C:
                    return below.temperature_c  # froze at one temperature, as a eutectic does
                share = (above.liquid - fraction) / (above.liquid - below.liquid)
                return above.temperature_c + share * (below.temperature_c - above.temperature_c)
        return None


def frozen(data: Freezing, w: Floats, liquidus_c: float, least: float = 1e-6) -> Frozen:
    """The way of mass fractions `w` (n,) from their liquidus down, until less than `least` is liquid.

    Raises NotConverged where a state is not proven.
    """
    lowest_c = data.range_c[0]
    steps = [Step(liquidus_c, 1.0, {})]
    masses: dict[str, float] = {}
    elements: dict[str, Floats] = {}
    first = [] if liquidus_c - FIRST_C < lowest_c else data.at(w / w.sum(), liquidus_c - FIRST_C)
    here = _Here(liquidus_c, 1.0, w / w.sum(), {p.name: p.w for p in first if not p.liquid})
    stride = data.step_c
    while here.liquid > least and here.temperature_c > lowest_c + SHORTEST_C:
        stride = min(stride, here.temperature_c - lowest_c)
        taken = _step(data, here, stride)
        whole = taken.liquid <= GONE
        changes = set(taken.solids) != set(here.solids) and bool(here.solids)
        coarse = taken.liquid < (1.0 - MOST_FROZEN) * here.liquid
        if (whole or changes or coarse) and stride > SHORTEST_C:
            stride = max(0.5 * stride, SHORTEST_C)
            continue
        formed = {name: amount for name, (amount, _) in taken.formed.items()}
        for name, (amount, shares) in taken.formed.items():
            masses[name] = masses.get(name, 0.0) + amount
            elements[name] = elements.get(name, np.zeros_like(w)) + amount * shares
        steps.append(Step(taken.temperature_c, taken.liquid, formed))
        here = _Here(
            taken.temperature_c, taken.liquid, taken.w if taken.liquid > GONE else here.w, taken.solids
        )
        stride = min(2.0 * stride, data.step_c)
    solids = {name: (amount, elements[name] / amount) for name, amount in masses.items() if amount > 0.0}
    unfrozen = here.liquid if here.liquid > least else 0.0
    return Frozen(tuple(steps), unfrozen, here.w, solids)


@dataclass(frozen=True, eq=False)
class _Here:
    """The liquid at a temperature: its share of the alloy, mass fractions, the solids beside it by name."""

    temperature_c: float
    liquid: float
    w: Floats
    solids: dict[str, Floats]


@dataclass(frozen=True, eq=False)
class _Taken(_Here):
    """The same after a step, with what froze in it: share of the alloy and mean composition."""

    formed: dict[str, tuple[float, Floats]]


def _step(data: Freezing, here: _Here, stride: float) -> _Taken:
    temperature_c = here.temperature_c - stride
    parts = data.at(here.w, temperature_c)
    for _ in range(ROUNDS):
        shift = sum(
            (
                0.5 * p.share * (here.solids[p.name] - p.w)
                for p in parts
                if not p.liquid and p.name in here.solids
            ),
            np.zeros_like(here.w),
        )
        corrected = here.w - shift
        if not np.any(shift) or corrected.min() <= 0.0 or not any(p.liquid for p in parts):
            break
        better = data.near(corrected, temperature_c)
        if better is None or all(p.liquid for p in better):
            break  # the shifted composition lies on the other side of the liquidus
        parts = better
    liquids = [p for p in parts if p.liquid]
    solids = [p for p in parts if not p.liquid]
    left = sum(p.share for p in liquids)
    liquid_w = _mean(liquids, left) if left > 0.0 and solids else here.w
    # what froze is what is no longer liquid, element by element, so that nothing is lost
    lost = here.w - left * liquid_w
    formed = {}
    if solids and 1.0 - left > 0.0:
        means = [_halfway(p, here.solids) for p in solids]
        total = sum(p.share for p in solids)
        rest = lost - sum(
            (p.share * mean for p, mean in zip(solids, means, strict=True)), np.zeros_like(lost)
        )
        for p, mean in zip(solids, means, strict=True):
            amount = p.share / total * (1.0 - left)
            formed[p.name] = (amount * here.liquid, (p.share * mean + rest * p.share / total) / amount)
    return _Taken(temperature_c, left * here.liquid, liquid_w, {p.name: p.w for p in solids}, formed)


def _mean(parts: list[PhasePart], total: float) -> Floats:
    found: Floats = sum((p.share * p.w for p in parts), np.zeros_like(parts[0].w)) / total
    return found


def _halfway(part: PhasePart, before: dict[str, Floats]) -> Floats:
    return 0.5 * (part.w + before[part.name]) if part.name in before else part.w
