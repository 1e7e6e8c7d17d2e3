"""What a liquid of some composition becomes at a temperature, whatever data tell of it."""

from dataclasses import dataclass
from typing import Protocol

import numpy as np

from diagrams.diagram import Diagram
from diagrams.elements import MOLAR_MASS
from diagrams.errors import NotCovered
from diagrams.gibbs import Floats
from diagrams.many.equilibrium import stable
from diagrams.many.newton import States, solve
from diagrams.many.sample import Sample
from diagrams.many.stretch import names_of
from diagrams.questions.by_minimisation import ByMinimisation
from diagrams.questions.by_polygon import ByPolygon
from diagrams.questions.lever import equilibrium
from diagrams.questions.melter import Melter
from diagrams.units import celsius_to_kelvin


@dataclass(frozen=True, eq=False)
class PhasePart:
    """A phase: share of the mass (0..1) and mass fractions by element (n,)."""

    name: str
    liquid: bool
    share: float
    w: Floats


class Freezing(Protocol):
    """Equilibria of any composition of an alloy's elements."""

    @property
    def elements(self) -> tuple[str, ...]:
        """In the order of the mass fractions."""

    @property
    def range_c(self) -> tuple[float, float]:
        """Temperatures that the data cover."""

    @property
    def step_c(self) -> float:
        """The longest step worth its cost."""

    def at(self, w: Floats, temperature_c: float) -> list[PhasePart]:
        """Phases of mass fractions `w` (n,) at a temperature in range; NotConverged if none is proven."""

    def near(self, w: Floats, temperature_c: float) -> list[PhasePart] | None:
        """The same for a composition close to the last one asked, its phases taken for granted.

        None where these do not hold it.
        """


class OnDiagram:
    """Read off a stored diagram."""

    step_c = 1.0

    def __init__(self, diagram: Diagram) -> None:
        self._diagram, self.elements, self.range_c = diagram, diagram.elements, diagram.temperature_range_c

    def at(self, w: Floats, temperature_c: float) -> list[PhasePart]:
        """By the lever rule."""
        found = equilibrium(self._diagram, 100.0 * float(w[1]), temperature_c)
        first, second = self.elements
        return [
            PhasePart(
                p.name,
                p.kind == "liquid",
                p.mass_fraction,
                np.array([p.composition_wt.get(first, 0.0), p.composition_wt.get(second, 0.0)]) / 100.0,
            )
            for p in found.phases
        ]

    def near(self, w: Floats, temperature_c: float) -> list[PhasePart] | None:
        """Read off as ever."""
        return self.at(w, temperature_c)


class ByEnergy:
    """By minimisation, each state starting from the one before."""

    step_c = 3.0

    def __init__(self, sample: Sample, range_c: tuple[float, float]) -> None:
        self._sample, self.range_c = sample, range_c
        self.elements = sample.system.elements
        self._molar = np.array([MOLAR_MASS[el] for el in self.elements])
        self._last: States | None = None

    def at(self, w: Floats, temperature_c: float) -> list[PhasePart]:
        """Proven by the tangent plane."""
        moles = w / self._molar
        found = stable(self._sample, moles / moles.sum(), celsius_to_kelvin(temperature_c), self._last)
        self._last = found
        return self._told(found)

    def near(self, w: Floats, temperature_c: float) -> list[PhasePart] | None:
        """By Newton's method alone."""
        if self._last is None:
            return None
        moles = w / self._molar
        start = self._last.moved(np.array([celsius_to_kelvin(temperature_c)]))
        found = solve(self._sample.system, moles / moles.sum(), start)
        if not found.converged[0] or found.amounts.min() < 0.0:
            return None
        return self._told(found)

    def _told(self, found: States) -> list[PhasePart]:
        parts = []
        for k, number in enumerate(found.sets):
            phase = self._sample.system.phase(number)
            mass = found.composition(self._sample.system, k)[0] * self._molar
            amount = max(float(found.amounts[0, k]), 0.0) * float(mass.sum())
            parts.append((number, phase.kind == "liquid", amount, mass / mass.sum()))
        names = self._named(found)
        whole = sum(amount for _, _, amount, _ in parts)
        return [
            PhasePart(name, liquid, amount / whole, shares)
            for name, (_, liquid, amount, shares) in zip(names, parts, strict=True)
        ]

    def _named(self, states: States) -> list[str]:
        """The names of the sets in their own order."""
        return [names_of(self._sample, _alone(states, k), 0)[0] for k in range(len(states.sets))]


def freezing_of(melter: Melter) -> Freezing:
    """The data for freezing an alloy; NotCovered where only printed values tell of it."""
    if isinstance(melter, ByPolygon):
        return OnDiagram(melter.place.diagram)
    if isinstance(melter, ByMinimisation):
        return ByEnergy(melter.place.sample, melter.place.temperature_range_c)
    raise NotCovered(
        f"How {melter.alloy.designation or 'this alloy'} freezes is not known: its standard prints two "
        "temperatures, and no data cover its elements together.",
        field="alloy",
        remedy="GET /v1/melting tells what its standard prints.",
    )


def _alone(states: States, k: int) -> States:
    return States(
        (states.sets[k],),
        states.temperatures_k,
        states.mu,
        (states.logs[k],),
        states.amounts[:, [k]],
        states.converged,
    )
