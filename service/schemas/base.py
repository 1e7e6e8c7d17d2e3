"""The two base models: what comes in is strict, what goes out carries safety."""

from collections.abc import Iterator
from contextlib import contextmanager
from typing import Annotated

from pydantic import BaseModel, ConfigDict, Field

from diagrams.errors import DiagramsError


class StrictModel(BaseModel):
    """Base of everything a request may hold.

    A number must be a finite number (no text, no true/false, no NaN), and unknown fields are refused.
    Strictness also refuses a JSON array where a tuple is declared: declare `list[...]`.
    Say “one of these fields” with a validator instead of a union, so that an error can name the field.
    """

    model_config = ConfigDict(strict=True, extra="forbid", allow_inf_nan=False, frozen=True)


class AnswerModel(BaseModel):
    """Base of everything inside an answer; NaN and infinities in an answer are a fault, not a null."""

    model_config = ConfigDict(extra="forbid", allow_inf_nan=False, frozen=True)


class SafetyNote(AnswerModel):
    """One caution about the work that was asked about."""

    topic: str = Field(description="What the caution is about, such as `lead` or `fume`.")
    text: str = Field(description="The caution itself.")


class RegulationPointer(AnswerModel):
    """Where the rules of a region are found; the text in force there decides."""

    region: str = Field(description="Region the rules hold in, such as `EU` or `US`.")
    pointer: str = Field(description="Where to read them.")


class Safety(AnswerModel):
    """Cautions that come with every answer. They replace no local rule and no licensed practice."""

    notes: list[SafetyNote]
    regulations: list[RegulationPointer]
    reminder: str


class Answer(AnswerModel):
    """Base of every JSON answer: what was asked for first, then the cautions."""

    safety: Safety

    @classmethod
    def __pydantic_init_subclass__(cls, **kwargs: object) -> None:
        """Move the inherited field to the end, where it does not stand in the way of the answer."""
        fields = cls.__pydantic_fields__
        fields["safety"] = fields.pop("safety")
        cls.model_rebuild(force=True)


Finite = Annotated[float, Field(allow_inf_nan=False)]
"""A finite number in an address line; bodies get this from StrictModel."""


@contextmanager
def within(path: str) -> Iterator[None]:
    """Prefix the field of a DiagramsError with its place in the request: `with within("parts.2.alloy")`."""
    try:
        yield
    except DiagramsError as error:
        error.field = f"{path}.{error.field}" if error.field else path
        raise
