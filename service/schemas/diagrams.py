"""The stored phase diagrams on the wire."""

from functools import lru_cache
from typing import Literal

from pydantic import Field
from shapely.geometry.polygon import orient

from diagrams.borders import Strip
from diagrams.diagram import Diagram, Region
from diagrams.questions.locate import borders_of
from service.safety import safety_for
from service.schemas.base import Answer, AnswerModel
from service.schemas.source import Reference, reference_shown


class DiagramSummary(AnswerModel):
    """What a stored diagram covers, and where it comes from."""

    id: str = Field(description="Element symbols in alphabetical order, lower case.", examples=["pb-sn"])
    elements: list[str] = Field(description="The two elements; compositions count the second one.")
    kind: Literal["parameters", "points"] = Field(
        description="`parameters`: computed from an assessment of Gibbs energies; `points`: drawn through "
        "published points."
    )
    temperature_range_c: list[float] = Field(description="Lowest and highest temperature of the data, °C.")
    composition_range_wt: list[float] = Field(
        description="Lowest and highest mass percent of the second element that the data cover."
    )
    edition: str = Field(description="Edition of the stored diagram; it changes when the answers move.")
    sources: list[Reference]
    notes: list[str] = Field(description="Known weak spots.")


class Geometry(AnswerModel):
    """A polygon after GeoJSON, whose axes here are mass percent of the second element and °C."""

    type: Literal["Polygon"] = "Polygon"
    coordinates: list[list[list[float]]] = Field(
        description="Rings of [mass percent of the second element, °C]; the outer one first, anticlockwise, "
        "its first point repeated at the end. Neighbouring fields share their points exactly."
    )


class RegionShown(AnswerModel):
    """One field of the diagram."""

    field: str = Field(description="Name of the field, liquid first.", examples=["L + (Pb)"])
    phases: list[str] = Field(description="Its phases, that with less of the second element first.")
    kinds: list[Literal["liquid", "solid"]] = Field(description="Of each phase, in the same order.")
    geometry: Geometry
    tie_ends_beyond: dict[str, list[list[float]]] = Field(
        description="Where the edge of the stored range cuts tie lines off: the true border of that phase, "
        "as points [mass percent of the second element, °C], upwards. Empty where nothing is cut."
    )


class InvariantShown(AnswerModel):
    """A temperature at which the phases change all at once."""

    kind: str = Field(examples=["eutectic"])
    temperature_c: float
    reaction: str = Field(description="What happens on cooling.", examples=["L -> (Pb) + (Sn)"])
    compositions_wt: dict[str, float] = Field(
        description="Mass percent of the second element in each phase that takes part."
    )


class CompoundShown(AnswerModel):
    """A phase of fixed composition: a line in the diagram, without a field of its own."""

    name: str
    second_wt: float = Field(description="Mass percent of the second element.")
    from_c: float = Field(description="It exists from here, °C,")
    to_c: float = Field(description="up to here, °C.")


class DiagramsAnswer(Answer):
    """All stored diagrams."""

    diagrams: list[DiagramSummary]


class DiagramAnswer(DiagramSummary, Answer):
    """One stored diagram in full."""

    regions: list[RegionShown] = Field(description="Fields of one or two phases; they tile the whole range.")
    invariants: list[InvariantShown]
    compounds: list[CompoundShown]


def summary_shown(diagram: Diagram) -> DiagramSummary:
    """What a diagram covers, as answered."""
    return DiagramSummary(
        id=diagram.id,
        elements=list(diagram.elements),
        kind=diagram.kind,
        temperature_range_c=list(diagram.temperature_range_c),
        composition_range_wt=list(diagram.composition_range_wt),
        edition=diagram.edition,
        sources=[reference_shown(source) for source in diagram.sources],
        notes=list(diagram.notes),
    )


@lru_cache(maxsize=64)
def diagram_shown(diagram: Diagram) -> DiagramAnswer:
    """A diagram in full, as answered; made once."""
    strips = {strip.region: strip for strip in borders_of(diagram).strips}
    return DiagramAnswer(
        **dict(summary_shown(diagram)),
        regions=[_region(region, strips.get(region)) for region in diagram.regions],
        invariants=[
            InvariantShown(
                kind=invariant.kind,
                temperature_c=invariant.temperature_c,
                reaction=invariant.reaction,
                compositions_wt=dict(invariant.compositions_wt),
            )
            for invariant in diagram.invariants
        ],
        compounds=[
            CompoundShown(name=line.name, second_wt=line.second_wt, from_c=line.from_c, to_c=line.to_c)
            for line in diagram.compounds
        ],
        safety=safety_for(diagram.elements),
    )


def _region(region: Region, strip: Strip | None) -> RegionShown:
    ring = orient(region.polygon).exterior.coords
    ends = {}
    if strip is not None:
        sides = ((strip.left, strip.edge_left), (strip.right, strip.edge_right))
        for phase, (end, edge) in zip(region.phases, sides, strict=True):
            if end is not edge:
                ends[phase] = [list(point) for point in zip(end.x, end.t, strict=True)]
    return RegionShown(
        field=region.name,
        phases=list(region.phases),
        kinds=list(region.kinds),
        geometry=Geometry(coordinates=[[list(point) for point in ring]]),
        tie_ends_beyond=ends,
    )
