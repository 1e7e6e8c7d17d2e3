"""The table of standard fillers on the wire."""

from functools import lru_cache
from typing import Literal

from pydantic import BaseModel, ConfigDict, Field

from diagrams.fillers import Filler
from service.schemas.alloy import Limits, limits_shown
from service.schemas.base import Answer, AnswerModel
from service.schemas.source import Reference, reference_shown

FillerClass = Literal["solder", "braze"]
Standard = Literal["ISO 9453", "J-STD-006", "ISO 17672", "AWS A5.8"]


class FillersWanted(BaseModel):
    """Conditions on fillers, as they stand in an address line; what is left out sets none."""

    model_config = ConfigDict(extra="forbid", allow_inf_nan=False, frozen=True)

    standard: Standard | None = Field(default=None, description="Listed in this standard.")
    class_: FillerClass | None = Field(default=None, alias="class", description="`solder` or `braze`.")
    contains: str | None = Field(
        default=None,
        min_length=1,
        max_length=100,
        description="Element symbols divided by commas: the nominal composition holds all of them.",
        examples=["Ag,Cu"],
    )
    without: str | None = Field(
        default=None,
        min_length=1,
        max_length=100,
        description="Element symbols divided by commas: the filler holds none and its standard allows none.",
        examples=["Pb,Cd"],
    )
    lead_free: bool | None = Field(default=None, description="`true`: without lead; `false`: with lead.")
    cadmium_free: bool | None = Field(
        default=None, description="`true`: without cadmium; `false`: with cadmium."
    )
    solidus_min_c: float | None = Field(
        default=None, description="Printed solidus not below this, °C: for a joint that must stay solid."
    )
    liquidus_min_c: float | None = Field(default=None, description="Printed liquidus not below this, °C.")
    liquidus_max_c: float | None = Field(
        default=None, description="Printed liquidus not above this, °C: for a joint that must melt."
    )
    brazed_at_c: float | None = Field(
        default=None, description="A temperature, °C, within the brazing range that the table gives it."
    )
    brazing_min_c: float | None = Field(
        default=None,
        description="Brazing range not beginning below this, °C; without one a filler is left out.",
    )
    brazing_max_c: float | None = Field(
        default=None, description="Brazing range not ending above this, °C; without one a filler is left out."
    )
    covered: bool | None = Field(
        default=None,
        description="`true`: its melting is computed from stored data; `false`: the temperatures that its "
        "standard prints are all there is.",
    )
    search: str | None = Field(
        default=None,
        min_length=1,
        max_length=100,
        description="Part of a name or designation (case, spaces and hyphens do not matter) or of a note.",
        examples=["CuP"],
    )


class BrazingRange(AnswerModel):
    """Temperatures between which the standard sees the filler brazed."""

    lowest: float = Field(description="°C; may lie below the liquidus.")
    highest: float = Field(description="°C.")


class FillerShown(AnswerModel):
    """One standard filler."""

    name: str = Field(description="Designation shown.", examples=["Sn63Pb37"])
    also_named: str | None = Field(description="Name by composition, if the designation is none.")
    class_: FillerClass = Field(serialization_alias="class")
    designations: dict[str, str] = Field(description="Designation in each standard that lists it.")
    composition_wt: dict[str, float] = Field(description="Nominal mass percent as printed.")
    limits_wt: dict[str, Limits] = Field(
        description="Limits of the standard, mass percent; empty if none held."
    )
    remainder: str | None = Field(description="Element that takes the rest, if the standard names one.")
    limits_source: str
    solidus_c: float = Field(description="Printed solidus, °C.")
    liquidus_c: float = Field(description="Printed liquidus, °C.")
    brazing_range_c: BrazingRange | None = Field(
        description="Null for solders and where the table holds none."
    )
    single_melting_value: bool = Field(
        description="Whether the standard prints one melting temperature only."
    )
    lead_bearing: bool
    cadmium_bearing: bool
    diagram: str | None = Field(
        description="Id of the diagram or system its melting is computed from; null: its printed solidus and "
        "liquidus are all there is, and answers give bounds."
    )
    reference: Reference
    notes: str


class FillersAnswer(Answer):
    """The fillers that meet all conditions asked for."""

    count: int = Field(description="How many there are.")
    fillers: list[FillerShown] = Field(description="Solders first, in the order of the table.")
    edition: str = Field(description="Edition of the stored filler table.")
    guidance: str = Field(description="What to know before relying on the table.")


class FillerAnswer(FillerShown, Answer):
    """One filler."""

    edition: str = Field(description="Edition of the stored filler table.")
    guidance: str = Field(description="What to know before relying on the table.")


@lru_cache(maxsize=512)
def filler_shown(filler: Filler, diagram: str | None) -> FillerShown:
    """A filler as answered; `diagram` is the id of the diagram that covers it."""
    brazing = filler.brazing_range_c
    return FillerShown(
        name=filler.name,
        also_named=filler.also_named,
        class_="braze" if filler.class_ == "braze" else "solder",
        designations=dict(filler.designations),
        composition_wt=dict(filler.composition_wt),
        limits_wt=limits_shown(filler.limits_wt),
        remainder=filler.remainder,
        limits_source=filler.limits_source,
        solidus_c=filler.solidus_c,
        liquidus_c=filler.liquidus_c,
        brazing_range_c=BrazingRange(lowest=brazing[0], highest=brazing[1]) if brazing else None,
        single_melting_value=filler.single_melting_value,
        lead_bearing=filler.lead_bearing,
        cadmium_bearing=filler.cadmium_bearing,
        diagram=diagram,
        reference=reference_shown(filler.reference),
        notes=filler.notes,
    )
