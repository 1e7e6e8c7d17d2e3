"""What a bound is made of: named parts that add up to it, each with its reason."""

from dataclasses import dataclass


@dataclass(frozen=True)
class Part:
    """A temperature, or what is added to one or taken off (then negative), °C."""

    name: str
    value_c: float
    reason: str


@dataclass(frozen=True)
class Term:
    """One bound on a reading; added up in their order, its parts give it to the last digit.

    After the first, which is a temperature, all parts add to it or all take off.
    """

    name: str
    parts: tuple[Part, ...]

    @property
    def value_c(self) -> float:
        """The bound, °C."""
        return sum(part.value_c for part in self.parts)

    @property
    def reason(self) -> str:
        """All of it in words: the temperature it starts from, what is added or taken off, the sum."""
        start, *more = self.parts
        changes = [f"{part.name} {abs(part.value_c):g} °C" for part in more if part.value_c]
        if not changes:
            return start.reason
        sign = "Plus" if self.value_c > start.value_c else "Minus"
        listed = f"{', '.join(changes[:-1])} and {changes[-1]}" if len(changes) > 1 else changes[0]
        return f"{start.reason} {sign} {listed}: {self.value_c:.2f} °C."


def superheat(superheat_c: float) -> Part:
    """What the coldest joint has to get beyond the temperature of its target fraction."""
    reason = f"The coldest joint is to get {superheat_c:g} °C hotter than that, to wet and flow in time."
    return Part("superheat", superheat_c, reason if superheat_c else "No superheat was asked for.")


def margin(margin_c: float) -> Part:
    """The distance kept below a limit."""
    reason = f"{margin_c:g} °C of distance below it are to be kept."
    return Part("margin", 0.0 - margin_c, reason if margin_c else "No margin below it was asked for.")


def raised_by_sensor(tolerance_c: float) -> Part:
    """What a lower bound on the true temperature gains as a bound on the reading."""
    reason = f"A reading may lie {tolerance_c:g} °C above the true temperature."
    return _sensor(tolerance_c, reason, tolerance_c)


def lowered_by_sensor(tolerance_c: float) -> Part:
    """What an upper bound on the true temperature loses as a bound on the reading."""
    reason = f"A reading may lie {tolerance_c:g} °C below the true temperature."
    return _sensor(0.0 - tolerance_c, reason, tolerance_c)


def spread(spread_c: float) -> Part:
    """What the width of a window loses: coldest and hottest joint must be right at once."""
    reason = f"The hottest joint reads {spread_c:g} °C more than the coldest, and both must be right at once."
    return Part("spread", 0.0 - spread_c, reason if spread_c else "Coldest and hottest joint read the same.")


def _sensor(value_c: float, reason: str, tolerance_c: float) -> Part:
    return Part(
        "sensor tolerance", value_c, reason if tolerance_c else "Readings are taken to be exactly right."
    )
