"""One composition of a section over temperature, in a form that is carried on to its neighbours.

Every stretch has its states at the same relative heights, so that neighbours with the same sequence of
phases correspond state by state.
"""

from dataclasses import dataclass, replace
from functools import cached_property

import numpy as np

from diagrams.errors import NotConverged
from diagrams.gibbs import Floats
from diagrams.many.column import Column, column
from diagrams.many.newton import States, solve
from diagrams.many.stretch import Stretch, liquid_fraction
from diagrams.sections import section
from diagrams.sections.line import Line
from diagrams.units import celsius_to_kelvin, kelvin_to_celsius

THIN_K = 0.01
HEIGHTS = np.array(section.HEIGHTS)
Sequence = tuple[tuple[int, ...], ...]


@dataclass(frozen=True, eq=False)
class Part:
    """A stretch of one set of phases, its states at HEIGHTS between its ends."""

    sets: tuple[int, ...]
    names: tuple[str, ...]
    states: States
    liquid: Floats


@dataclass(frozen=True, eq=False)
class Upright:
    """The column at `to_share` mass percent; parts upwards, changes of phases between them (°C)."""

    to_share: float
    parts: tuple[Part, ...]
    low_c: float
    high_c: float

    @cached_property
    def sequence(self) -> Sequence:
        """Sorted phase numbers of the parts, upwards."""
        return tuple(part.sets for part in self.parts)

    @cached_property
    def changes_c(self) -> tuple[float, ...]:
        """Temperatures between the parts."""
        return tuple(kelvin_to_celsius(float(part.states.temperatures_k[0])) for part in self.parts[1:])


def upright(line: Line, to_share: float) -> Upright:
    """The column at a composition from nothing; NotConverged where it cannot be proven down to the bottom."""
    overall = line.overall(np.array([to_share]))[0]
    low, high = line.temperature_range_c
    found = column(line.sample, overall, celsius_to_kelvin(low), celsius_to_kelvin(high))
    if not found.complete:
        lowest = kelvin_to_celsius(found.stretches[0].low_k)
        raise NotConverged(f"at {to_share:g} % no set of solids can be proven below {lowest:.0f} °C")
    parts = [_part(line, found, stretch) for stretch in found.stretches]
    return Upright(to_share, tuple(part for part in parts if part is not None), low, high)


def _part(line: Line, found: Column, stretch: Stretch) -> Part | None:
    """A stretch as a part; None for one too thin to be solved for anew: changes so near are one."""
    t = stretch.low_k + (stretch.high_k - stretch.low_k) * HEIGHTS
    t[-1] = stretch.high_k
    known = stretch.states.temperatures_k
    nearest = np.argmin(np.abs(known[:, None] - t), axis=0)
    start = in_order(stretch.states.take(nearest))
    states = solve(line.sample.system, found.overall, replace(start, temperatures_k=t))
    if not states.converged.all():
        if stretch.high_k - stretch.low_k < THIN_K:
            return None
        raise NotConverged(f"states between {stretch.low_k:.2f} and {stretch.high_k:.2f} K do not join")
    return Part(tuple(sorted(states.sets)), stretch.names, states, liquid_fraction(line.sample, states))


def in_order(states: States) -> States:
    """The sets in one order whatever the way to them: by number, twins by their first element."""

    def rank(k: int) -> tuple[int, float]:
        log = states.logs[k]
        return states.sets[k], float(log[0, 0]) if log.size else 0.0

    order = sorted(range(len(states.sets)), key=rank)
    return replace(
        states,
        sets=tuple(states.sets[k] for k in order),
        logs=tuple(states.logs[k] for k in order),
        amounts=states.amounts[:, order],
    )
