"""How an alloy melts, whatever data speak of it: one face for polygons, minimisation and printed values."""

from abc import ABC, abstractmethod
from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from itertools import pairwise
from typing import Literal, Protocol

from diagrams.alloys import Alloy
from diagrams.questions.lever import Equilibrium, PhaseAmount
from diagrams.sources import Source

Method = Literal["polygon", "section", "minimisation", "standard table"]
SAME_C = 1e-9  # a reading and its tolerance, subtracted and added again, miss the temperature by less


class Curve(Protocol):
    """Liquid mass fraction (0..1) against temperature (°C) over the whole range of the data."""

    @property
    def points(self) -> tuple[tuple[float, float], ...]:
        """(°C, fraction) at every kink, upwards; a jump shows as two points at one temperature."""

    @property
    def solidus_c(self) -> float:
        """Temperature of the first liquid on heating; OutsideData beyond the data."""

    @property
    def liquidus_c(self) -> float:
        """Lowest temperature from which on all is liquid; OutsideData beyond the data."""

    def liquid_fraction(self, temperature_c: float) -> float:
        """Fraction at a temperature; at a jump the value just above; OutsideData beyond the data."""

    def first_exceeds(self, fraction: float) -> float:
        """Temperature up to which the fraction stays at or under `fraction`."""

    def stays_above(self, fraction: float) -> float:
        """Lowest temperature from which on the fraction is at least `fraction`."""


@dataclass(frozen=True)
class Span:
    """A temperature at the nominal composition and its extremes over the tolerance, °C.

    The compositions (wt%) at which the extremes lie stand beside them; None where the data know the nominal
    composition only. `tried` counts the compositions looked at.
    """

    nominal: float
    lowest: float | None
    highest: float | None
    lowest_at: Mapping[str, float] | None
    highest_at: Mapping[str, float] | None
    tried: int

    @property
    def safe_low(self) -> float:
        """The lowest known; the nominal where nothing else is."""
        return self.nominal if self.lowest is None else self.lowest

    @property
    def safe_high(self) -> float:
        """The highest known; the nominal where nothing else is."""
        return self.nominal if self.highest is None else self.highest


@dataclass(frozen=True)
class PrintedState:
    """What printed temperatures tell of a state: which solids there are is unknown.

    The liquid fraction is None between solidus and liquidus.
    """

    field: str
    phases: tuple[PhaseAmount, ...]
    liquid_mass_fraction: float | None
    on_boundary: bool
    below: None = None
    coexisting: tuple[str, ...] = ()


class Melter(ABC):
    """One alloy with the data that tell how it melts.

    `data_id` and `edition` name the data, `limits_wt` the tolerance reckoned with: lowest and highest wt% by
    element, empty without one. `how_extremes` says in words how extremes over the tolerance are found.
    """

    method: Method
    alloy: Alloy
    data_id: str
    edition: str
    sources: tuple[Source, ...]
    notes: tuple[str, ...]
    limits_wt: Mapping[str, tuple[float, float]]
    how_extremes: str

    @property
    def elements(self) -> tuple[str, ...]:
        """Elements the data are about."""
        return tuple(self.alloy.composition_wt)

    @property
    def effort(self) -> int:
        """How much work questions about this alloy take; 0 where answers are read off stored data."""
        return 0

    @property
    def range_c(self) -> tuple[float, float]:
        """Solidus and liquidus at the nominal composition; OutsideData beyond the data."""
        if self.curve is None:
            return self.kept(0.0).nominal, self.needed(1.0).nominal
        return self.curve.solidus_c, self.curve.liquidus_c

    def range_near(self, near_c: tuple[float, float]) -> tuple[float, float]:
        """As `range_c`, where a neighbour's solidus and liquidus may spare work."""
        return self.range_c

    @property
    @abstractmethod
    def curve(self) -> Curve | None:
        """The melting curve at the nominal composition; None where only bounds are known."""

    @abstractmethod
    def equilibrium(self, temperature_c: float) -> Equilibrium | PrintedState:
        """Phases and amounts at a temperature; OutsideData beyond the data."""

    @abstractmethod
    def liquid_fractions(self, temperatures_c: Sequence[float]) -> list[float | None]:
        """Liquid fraction at temperatures, None where it is unknown; OutsideData beyond the data."""

    @abstractmethod
    def liquid_up_to(self, temperature_c: float) -> float | None:
        """Liquid fraction on heating up to a temperature; at a jump that just below; None if unknown."""

    @abstractmethod
    def most_liquid_up_to(self, temperature_c: float) -> float | None:
        """The same, highest over the tolerance."""

    @abstractmethod
    def needed(self, fraction: float) -> Span:
        """From which temperature on at least this much is liquid (0 < fraction ≤ 1).

        Where only bounds are known, the temperature at which it is so for certain.
        """

    @abstractmethod
    def kept(self, fraction: float) -> Span:
        """Up to which temperature no more than this is liquid (0 ≤ fraction < 1).

        Where only bounds are known, the temperature up to which it is so for certain.
        """

    @abstractmethod
    def jump(self, temperature_c: float, composition_wt: Mapping[str, float]) -> float:
        """How much of an alloy in tolerance melts at once at a temperature, as a fraction of its mass."""

    @abstractmethod
    def molten_at(self, temperature_c: float) -> bool | None:
        """Whether all is liquid at a temperature; None beyond the data."""


def liquid_up_to(curve: Curve, temperature_c: float) -> float | None:
    """Liquid fraction on heating up to a temperature; at a jump that just below; None beyond the data."""
    points = curve.points
    if not points[0][0] <= temperature_c <= points[-1][0]:
        return None
    for (low_c, below), (high_c, _) in pairwise(points):
        if low_c == high_c and abs(temperature_c - low_c) <= SAME_C:
            return below
    return curve.liquid_fraction(temperature_c)


def jump_at(curve: Curve, temperature_c: float) -> float:
    """How much melts at once at a temperature."""
    below = liquid_up_to(curve, temperature_c)
    return 0.0 if below is None else curve.liquid_fraction(temperature_c) - below
