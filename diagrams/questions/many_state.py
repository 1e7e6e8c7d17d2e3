"""The state of an alloy of many elements at a temperature, by minimisation, as the lever rule tells it."""

from collections.abc import Mapping
from dataclasses import dataclass

import numpy as np

from diagrams.elements import MOLAR_MASS
from diagrams.errors import OutsideData
from diagrams.many.equilibrium import stable
from diagrams.many.newton import States
from diagrams.many.system import Fixed
from diagrams.questions.lever import Equilibrium, PhaseAmount
from diagrams.questions.many_place import ManyPlace
from diagrams.tolerances import ON_INVARIANT_C
from diagrams.units import celsius_to_kelvin, wt_to_at

JUMP = 0.01  # mass fraction of a phase that changes at once at an invariant


@dataclass(frozen=True, eq=False)
class State:
    """A proven equilibrium: temperature in °C, the set of phases, liquid mass fraction."""

    temperature_c: float
    states: States
    key: tuple[int, ...]
    liquid: float


class StateFinder:
    """Finds the states of one composition (wt%), each starting from a neighbour if one is given.

    `overall` are its mole fractions (n,), in the order of the place's elements.
    """

    def __init__(self, place: ManyPlace, composition_wt: Mapping[str, float]) -> None:
        self.place = place
        self.elements = place.elements
        at = wt_to_at(dict(composition_wt))
        self.overall = np.array([at[el] / 100.0 for el in self.elements])
        self._molar = np.array([MOLAR_MASS[el] for el in self.elements])

    def at(self, temperature_c: float, near: State | None = None) -> State:
        """The state at a temperature; OutsideData beyond the range served, NotConverged if none is proven."""
        low, high = self.place.temperature_range_c
        if not low <= temperature_c <= high:
            raise OutsideData(
                f"{temperature_c:g} °C lies outside the data of {self.place.file.id} for these elements, "
                f"which reach from {low:g} to {high:g} °C.",
                field="temperature_c",
                remedy=f"Ask between {low:g} and {high:g} °C.",
            )
        start = None if near is None else near.states
        found = stable(self.place.sample, self.overall, celsius_to_kelvin(temperature_c), start)
        system = self.place.sample.system
        solid = [system.phase(s).kind != "liquid" for s in found.sets]
        if all(solid) or not any(solid):
            liquid = float(not any(solid))
        else:
            masses = self._masses(found)
            liquid = float(sum(m for m, s in zip(masses, solid, strict=True) if not s) / sum(masses))
        return State(temperature_c, found, tuple(sorted(found.sets)), min(max(liquid, 0.0), 1.0))

    def equilibrium(self, temperature_c: float) -> Equilibrium:
        """Phases and amounts; where the set of phases changes within the tolerance, on a boundary."""
        here = self.at(temperature_c)
        low, high = self.place.temperature_range_c
        above = self.at(min(temperature_c + ON_INVARIANT_C, high), here)
        under = self.at(max(temperature_c - ON_INVARIANT_C, low), here)
        on = above.key != under.key
        if not on:
            return self._told(here, False)
        upper, lower = self._told(above, True), self._told(under, True)
        shares = [{p.name: p.mass_fraction for p in each.phases} for each in (upper, lower)]
        change = max(abs(shares[0].get(n, 0.0) - shares[1].get(n, 0.0)) for n in {*shares[0], *shares[1]})
        if change < JUMP:
            return self._told(here, True)
        return Equilibrium(upper.field, upper.phases, upper.liquid_mass_fraction, True, lower)

    def _masses(self, found: States) -> list[float]:
        system = self.place.sample.system
        return [
            max(float(found.amounts[0, k]), 0.0) * float(found.composition(system, k)[0] @ self._molar)
            for k in range(len(found.sets))
        ]

    def _told(self, state: State, on_boundary: bool) -> Equilibrium:
        system, found = self.place.sample.system, state.states
        masses, amounts = self._masses(found), np.maximum(found.amounts[0], 0.0)
        rows = []
        for k, number in enumerate(found.sets):
            phase = system.phase(number)
            x = found.composition(system, k)[0]
            shares = dict(zip(self.elements, (x / x.sum()).tolist(), strict=True))
            alone = found.sets.count(number) == 1
            name = phase.name if isinstance(phase, Fixed) else phase.naming.name(shares, alone)
            held = {el: share for el, share in shares.items() if share > 0.0}
            mass = sum(share * MOLAR_MASS[el] for el, share in held.items())
            rows.append(
                PhaseAmount(
                    name,
                    phase.kind,
                    masses[k] / sum(masses),
                    float(amounts[k] / amounts.sum()),
                    {el: 100.0 * share * MOLAR_MASS[el] / mass for el, share in held.items()},
                    {el: 100.0 * share for el, share in held.items()},
                )
            )
        rows.sort(key=lambda phase: (phase.kind != "liquid", phase.name))
        return Equilibrium(" + ".join(p.name for p in rows), tuple(rows), state.liquid, on_boundary)
