"""One composition over temperature: which phases there are between which temperatures, exactly.

The walk goes down from the highest temperature. The phases found hold until an amount would become negative
or another phase comes to lie under the common tangent plane; that temperature is found with the temperature
as an unknown (crossing.py), and the next set of phases is proven on the other side.
"""

from dataclasses import dataclass, replace
from typing import Any

import numpy as np

from diagrams.errors import NotConverged
from diagrams.gibbs import Floats
from diagrams.many.crossing import crossing
from diagrams.many.equilibrium import LEAST_AMOUNT, UNDER_TANGENT, entered, settle, stable, without
from diagrams.many.newton import States, solve
from diagrams.many.sample import Sample
from diagrams.many.stretch import Stretch, liquid_fraction, stacked, stretch_of
from diagrams.many.tangent import deepest

STRIDE_K = 4.0  # between temperatures at which a set of phases is proven
AHEAD = 16  # so many at once
BEYOND_K = 1e-4  # how far beyond a change the next set of phases is proven
NARROW_K = 1e-6  # changes nearer than this are one
MOST_CHANGES = 60
MOST_HALVINGS = 40


@dataclass(frozen=True, eq=False)
class Column:
    """All stretches of a composition (mole fractions, n), upwards.

    `complete` is False where below `stretches[0]` no set of solids could be proven: nothing is said of there.
    """

    overall: Floats
    stretches: tuple[Stretch, ...]
    complete: bool


def column(sample: Sample, overall: Floats, low_k: float, high_k: float) -> Column:
    """The column of a composition, mole fractions (n,) all > 0, from `low_k` to `high_k`.

    Raises NotConverged where the phases cannot be proven while there is liquid.
    """
    walk = _Walk(sample, overall, low_k)
    stretches: list[Stretch] = []
    complete = True
    here = stable(sample, overall, high_k)
    for _ in range(MOST_CHANGES):
        try:
            states, after = walk.down(here)
        except NotConverged:
            if liquid_fraction(sample, here)[0] > 0.0:
                raise
            complete = False
            break
        lowest_k, highest_k = states.temperatures_k[[0, -1]]
        if after is not None and highest_k - lowest_k < NARROW_K and stretches:
            here = stable(sample, overall, max(low_k, float(lowest_k) - BEYOND_K))
            continue  # several changes in one: what lies between them is not told
        stretches.append(stretch_of(sample, states))
        if after is None:
            break
        here = after
    else:
        raise NotConverged(f"more than {MOST_CHANGES} changes of phases from {high_k:.1f} to {low_k:.1f} K")
    return Column(overall, tuple(reversed(stretches)), complete)


