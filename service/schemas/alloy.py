"""An alloy on the wire: how it is named in a question, and how an answer says which one it used."""

from collections.abc import Mapping, Sequence
from typing import Annotated, Literal

from pydantic import Field

from diagrams.alloys import Alloy, alloy_from_at, alloy_from_designation, alloy_from_wt
from diagrams.errors import InvalidInput
from diagrams.questions.traces import MOST_TRACE_WT
from service.schemas.base import AnswerModel, StrictModel

Form = Literal["designation", "composition_wt", "composition_at"]
Amounts = tuple[tuple[str, float], ...]
FORMS: tuple[Form, ...] = ("designation", "composition_wt", "composition_at")
MOST_ELEMENTS = 30
TRACES = (
    "Elements of which the alloy holds less than this, mass percent, may be left out if no data cover them; "
    "the answer repeats which. Left out itself, every element counts."
)

Percents = Annotated[dict[str, float], Field(max_length=MOST_ELEMENTS)]


class AlloyAsked(StrictModel):
    """An alloy, named in exactly one of three ways: designation, mass percent, or atomic percent."""

    designation: Annotated[str, Field(min_length=1, max_length=100)] | None = Field(
        default=None,
        description="Designation in ISO 9453, J-STD-006, ISO 17672 or AWS A5.8, such as `Sn63Pb37`, `BAg-8` "
        "or `CuP 182`; case, spaces and hyphens do not matter.",
        examples=["Sn63Pb37"],
    )
    composition_wt: Percents | None = Field(
        default=None,
        description="Mass percent by element symbol, each 0 to 100, summing to 100 ± 0.1 (taken as 100).",
        examples=[{"Sn": 63, "Pb": 37}],
    )
    composition_at: Percents | None = Field(
        default=None,
        description="Atomic percent by element symbol, each 0 to 100, summing to 100 ± 0.1.",
        examples=[{"Sn": 73.9, "Pb": 26.1}],
    )
    tolerance_wt: Percents | None = Field(
        default=None,
        description="How far the real alloy may lie from the nominal: ± mass percent by element. Left out, a "
        "designation brings its standard's own limits, if the table holds them, and a composition none.",
        examples=[{"Sn": 0.5}],
    )
    leave_out_traces_below_wt: float | None = Field(
        default=None,
        gt=0,
        le=MOST_TRACE_WT,
        description=TRACES,
        examples=[0.1],
    )

    @property
    def form(self) -> Form:
        """The way in which the alloy is named; raises InvalidInput unless it is exactly one."""
        given = [form for form in FORMS if getattr(self, form) is not None]
        if len(given) == 1:
            return given[0]
        raise InvalidInput(
            f"The alloy is given {'as ' + ' and '.join(given) if given else 'in none of the possible ways'}.",
            field=given[1] if given else "",
            remedy="Give exactly one of designation, composition_wt and composition_at.",
        )

    @property
    def key(self) -> tuple[Form, str | Amounts, Amounts | None, float | None]:
        """The same as plain values that can be kept by; raises InvalidInput as `form` does."""
        form = self.form
        value = getattr(self, form)
        tolerance = self.tolerance_wt
        return (
            form,
            value if isinstance(value, str) else tuple(value.items()),
            None if tolerance is None else tuple(tolerance.items()),
            self.leave_out_traces_below_wt,
        )


def alloy_of(form: Form, value: str | Amounts, tolerance: Amounts | None) -> Alloy:
    """The alloy of a key; raises UnknownAlloy or InvalidComposition, whose fields are those of AlloyAsked."""
    limits = None if tolerance is None else dict(tolerance)
    if isinstance(value, str):
        return alloy_from_designation(value, limits)
    return (alloy_from_wt if form == "composition_wt" else alloy_from_at)(dict(value), limits)


class Limits(AnswerModel):
    """Lowest and highest mass percent of an element."""

    lowest: float = Field(description="Lowest mass percent allowed.")
    highest: float = Field(description="Highest mass percent allowed.")


class AlloyUsed(AnswerModel):
    """The alloy as the answer used it."""

    composition_wt: dict[str, float] = Field(description="Nominal mass percent, normalised to 100.")
    designation: str | None = Field(
        description="Name of the row of the filler table, if a designation was asked."
    )
    given_total_wt: float = Field(description="Sum of the percents as given, before normalisation.")
    limits_wt: dict[str, Limits] = Field(
        description="Lowest and highest mass percent the answer reckons with, by element; empty if none."
    )
    left_out_wt: dict[str, float] = Field(
        description="Trace elements that the question allowed to leave out and no data cover, mass percent; "
        "`composition_wt` is the rest, taken as 100. Empty if none."
    )
    notes: list[str] = Field(
        description="Where this is not quite the alloy asked for: an element that its standard requires and "
        "the printed nominal leaves out, a tolerance that was cut off or left aside. Empty if nothing."
    )


def limits_shown(limits_wt: Mapping[str, tuple[float, float]]) -> dict[str, Limits]:
    """Limits of composition as they are answered."""
    return {el: Limits(lowest=low, highest=high) for el, (low, high) in limits_wt.items()}


def alloy_shown(
    alloy: Alloy, left_out_wt: Mapping[str, float] | None = None, notes: Sequence[str] = ()
) -> AlloyUsed:
    """The alloy as an answer repeats it."""
    return AlloyUsed(
        composition_wt=dict(alloy.composition_wt),
        designation=alloy.designation,
        given_total_wt=alloy.given_total_wt,
        limits_wt=limits_shown(alloy.limits_wt),
        left_out_wt=dict(left_out_wt or {}),
        notes=list(notes),
    )
