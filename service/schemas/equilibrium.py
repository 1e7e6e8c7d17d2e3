"""Phases at a temperature: one point, and columns of points."""

from typing import Annotated, Literal

from pydantic import Field

from service.schemas.alloy import AlloyAsked, AlloyUsed
from service.schemas.base import Answer, AnswerModel, StrictModel
from service.schemas.source import SourceUsed

MOST_POINTS = 200_000

# Reading stops at the first value that is none: so many errors would take longer than the answer.
Column = Annotated[list[float], Field(min_length=1, max_length=MOST_POINTS, fail_fast=True)]


class EquilibriumQuestion(StrictModel):
    """An alloy and a temperature."""

    alloy: AlloyAsked
    temperature_c: float = Field(
        description="Temperature, °C. It must lie in the `temperature_range_c` of the data."
    )


class Phase(AnswerModel):
    """One phase and how much there is of it."""

    name: str = Field(description="`L` is liquid, `(Pb)` solid lead with what dissolves in it.")
    kind: Literal["liquid", "solid"]
    mass_fraction: float = Field(description="Share of the alloy's mass, 0 to 1.")
    mole_fraction: float = Field(description="Share of the alloy's atoms, 0 to 1.")
    composition_wt: dict[str, float] = Field(description="What the phase consists of, mass percent.")
    composition_at: dict[str, float] = Field(description="The same in atomic percent.")


class State(AnswerModel):
    """Phases and amounts."""

    field: str = Field(
        description="Names of the phases, liquid first; `solid` where the data do not tell which.",
        examples=["L + (Pb)"],
    )
    phases: list[Phase] = Field(description="The phases present; their mass fractions sum to 1.")
    liquid_mass_fraction: float | None = Field(
        description="Share of the mass that is liquid, 0 to 1; null where unknown."
    )


class EquilibriumAnswer(Answer):
    """Which phases an alloy consists of at a temperature, at equilibrium: held until nothing changes."""

    alloy: AlloyUsed
    temperature_c: float
    field: str = Field(
        description="Names of the phases, liquid first; `solid` where the data do not tell which.",
        examples=["L + (Pb)"],
    )
    phases: list[Phase] = Field(
        description="The phases present. Mass fractions sum to 1; amounts times compositions give the alloy. "
        "By `standard table` only the liquid above the liquidus is known; otherwise the list is empty."
    )
    liquid_mass_fraction: float | None = Field(
        description="Share of the mass that is liquid, 0 to 1; null by `standard table` between the printed "
        "solidus and liquidus, where it is unknown."
    )
    on_boundary: bool = Field(
        description="Whether the point counts as lying on a border of the field: within 0.0001 mass percent "
        "of one, or within 0.005 °C of a horizontal one. On a border the single phase beside it is answered; "
        "on a horizontal one the state just above."
    )
    just_below: State | None = Field(
        description="At an invariant temperature (a eutectic, a melting point), where the phases change all "
        "at once: the state just below; what is answered above is the state just above. Otherwise null."
    )
    coexisting: list[str] = Field(
        description="At an invariant temperature the phases that coexist there, liquid first: three at a "
        "eutectic of two elements. Their amounts are not fixed then, and go from those just below to those "
        "just above as heat is taken in. Otherwise empty.",
        examples=[["L", "(Pb)", "(Sn)"]],
    )
    note: str | None = Field(
        description="What to mind: phases that coexist, or that only printed temperatures are known."
    )
    source: SourceUsed


class EquilibriaQuestion(StrictModel):
    """Columns of points on one diagram."""

    diagram: str = Field(min_length=1, max_length=40, description="Id of the diagram.", examples=["pb-sn"])
    second_wt: Column = Field(description="Mass percent of the diagram's second element, one value a point.")
    temperature_c: Column = Field(description="Temperature, °C, one value a point; as many as in second_wt.")


class EquilibriaAnswer(Answer):
    """Columns as long as those asked; the boundary rule is that of a single point."""

    field: list[str] = Field(description="Name of the field; `outside` where no data reach.")
    liquid_mass_fraction: list[float | None] = Field(
        description="Share of the mass that is liquid, 0 to 1; null where no data reach."
    )
    outside: list[bool] = Field(description="True where the point lies outside the diagram's ranges.")
    source: SourceUsed
