"""A range with one end, both or none."""

from dataclasses import dataclass


@dataclass(frozen=True)
class Bounds:
    """At least `low`, at most `high`; None sets no bound."""

    low: float | None = None
    high: float | None = None


FREE = Bounds()
"""No bound at all."""
