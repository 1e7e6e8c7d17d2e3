"""The melting of a filler that no data cover: bounds from the two temperatures its standard prints, no curve.

Below the printed solidus nothing is liquid, from the printed liquidus on all is; what lies between them the
table does not tell, and nothing is made up. It speaks of the nominal composition only.
"""

from collections.abc import Mapping, Sequence

from diagrams.alloys import Alloy
from diagrams.errors import OutsideData
from diagrams.fillers import FILLERS_EDITION, FILLERS_GUIDANCE, Filler
from diagrams.questions.lever import PhaseAmount
from diagrams.questions.melter import Melter, Method, PrintedState, Span
from diagrams.units import wt_to_at

TABLE = "fillers"
SOLID, PARTLY, LIQUID = "solid", "L + solid", "L"


class ByTable(Melter):
    """A filler of the table."""

    method: Method = "standard table"
    how_extremes = "the table prints temperatures of the nominal composition only"
    curve = None

    def __init__(self, alloy: Alloy, filler: Filler) -> None:
        self.alloy, self.filler = alloy, filler
        self.data_id, self.edition = TABLE, FILLERS_EDITION
        self.sources, self.notes, self.limits_wt = (filler.reference,), (FILLERS_GUIDANCE,), {}

    def equilibrium(self, temperature_c: float) -> PrintedState:
        """Which solids there are is unknown; all liquid has the composition of the alloy.

        Raises OutsideData below absolute zero.
        """
        (fraction,) = self.liquid_fractions((temperature_c,))
        on_boundary = temperature_c in (self.filler.solidus_c, self.filler.liquidus_c)
        if fraction != 1.0:
            return PrintedState(PARTLY if fraction is None else SOLID, (), fraction, on_boundary)
        wt = dict(self.alloy.composition_wt)
        liquid = PhaseAmount(LIQUID, "liquid", 1.0, 1.0, wt, wt_to_at(wt))
        return PrintedState(LIQUID, (liquid,), 1.0, on_boundary)

    def liquid_fractions(self, temperatures_c: Sequence[float]) -> list[float | None]:
        """0 below the printed solidus, 1 from the printed liquidus on, else None."""
        if any(temperature_c < -273.15 for temperature_c in temperatures_c):
            raise OutsideData(
                "There is nothing below absolute zero.",
                field="temperatures_c",
                remedy="Give temperatures from -273.15 °C up.",
            )
        low, high = self.filler.solidus_c, self.filler.liquidus_c
        return [1.0 if t >= high else 0.0 if t < low else None for t in temperatures_c]

    def liquid_up_to(self, temperature_c: float) -> float | None:
        """0 up to the printed solidus, 1 above the printed liquidus, else None."""
        if temperature_c <= self.filler.solidus_c:
            return 0.0
        return 1.0 if temperature_c > self.filler.liquidus_c else None

    def most_liquid_up_to(self, temperature_c: float) -> float | None:
        """1 above the printed liquidus; else None, for the tolerance may melt before the nominal does."""
        return 1.0 if temperature_c > self.filler.liquidus_c else None

    def needed(self, fraction: float) -> Span:
        """The printed liquidus: from there on any fraction is reached."""
        return Span(self.filler.liquidus_c, None, None, None, None, 1)

    def kept(self, fraction: float) -> Span:
        """The printed solidus: up to there any fraction is kept."""
        return Span(self.filler.solidus_c, None, None, None, None, 1)

    def jump(self, temperature_c: float, composition_wt: Mapping[str, float]) -> float:
        """All, where the table prints one temperature; else unknown, and reckoned as nothing."""
        return float(self.filler.solidus_c == self.filler.liquidus_c == temperature_c)

    def molten_at(self, temperature_c: float) -> bool | None:
        """Whether the printed liquidus is reached."""
        return temperature_c >= self.filler.liquidus_c
