"""Sections of systems of many elements on the wire."""

from typing import Annotated, Literal

from pydantic import Field

from service.schemas.alloy import AlloyAsked
from service.schemas.base import Answer, AnswerModel, StrictModel
from service.schemas.diagrams import Geometry
from service.schemas.source import Reference, SourceUsed
from service.schemas.window import Temperature

Share = Annotated[float, Field(gt=0, le=100)]


class SectionQuestion(StrictModel):
    """A straight line between two alloys, or an alloy and a pure metal, against temperature."""

    from_alloy: AlloyAsked
    to_alloy: AlloyAsked
    to_share_max: Share = Field(
        default=100.0,
        description="How far along the line to go, mass percent of `to_alloy`; 5 for a solder that picks up "
        "at most 5 % of a metal.",
        examples=[5],
    )
    temperature_range_c: Annotated[list[Temperature], Field(min_length=2, max_length=2)] | None = Field(
        default=None,
        description="Lowest and highest temperature, °C; left out, all that the data cover.",
        examples=[[150, 300]],
    )


class SectionRegion(AnswerModel):
    """A field of the section: a set of phases."""

    field: str = Field(description="Such as `L + (Sn)`.")
    phases: list[str]
    geometry: Geometry


class LineShown(AnswerModel):
    """Lines as in GeoJSON: each a row of points, x = mass percent of `to_alloy`, y = °C."""

    type: Literal["MultiLineString"] = "MultiLineString"
    coordinates: list[list[list[float]]]


class LiquidContour(AnswerModel):
    """From these temperatures on, at least this share of the mass is liquid."""

    liquid_mass_fraction: float
    geometry: LineShown


class SectionLevel(AnswerModel):
    """A temperature at which more than one phase changes at once."""

    temperature_c: float
    under: str
    over: str
    from_share: float = Field(description="Where it begins to show, mass percent of `to_alloy`.")
    to_share: float


class SectionShown(AnswerModel):
    """A section in a list."""

    id: str = Field(description="The same line on the same edition of the data has the same id.")
    from_name: str
    to_name: str
    from_wt: dict[str, float]
    to_wt: dict[str, float]
    to_share_max: float
    temperature_range_c: list[float]
    source: SourceUsed


class SectionsAnswer(Answer):
    """The stored sections."""

    sections: list[SectionShown]


class SectionAnswer(Answer):
    """A section: its fields as polygons, lines of equal liquid share, levels."""

    id: str
    from_name: str
    to_name: str
    from_wt: dict[str, float]
    to_wt: dict[str, float]
    to_share_max: float
    temperature_range_c: list[float]
    regions: list[SectionRegion]
    liquid_contours: list[LiquidContour]
    levels: list[SectionLevel]
    compounds: dict[str, float] = Field(
        description="Compounds without width on the line, with their mass percent of `to_alloy`."
    )
    figure: str = Field(description="Address of its picture.")
    sources: list[Reference]
    notes: list[str]
    source: SourceUsed
