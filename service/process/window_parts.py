"""What a bound is made of: named parts that add up to it, each with its reason."""

import math
from dataclasses import dataclass, replace

from service.schemas.uncertainty_words import WORST_CASE, Combination


@dataclass(frozen=True)
class Part:
    """A temperature, or what is added to one or taken off (then negative), °C."""

    name: str
    value_c: float
    reason: str


@dataclass(frozen=True)
class Term:
    """One bound on a reading: where it starts, what was asked for on top, and what is uncertain about it.

    `asked` are added as they are. `uncertain` are sizes, none negative: added for a lower bound, taken off
    for an upper one, all of them or as the root of the sum of their squares. An upper bound never exceeds
    `ceiling_c`, beyond which the sensor tells nothing.
    """

    name: str
    start: Part
    asked: tuple[Part, ...]
    uncertain: tuple[Part, ...]
    lower: bool
    combination: Combination = WORST_CASE
    ceiling_c: float = math.inf

    @property
    def parts(self) -> tuple[Part, ...]:
        """Added up in this order they give the bound to the last digit."""
        parts = (self.start, *self.asked, *self._counted())
        beyond_c = sum(part.value_c for part in parts) - self.ceiling_c
        if beyond_c <= 0.0:
            return parts
        reason = f"The class of the sensor ends lower: readings above {self.ceiling_c:.2f} °C tell nothing."
        return (*parts, Part("end of the sensor class", 0.0 - beyond_c, reason))

    def _counted(self) -> tuple[Part, ...]:
        """What is uncertain, as it is added or taken off."""
        sign = 1.0 if self.lower else -1.0
        if self.combination == WORST_CASE or len(self.uncertain) < 2:
            return tuple(replace(part, value_c=sign * part.value_c + 0.0) for part in self.uncertain)
        names = [part.name for part in self.uncertain]
        told = ", ".join(f"{part.name} {part.value_c:.4g} °C" for part in self.uncertain)
        together = Part(
            f"{', '.join(names[:-1])} and {names[-1]}, root-sum-square",
            sign * self.uncertain_c + 0.0,
            f"Root of the sum of the squares of {told}, taken to be independent of each other.",
        )
        return (together,)

    @property
    def uncertain_c(self) -> float:
        """What its uncertainties come to, °C."""
        sizes = [part.value_c for part in self.uncertain]
        return sum(sizes) if self.combination == WORST_CASE else math.hypot(*sizes)

    @property
    def value_c(self) -> float:
        """The bound, °C."""
        return sum(part.value_c for part in self.parts)

    @property
    def reason(self) -> str:
        """All of it in words: the temperature it starts from, what is added or taken off, the sum."""
        start, *more = self.parts
        changes = [f"{part.name} {abs(part.value_c):.4g} °C" for part in more if part.value_c]
        if not changes:
            return start.reason
        sign = "plus" if self.lower else "minus"
        listed = f"{', '.join(changes[:-1])} and {changes[-1]}" if len(changes) > 1 else changes[0]
        return f"{start.reason} {start.value_c:.2f} °C {sign} {listed}: {self.value_c:.2f} °C."

    def by(self, combination: Combination) -> "Term":
        """The same bound, its uncertainties combined so."""
        return replace(self, combination=combination)


def superheat(superheat_c: float) -> Part:
    """What the coldest joint has to get beyond the temperature of its target fraction."""
    reason = f"The coldest joint is to get {superheat_c:g} °C hotter than that, to wet and flow in time."
    return Part("superheat", superheat_c, reason if superheat_c else "No superheat was asked for.")


def margin(margin_c: float) -> Part:
    """The distance kept below a limit."""
    reason = f"{margin_c:g} °C of distance below it are to be kept."
    return Part("margin", 0.0 - margin_c, reason if margin_c else "No margin below it was asked for.")


def spread(spread_c: float) -> Part:
    """What the width of a window loses: coldest and hottest joint must be right at once."""
    reason = f"The hottest joint reads {spread_c:g} °C more than the coldest, and both must be right at once."
    return Part("spread", 0.0 - spread_c, reason if spread_c else "Coldest and hottest joint read the same.")
