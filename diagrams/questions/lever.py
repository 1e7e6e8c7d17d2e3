"""The lever rule: amounts of the phases at a point, by mass and by moles."""

from dataclasses import dataclass

from diagrams.diagram import Diagram, RegionKind
from diagrams.elements import MOLAR_MASS
from diagrams.questions.locate import Reading, locate
from diagrams.units import wt_to_at


@dataclass(frozen=True)
class PhaseAmount:
    """One phase: shares of mass and of atoms (0..1) and its composition in wt% and at%."""

    name: str
    kind: RegionKind
    mass_fraction: float
    mole_fraction: float
    composition_wt: dict[str, float]
    composition_at: dict[str, float]


@dataclass(frozen=True)
class Equilibrium:
    """Phases and amounts at a point; `below` is the state just below an invariant temperature."""

    field: str
    phases: tuple[PhaseAmount, ...]
    liquid_mass_fraction: float
    on_boundary: bool
    below: "Equilibrium | None" = None

    @property
    def coexisting(self) -> tuple[str, ...]:
        """Phases that coexist at an invariant temperature, liquid first; empty anywhere else.

        They are those just above and those just below: there, and only there, all of them can be present.
        """
        if self.below is None:
            return ()
        kinds = {phase.name: phase.kind for state in (self, self.below) for phase in state.phases}
        return tuple(sorted(kinds, key=lambda name: (kinds[name] != "liquid", name)))


def equilibrium(diagram: Diagram, second_wt: float, temperature_c: float) -> Equilibrium:
    """Phases, amounts and compositions at wt% of the second element and °C; OutsideData beyond the data."""
    return from_reading(diagram.elements, locate(diagram, second_wt, temperature_c))


def from_reading(elements: tuple[str, str], reading: Reading) -> Equilibrium:
    """Add mole fractions to a reading: atoms a gram of each phase, from its composition."""
    first, second = elements
    rows = []
    for share in reading.phases:
        wt = {first: 100.0 - share.second_wt, second: share.second_wt}
        rows.append((share, wt, atoms_per_gram(wt)))
    total = sum(share.mass_fraction * atoms for share, _, atoms in rows)
    phases = tuple(
        PhaseAmount(
            share.name, share.kind, share.mass_fraction, share.mass_fraction * atoms / total, wt, wt_to_at(wt)
        )
        for share, wt, atoms in rows
    )
    below = from_reading(elements, reading.below) if reading.below is not None else None
    return Equilibrium(reading.field, phases, reading.liquid_mass_fraction, reading.on_boundary, below)


def atoms_per_gram(composition_wt: dict[str, float]) -> float:
    """Moles of atoms in a gram of an alloy."""
    return sum(wt / (100.0 * MOLAR_MASS[element]) for element, wt in composition_wt.items())
