"""Phases at a point, as answered."""

import numpy as np

from diagrams.errors import OutsideData, UnknownDiagram
from diagrams.files.catalog import catalog
from diagrams.questions.lever import Equilibrium, PhaseAmount
from diagrams.questions.locate_many import locate_many
from diagrams.questions.melter import PrintedState
from service.process.placed import Placed, tabulated
from service.safety import safety_for
from service.schemas.equilibrium import (
    EquilibriaAnswer,
    EquilibriaQuestion,
    EquilibriumAnswer,
    Phase,
    State,
)
from service.schemas.source import polygon_source

_COUNTED = {2: "two", 3: "three", 4: "four", 5: "five"}


def equilibrium_of(subject: Placed, temperature_c: float) -> EquilibriumAnswer:
    """Phases, amounts and compositions; OutsideData names `temperature_c`."""
    found = state_at(subject, temperature_c)
    return EquilibriumAnswer(
        alloy=subject.shown,
        temperature_c=temperature_c,
        field=found.field,
        phases=[_phase(amount) for amount in found.phases],
        liquid_mass_fraction=found.liquid_mass_fraction,
        on_boundary=found.on_boundary,
        just_below=state_shown(found.below) if found.below is not None else None,
        coexisting=list(found.coexisting),
        note=_note(subject, found),
        source=subject.source,
        safety=safety_for(subject.elements, subject.process, temperature_c),
    )


def state_at(subject: Placed, temperature_c: float) -> Equilibrium | PrintedState:
    """The state at a temperature; OutsideData names `temperature_c`."""
    try:
        return subject.melter.equilibrium(temperature_c)
    except OutsideData as error:
        error.field = "temperature_c" if error.field == "temperatures_c" else error.field
        raise


def equilibria_of(question: EquilibriaQuestion) -> EquilibriaAnswer:
    """Columns of fields and liquid fractions; UnknownDiagram, or InvalidInput for unequal lengths."""
    try:
        diagram = catalog().get(question.diagram)
    except UnknownDiagram as error:
        error.field = "diagram"
        raise
    temperatures_c = np.array(question.temperature_c)
    found = locate_many(diagram, np.array(question.second_wt), temperatures_c)
    fractions = found.liquid_mass_fraction.astype(object)
    fractions[found.outside] = None
    inside = temperatures_c[~found.outside]
    return EquilibriaAnswer(
        field=found.fields,
        liquid_mass_fraction=fractions.tolist(),
        outside=found.outside.tolist(),
        source=polygon_source(diagram),
        safety=safety_for(diagram.elements, None, float(inside.max()) if inside.size else None),
    )


def _phase(amount: PhaseAmount) -> Phase:
    return Phase(
        name=amount.name,
        kind=amount.kind,
        mass_fraction=amount.mass_fraction,
        mole_fraction=amount.mole_fraction,
        composition_wt=amount.composition_wt,
        composition_at=amount.composition_at,
    )


def state_shown(found: Equilibrium | PrintedState) -> State:
    """Phases and amounts as answered."""
    return State(
        field=found.field,
        phases=[_phase(amount) for amount in found.phases],
        liquid_mass_fraction=found.liquid_mass_fraction,
    )


def _note(subject: Placed, found: Equilibrium | PrintedState) -> str | None:
    if found.coexisting:
        *others, last = found.coexisting
        return (
            f"At this temperature {_COUNTED.get(len(found.coexisting), 'several')} phases coexist: "
            f"{', '.join(others)} and {last}. Their amounts are not fixed while it lasts: heat turns the "
            "state given in just_below into the one answered, that just above."
        )
    filler = subject.alloy.filler
    if subject.melter.method != "standard table" or filler is None:
        return None
    return f"{tabulated(filler)} Which solids there are, and how much is liquid in between, is not known."
