"""The stable phases of an alloy at a temperature: Newton's method on a set of phases, sets changed as needed.

A phase with a negative amount leaves, the phase lying lowest under the common tangent plane enters, until
neither is left. The start is a neighbouring equilibrium or the global search (search.py).
"""

import numpy as np

from diagrams.errors import NotConverged
from diagrams.gibbs import Floats
from diagrams.many.newton import States, solve
from diagrams.many.sample import Sample
from diagrams.many.search import search
from diagrams.many.system import Mixed
from diagrams.many.tangent import deepest

UNDER_TANGENT = 1e-8  # of RT: how far a phase may lie under the plane before it must enter
LEAST_AMOUNT = -1e-10  # moles: how negative an amount may come out before the phase must leave
SAME = 1e-5  # mole fraction: two sets of one solution this near are one
MOST_CHANGES = 40


def stable(sample: Sample, overall: Floats, temperature_k: float, near: States | None = None) -> States:
    """The stable state (B = 1) for mole fractions `overall` (n,), all > 0, at a temperature in kelvin.

    `near` is a neighbouring state to start from. Raises NotConverged if no set of phases can be proven.
    """
    if near is not None:
        try:
            return settle(sample, overall, near.moved(np.array([temperature_k])))
        except NotConverged:
            pass  # the global search does not depend on the neighbour
    return settle(sample, overall, search(sample, overall, temperature_k))


def settle(sample: Sample, overall: Floats, start: States) -> States:
    """The stable state at the temperature of a start, changing its set of phases as needed."""
    system = sample.system
    where = f"at {start.temperatures_k[0]:.3f} K"
    for _ in range(MOST_CHANGES):
        if not start.sets:
            break
        if len(start.sets) > len(overall):
            start = without(start, int(np.argmin(start.amounts[0])))
            continue
        found = solve(system, overall, start)
        if not found.converged[0]:
            raise NotConverged(f"the phases {names(sample, start)} have no common tangent plane {where}")
        twin = _twin(found)
        if twin is not None:
            start = without(found, twin)
            continue
        least = int(np.argmin(found.amounts[0]))
        if found.amounts[0, least] < LEAST_AMOUNT:
            start = without(found, least)
            continue
        low = deepest(sample, found)
        if low.height[0] >= -UNDER_TANGENT:
            _check_windows(sample, found)
            return found
        start = entered(sample, found, int(low.phase[0]), low.logs[0])
    raise NotConverged(f"no lowest set of phases found {where}")


def without(states: States, k: int) -> States:
    """The states without set k."""
    keep = [i for i in range(len(states.sets)) if i != k]
    return States(
        tuple(states.sets[i] for i in keep),
        states.temperatures_k,
        states.mu,
        tuple(states.logs[i] for i in keep),
        states.amounts[:, keep],
        states.converged,
    )


def names(sample: Sample, states: States) -> str:
    """The models of the phases, for messages."""
    return " + ".join(sample.system.phase(s).model for s in states.sets)


def _twin(states: States) -> int | None:
    for i, one in enumerate(states.sets):
        for j in range(i):
            if states.sets[j] == one and (
                not states.logs[i].size
                or np.max(np.abs(np.exp(states.logs[i][0]) - np.exp(states.logs[j][0]))) < SAME
            ):
                return i
    return None


def entered(sample: Sample, states: States, number: int, log: Floats) -> States:
    """The state with a further phase; where that would be one too many, the one used up first leaves."""
    grown = States(
        (*states.sets, number),
        states.temperatures_k,
        states.mu,
        (*states.logs, log[None]),
        np.hstack([states.amounts, [[0.0]]]),
        states.converged,
    )
    n = states.mu.shape[1]
    if len(grown.sets) <= n:
        return grown
    system = sample.system
    x = np.stack([grown.composition(system, k)[0] for k in range(len(grown.sets))])
    weights = np.linalg.lstsq(x[:-1].T, x[-1], rcond=None)[0]
    amounts = np.maximum(states.amounts[0], 0.0)
    with np.errstate(divide="ignore", invalid="ignore"):
        ratios = np.where(weights > 1e-12, amounts / weights, np.inf)
    leaving = int(np.argmin(ratios))
    share = float(ratios[leaving])
    moved = np.concatenate([amounts - share * weights, [share]])[None]
    return without(
        States(grown.sets, grown.temperatures_k, grown.mu, grown.logs, moved, grown.converged), leaving
    )


def _check_windows(sample: Sample, states: States) -> None:
    for k, number in enumerate(states.sets):
        phase = sample.system.phase(number)
        if isinstance(phase, Mixed) and not phase.inside(np.exp(states.logs[k][0])):
            raise NotConverged(f"{phase.model} would be stable beyond the compositions it is described for")
