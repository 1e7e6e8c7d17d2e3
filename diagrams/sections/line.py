"""The straight line between two alloys: mass percent of the second, compositions on it, data served."""

from collections.abc import Mapping
from dataclasses import dataclass
from functools import cached_property

import numpy as np

from diagrams.elements import MOLAR_MASS
from diagrams.errors import InvalidInput, OutsideData
from diagrams.gibbs import Floats
from diagrams.many.sample import Sample
from diagrams.questions.many_place import ManyPlace, check_served, prepared

SAME_WT = 1e-9
INSIDE = 1e-5  # of the length: how far from an end without one of the elements its limit is taken
ON_LINE_WT = 1e-7


@dataclass(frozen=True, eq=False)
class Line:
    """Mixtures with 0 to `most` mass percent of an alloy `to_wt` in an alloy `from_wt`; T in °C."""

    from_wt: Mapping[str, float]
    to_wt: Mapping[str, float]
    most: float
    temperature_range_c: tuple[float, float]
    place: ManyPlace

    @property
    def elements(self) -> tuple[str, ...]:
        """All elements on the line, sorted."""
        return self.place.elements

    @cached_property
    def sample(self) -> Sample:
        """The prepared minimiser."""
        return self.place.sample

    @cached_property
    def _ends(self) -> tuple[Floats, Floats]:
        one, two = (
            np.array([alloy.get(el, 0.0) for el in self.elements]) for alloy in (self.from_wt, self.to_wt)
        )
        return one / one.sum(), two / two.sum()

    @cached_property
    def _molar(self) -> Floats:
        return np.array([MOLAR_MASS[el] for el in self.elements])

    def shares(self, to_share: Floats) -> Floats:
        """Mass fractions (B, n) at mass percents of the second alloy (B,)."""
        one, two = self._ends
        share = np.asarray(to_share, dtype=np.float64)[:, None] / 100.0
        found: Floats = (1.0 - share) * one + share * two
        return found

    def overall(self, to_share: Floats) -> Floats:
        """Mole fractions (B, n) at mass percents of the second alloy (B,)."""
        moles = self.shares(to_share) / self._molar
        found: Floats = moles / moles.sum(axis=1, keepdims=True)
        return found

    @cached_property
    def inner(self) -> tuple[float, float]:
        """Lowest and highest percent computed: the ends themselves where all elements are present there."""
        near = INSIDE * self.most
        shares = self.shares(np.array([0.0, self.most]))
        low = 0.0 if shares[0].min() > 0.0 else near
        high = self.most if shares[1].min() > 0.0 else self.most - near
        return low, high

    @cached_property
    def compounds(self) -> dict[float, str]:
        """Compounds without width whose composition lies on the line, by mass percent of the second alloy."""
        one, two = self._ends
        system, along, found = self.sample.system, two - one, {}
        for compound in system.fixed:
            mass = compound.x * self._molar
            mass = mass / mass.sum()
            share = float((mass - one) @ along / (along @ along))
            if (
                np.abs(one + share * along - mass).max() * 100.0 < ON_LINE_WT
                and 0.0 < share * 100.0 < self.most
            ):
                found[round(share * 100.0, 9)] = compound.name
        return found


def line_between(
    from_wt: Mapping[str, float],
    to_wt: Mapping[str, float],
    most: float = 100.0,
    temperature_range_c: tuple[float, float] | None = None,
) -> Line:
    """The line between two compositions in wt%.

    Raises InvalidInput where both are one alloy, NotCovered, OutsideData for a composition or temperature
    beyond the data.
    """
    elements = tuple(sorted({*from_wt, *to_wt}))
    if all(abs(from_wt.get(el, 0.0) - to_wt.get(el, 0.0)) <= SAME_WT for el in elements):
        raise InvalidInput(
            "Both ends of the section are the same alloy.",
            field="to_alloy",
            remedy="Give an alloy of another composition.",
        )
    place = prepared(elements)
    low, high = place.temperature_range_c
    asked = temperature_range_c or (low, high)
    if not low <= asked[0] < asked[1] <= high:
        raise OutsideData(
            f"{asked[0]:g} to {asked[1]:g} °C does not lie within the data of {place.file.id} for these "
            f"elements, {low:g} to {high:g} °C.",
            field="temperature_range_c",
            remedy=f"Ask for a lower and a higher temperature between {low:g} and {high:g} °C.",
        )
    line = Line(dict(from_wt), dict(to_wt), most, asked, place)
    for percent in line.inner:
        shares = 100.0 * line.shares(np.array([percent]))[0]
        held = {el: share for el, share in zip(elements, shares.tolist(), strict=True) if share > 0.0}
        try:
            check_served(place.file, held)
        except OutsideData as error:
            error.field = "from_alloy" if percent == line.inner[0] else "to_alloy"
            raise
    return line
