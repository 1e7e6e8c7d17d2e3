"""A change of phases as something that can be looked for again at a neighbouring composition."""

from collections import Counter
from dataclasses import dataclass

import numpy as np

from diagrams.gibbs import Floats
from diagrams.many.crossing import crossing
from diagrams.many.newton import Flags, States
from diagrams.many.sample import Sample
from diagrams.many.stretch import Stretch
from diagrams.many.tangent import deepest

TOUCHING = 1e-6  # of RT: how far under the plane a phase may seem that just touches it
LEAST_AMOUNT = -1e-7  # moles


@dataclass(frozen=True, eq=False)
class Change:
    """States at a change, one a composition; set number `zero` has no amount there."""

    states: States
    zero: int

    @property
    def temperatures_k(self) -> Floats:
        """Of the change, for each composition."""
        return self.states.temperatures_k


def change_between(below: Stretch, above: Stretch) -> Change | None:
    """The change between two neighbouring stretches of a column.

    None where more than one phase comes in at once.
    """
    upper, lower = above.states.take([0]), below.states.take([-1])
    entering = list((Counter(below.sets) - Counter(above.sets)).elements())
    leaving = list((Counter(above.sets) - Counter(below.sets)).elements())
    if len(entering) > 1 or (not entering and len(leaving) != 1):
        return None
    if not entering:
        same = [k for k, number in enumerate(upper.sets) if number == leaving[0]]
        return Change(upper, min(same, key=lambda k: abs(float(upper.amounts[0, k]))))
    new = _newest(lower, upper, entering[0])
    grown = States(
        (*upper.sets, entering[0]),
        upper.temperatures_k,
        upper.mu,
        (*upper.logs, lower.logs[new]),
        np.hstack([upper.amounts, [[0.0]]]),
        upper.converged,
    )
    return Change(grown, len(upper.sets))


def again(sample: Sample, overall: Floats, change: Change) -> Change:
    """The same change at other compositions (n,) or (B, n); see `holds` for whether it happens there."""
    rows = 1 if overall.ndim == 1 else len(overall)
    start = change.states
    if len(start.mu) != rows:
        start = start.take(np.zeros(rows, dtype=np.int64))
    return Change(crossing(sample.system, overall, start, change.zero), change.zero)


def holds(sample: Sample, change: Change) -> Flags:
    """Where (B,) a change is proven: converged, no negative amount, nothing else under the plane."""
    states = change.states
    good: Flags = states.converged & (states.amounts.min(axis=1) >= LEAST_AMOUNT)
    rows = np.flatnonzero(good)
    if rows.size:
        good[rows] = deepest(sample, states.take(rows)).height >= -TOUCHING
    return good


def _newest(lower: States, upper: States, number: int) -> int:
    """Which set of `lower` with this number has no fellow in `upper`: the one farthest from any."""
    mine = [k for k, n in enumerate(lower.sets) if n == number]
    theirs = [k for k, n in enumerate(upper.sets) if n == number]
    if not theirs or len(mine) == 1:
        return mine[0]

    def apart(k: int) -> float:
        x = np.exp(lower.logs[k][0])
        return min(float(np.max(np.abs(x - np.exp(upper.logs[j][0])))) for j in theirs)

    return max(mine, key=apart)
