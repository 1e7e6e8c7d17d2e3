"""The data an answer rests on, as every answer names them."""

from pydantic import Field

from diagrams.diagram import Diagram
from diagrams.questions.melter import Melter, Method
from diagrams.sources import Source
from service.schemas.base import AnswerModel


class SourceUsed(AnswerModel):
    """Which stored data gave the answer; quote it together with the answer."""

    diagram: str = Field(
        description="Id of the diagram (`pb-sn`) or of the system of many elements; `fillers` is the filler "
        "table.",
        examples=["pb-sn"],
    )
    edition: str = Field(description="Edition of those data.")
    method: Method = Field(
        description="`polygon`: read from the stored borders of the diagram's fields by the lever rule; "
        "`section`: the same on a stored section between two alloys; `minimisation`: the state of lowest "
        "Gibbs energy, computed for this question; `standard table`: no data cover these elements, and the "
        "temperatures printed by the filler's standard stand in: bounds only, for guidance."
    )


class Reference(AnswerModel):
    """Where a stored value comes from and how far to trust it."""

    text: str = Field(description="The work and its edition.")
    how: str = Field(
        description="How the value came here: looked up, from memory, own fit, calculated, common practice. "
        "Values from memory are for guidance, not for claims of conformity."
    )
    confidence: str = Field(description="high, medium or low.")


def polygon_source(diagram: Diagram) -> SourceUsed:
    """The source of an answer read from the stored polygons."""
    return SourceUsed(diagram=diagram.id, edition=diagram.edition, method="polygon")


def source_of(melter: Melter) -> SourceUsed:
    """The source of an answer about one alloy."""
    return SourceUsed(diagram=melter.data_id, edition=melter.edition, method=melter.method)


def reference_shown(source: Source) -> Reference:
    """A stored source as it is answered."""
    return Reference(text=source.text, how=source.how, confidence=source.confidence)
