"""Temperatures with one set of phases: names, liquid fraction, and more points where it bends."""

from dataclasses import dataclass, replace

import numpy as np

from diagrams.elements import MOLAR_MASS
from diagrams.errors import NotConverged
from diagrams.gibbs import Floats
from diagrams.many.newton import States, solve
from diagrams.many.sample import Sample
from diagrams.many.system import Fixed

STRAIGHT = 1e-4  # liquid mass fraction: how far a straight line between two states may lie off
MOST_POINTS = 400


@dataclass(frozen=True, eq=False)
class Stretch:
    """Temperatures between two changes of phases; `states` stand upwards, both ends among them."""

    sets: tuple[int, ...]
    names: tuple[str, ...]
    states: States
    liquid: Floats

    @property
    def low_k(self) -> float:
        """Where it begins."""
        return float(self.states.temperatures_k[0])

    @property
    def high_k(self) -> float:
        """Where it ends."""
        return float(self.states.temperatures_k[-1])


def stacked(rows: list[States]) -> States:
    """States of the same phases as one, in the order given."""
    first = rows[0]
    return States(
        first.sets,
        np.concatenate([r.temperatures_k for r in rows]),
        np.vstack([r.mu for r in rows]),
        tuple(np.vstack([r.logs[k] for r in rows]) for k in range(len(first.sets))),
        np.vstack([r.amounts for r in rows]),
        np.concatenate([r.converged for r in rows]),
    )


def smoothed(sample: Sample, overall: Floats, stretch: Stretch) -> Stretch:
    """With so many more states that straight lines of liquid fraction between them are true to STRAIGHT.

    Raises NotConverged where a state between two proven ones is not found.
    """
    bends = (stretch.liquid > 0.0) & (stretch.liquid < 1.0)
    if len(stretch.liquid) < 2 or not bends.any():
        return stretch
    states, liquid = stretch.states, stretch.liquid
    doubtful = np.ones(len(liquid) - 1, dtype=np.bool_)
    while doubtful.any() and len(liquid) < MOST_POINTS:
        left = np.flatnonzero(doubtful)
        t = 0.5 * (states.temperatures_k[left] + states.temperatures_k[left + 1])
        middle = solve(sample.system, overall, replace(states.take(left), temperatures_k=t))
        if not middle.converged.all():
            raise NotConverged(f"a state between two proven ones near {t[~middle.converged][0]:.3f} K")
        found = liquid_fraction(sample, middle)
        off = np.abs(found - 0.5 * (liquid[left] + liquid[left + 1])) > STRAIGHT
        order = np.argsort(np.concatenate([states.temperatures_k, t]), kind="stable")
        states = stacked([states, middle]).take(order)
        liquid = np.concatenate([liquid, found])[order]
        again = np.zeros(len(liquid), dtype=np.bool_)
        again[np.isin(order, len(order) - len(t) + np.flatnonzero(off))] = True
        doubtful = again[:-1] | again[1:]
    return Stretch(stretch.sets, stretch.names, states, liquid)


def liquid_fraction(sample: Sample, states: States) -> Floats:
    """Liquid share of the mass (B,)."""
    system = sample.system
    molar = np.array([MOLAR_MASS[el] for el in system.elements])
    liquid, whole = np.zeros(len(states.mu)), np.zeros(len(states.mu))
    for k, number in enumerate(states.sets):
        mass = np.maximum(states.amounts[:, k], 0.0) * (states.composition(system, k) @ molar)
        whole += mass
        if system.phase(number).kind == "liquid":
            liquid += mass
    found: Floats = liquid / whole
    return found


def stretch_of(sample: Sample, states: States) -> Stretch:
    """A stretch with its phases' names, as they are in its middle."""
    return Stretch(
        tuple(sorted(states.sets)),
        names_of(sample, states, len(states.mu) // 2),
        states,
        liquid_fraction(sample, states),
    )


def names_of(sample: Sample, states: States, row: int) -> tuple[str, ...]:
    """Names of the phases of one state, the liquid first."""
    system = sample.system
    found = []
    for k, number in enumerate(states.sets):
        phase = system.phase(number)
        if isinstance(phase, Fixed):
            name = phase.name
        else:
            x = states.composition(system, k)[row]
            shares = dict(zip(system.elements, (x / x.sum()).tolist(), strict=True))
            name = phase.naming.name(shares, states.sets.count(number) == 1)
        found.append((phase.kind != "liquid", name))
    return tuple(name for _, name in sorted(found))
