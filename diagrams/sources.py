"""Where a value comes from: one small word for it, used by everything that carries outside data."""

from dataclasses import dataclass

from diagrams.errors import DataFault

HOW = ("looked up", "from memory", "own fit", "calculated", "common practice", "invented")
CONFIDENCE = ("high", "medium", "low")


@dataclass(frozen=True, slots=True)
class Source:
    """The origin of a value.

    `text` names the work and its edition, `how` says how the value came here (one of `HOW`),
    `confidence` says how far to trust it (one of `CONFIDENCE`). Values “from memory” are for
    guidance, not for claims of conformity. Raises DataFault for an unknown word or an empty text.
    """

    text: str
    how: str
    confidence: str

    def __post_init__(self) -> None:
        """Refuse a source that says nothing."""
        if not self.text.strip():
            raise DataFault("A source needs a text.", field="source", remedy="Name the work and its edition.")
        if self.how not in HOW:
            raise DataFault(
                f"“{self.how}” is no known way to a value.",
                field="how",
                remedy="Use one of: " + ", ".join(HOW) + ".",
            )
        if self.confidence not in CONFIDENCE:
            raise DataFault(
                f"“{self.confidence}” is no known confidence.",
                field="confidence",
                remedy="Use one of: " + ", ".join(CONFIDENCE) + ".",
            )