class _Walk:
    """Downwards through one composition."""

    def __init__(self, sample: Sample, overall: Floats, low_k: float) -> None:
        self.sample, self.overall, self.low_k = sample, overall, low_k

    def down(self, top: States) -> tuple[States, States | None]:
        """From a proven state down to the next change: states upwards; the state beyond, None at the end."""
        rows = [top]
        while True:
            t = float(rows[-1].temperatures_k[0])
            if t <= self.low_k:
                return stacked(rows[::-1]), None
            ahead = np.maximum(t - STRIDE_K * np.arange(1, AHEAD + 1), self.low_k)
            ahead = ahead[: int(np.argmax(ahead <= self.low_k)) + 1] if ahead[-1] <= self.low_k else ahead
            tried = solve(self.sample.system, self.overall, rows[-1].moved(ahead))
            good = self._proven(tried)
            count = len(good) if good.all() else int(np.argmin(good))
            rows += [tried.take([k]) for k in range(count)]
            if count < len(good):
                change, beyond = self._change(rows[-1], float(ahead[count]))
                if change.temperatures_k[0] < rows[-1].temperatures_k[0]:
                    rows.append(change)
                return stacked(rows[::-1]), beyond

    def _proven(self, states: States) -> Any:
        """Which states (B,) are converged, with no negative amount and nothing under the plane."""
        good = states.converged & (states.amounts.min(axis=1) >= LEAST_AMOUNT)
        rows = np.flatnonzero(good)
        if rows.size:
            good[rows] = deepest(self.sample, states.take(rows)).height >= -UNDER_TANGENT
        return good

    def _change(self, above: States, under_k: float) -> tuple[States, States]:
        """The change between a proven state and a temperature at which its phases do not hold.

        Gives the state of the old phases at the change, and one proven beyond it.
        """
        system = self.sample.system
        for _ in range(MOST_HALVINGS):
            top_k = float(above.temperatures_k[0])
            best: States | None = None
            at = solve(system, self.overall, above.moved(np.array([under_k])))
            for guess, zero in self._candidates(above, at):
                found = crossing(system, self.overall, guess, zero)
                t = float(found.temperatures_k[0])
                if found.converged[0] and under_k - NARROW_K <= t <= top_k + NARROW_K:
                    kept = without(found, zero) if len(found.sets) > len(above.sets) else found
                    if best is None or t > best.temperatures_k[0]:
                        best, changed = kept, found
            if best is not None and self._holds(best):
                return best, self._beyond(best, changed)
            middle_k = 0.5 * (top_k + under_k)
            if top_k - under_k < NARROW_K:
                return above, stable(self.sample, self.overall, under_k - BEYOND_K)
            middle = solve(system, self.overall, above.moved(np.array([middle_k])))
            if self._proven(middle)[0]:
                above = middle
            else:
                under_k = middle_k
        raise NotConverged(f"no change of phases found near {under_k:.3f} K")

    def _candidates(self, above: States, under: States) -> list[tuple[States, int]]:
        """What may happen on the way, as a start for each: a phase is used up, or comes under the plane."""
        found: list[tuple[States, int]] = []
        if not under.converged[0]:
            return [(above, k) for k in range(len(above.sets))] if len(above.sets) > 1 else []
        for k in range(len(above.sets)):
            if under.amounts[0, k] < LEAST_AMOUNT:
                a, b = above.amounts[0, k], under.amounts[0, k]
                share = float(np.clip(a / (a - b), 0.0, 1.0)) if a > b else 0.5
                t0, t1 = float(above.temperatures_k[0]), float(under.temperatures_k[0])
                near = solve(
                    self.sample.system, self.overall, above.moved(np.array([t0 + share * (t1 - t0)]))
                )
                found.append((near if near.converged[0] else above, k))
        low = deepest(self.sample, under)
        if low.height[0] < -UNDER_TANGENT:
            grown = States(
                (*above.sets, int(low.phase[0])),
                above.temperatures_k,
                above.mu,
                (*above.logs, low.logs[0][None]),
                np.hstack([above.amounts, [[0.0]]]),
                above.converged,
            )
            found.append((grown, len(above.sets)))
        return found

    def _holds(self, states: States) -> bool:
        """Whether a state at a change is proven but for the phases that just touch the plane."""
        if states.amounts.min() < -1e-7:
            return False
        return bool(deepest(self.sample, states).height[0] >= -1e-6)

    def _beyond(self, kept: States, changed: States) -> States:
        """The phases just under a change, proven."""
        t = kept.temperatures_k - BEYOND_K
        start = kept
        if len(changed.sets) > len(kept.sets):
            start = entered(self.sample, kept, changed.sets[-1], changed.logs[-1][0])
        else:
            start = without(kept, int(np.argmin(np.abs(kept.amounts[0]))))
        try:
            found = settle(self.sample, self.overall, replace(start, temperatures_k=t))
        except NotConverged:
            return stable(self.sample, self.overall, float(t[0]))
        # the next stretch begins at the change itself
        again = solve(self.sample.system, self.overall, replace(found, temperatures_k=kept.temperatures_k))
        return again if again.converged[0] and again.amounts.min() > -1e-7 else found
