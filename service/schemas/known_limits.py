"""Stored upper limits on the wire."""

from typing import Literal

from pydantic import Field

from service.schemas.base import Answer, AnswerModel
from service.schemas.source import Reference


class KnownLimitShown(AnswerModel):
    """One stored upper limit."""

    key: str = Field(description="Give this as `known` in an upper limit of a window.")
    kind: Literal["base metal", "component", "flux"]
    subject: str = Field(description="What the limit is of.")
    limit_c: float = Field(
        description="The limit, °C: of a base metal its solidus, where it begins to melt; of a component the "
        "highest peak; of a flux the end of its working range."
    )
    note: str | None = Field(description="What to mind.")
    reference: Reference


class KnownLimitsAnswer(Answer):
    """All stored upper limits."""

    limits: list[KnownLimitShown]
    edition: str = Field(description="Edition of the table.")
    guidance: str = Field(description="What to know before relying on it.")
