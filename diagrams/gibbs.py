"""Gibbs energies: functions of temperature, and phases built from them.

Energies are J per mole of atoms, temperatures kelvin, `x` the mole fraction of the second element.
Solution phases follow Redlich and Kister (Ind. Eng. Chem. 40 (1948) 345), excess energy
x₁x₂ Σ Lₖ (x₁ − x₂)ᵏ on top of the ideal entropy of mixing; compounds have one fixed composition.
"""

import math
from dataclasses import dataclass
from typing import Any, Literal, overload

import numpy as np
from numpy.typing import NDArray

GAS_CONSTANT = 8.314462618  # J/(mol K), CODATA 2018 (exact since the SI of 2019)

Floats = NDArray[np.float64]
Kind = Literal["liquid", "solid"]

TERMS = ("1", "T", "T ln T", "T^2", "T^3", "1/T", "T^7", "T^-9")


def _basis(temperature_k: float) -> tuple[float, ...]:
    t = temperature_k
    return (1.0, t, t * math.log(t), t * t, t * t * t, 1.0 / t, t**7, t**-9)


@dataclass(frozen=True)
class Energy:
    """A piecewise function of temperature; each piece holds below its `below_k`, the last everywhere above.

    `coefficients` has one row a piece, in the order of `TERMS`.
    """

    below_k: tuple[float, ...]
    coefficients: tuple[tuple[float, ...], ...]

    def __call__(self, temperature_k: float) -> float:
        """Energy in J/mol at a temperature in kelvin."""
        piece = 0
        while piece < len(self.below_k) - 1 and temperature_k >= self.below_k[piece]:
            piece += 1
        row = self.coefficients[piece]
        return sum(c * b for c, b in zip(row, _basis(temperature_k), strict=True) if c)


@dataclass(frozen=True)
class Names:
    """What a phase is called: `by_x` lists (upper x, name); `spanning` names a field that holds several."""

    by_x: tuple[tuple[float, str], ...]
    spanning: str | None = None

    def at(self, x: float) -> str:
        """Name of the composition set at mole fraction x."""
        for upper, name in self.by_x:
            if x <= upper:
                return name
        return self.by_x[-1][1]


@dataclass(frozen=True)
class Solution:
    """A substitutional solution of two elements, meant between `window` (mole fractions) only."""

    model: str
    kind: Kind
    names: Names
    ends: tuple[Energy, Energy]
    interaction: tuple[Energy, ...]
    window: tuple[float, float] = (0.0, 1.0)

    def at(self, temperature_k: float) -> "SolutionAtT":
        """The same phase with its temperature fixed."""
        return SolutionAtT(
            self,
            GAS_CONSTANT * temperature_k,
            self.ends[0](temperature_k),
            self.ends[1](temperature_k),
            tuple(term(temperature_k) for term in self.interaction),
        )


@dataclass(frozen=True)
class Compound:
    """A phase of one composition `x`, without width."""

    model: str
    kind: Kind
    names: Names
    x: float
    energy: Energy


Phase = Solution | Compound


@dataclass(frozen=True)
class System:
    """Two elements and every phase they can form, described between the mole fractions `x_range`."""

    elements: tuple[str, str]
    phases: tuple[Phase, ...]
    x_range: tuple[float, float] = (0.0, 1.0)


class SolutionAtT:
    """Energy of a solution at one temperature, as functions of x; scalars are floats, arrays numpy."""

    __slots__ = ("g1", "g2", "interaction", "phase", "rt")

    def __init__(
        self, phase: Solution, rt: float, g1: float, g2: float, interaction: tuple[float, ...]
    ) -> None:
        self.phase = phase
        self.rt = rt
        self.g1 = g1
        self.g2 = g2
        self.interaction = interaction

    def energies(self, x: Floats) -> Floats:
        """G in J/mol for an array of mole fractions, 0 and 1 included."""
        y = 1.0 - x
        with np.errstate(divide="ignore", invalid="ignore"):
            mixing = np.where(x > 0, x * np.log(x), 0.0) + np.where(y > 0, y * np.log(y), 0.0)
        excess = np.zeros_like(x)
        for order, value in enumerate(self.interaction):
            excess = excess + value * (y - x) ** order
        total: Floats = y * self.g1 + x * self.g2 + self.rt * mixing + x * y * excess
        return total

    def energy(self, x: float) -> float:
        """G in J/mol at one mole fraction."""
        y = 1.0 - x
        mixing = (x * math.log(x) if x > 0 else 0.0) + (y * math.log(y) if y > 0 else 0.0)
        excess = sum(value * (y - x) ** k for k, value in enumerate(self.interaction))
        return y * self.g1 + x * self.g2 + self.rt * mixing + x * y * excess

    def potentials(self, u: float) -> tuple[float, float, float, float, float]:
        """Chemical potentials at u = ln(x/(1−x)): (μ₁, μ₂, dμ₁/du, dμ₂/du, x).

        The logit keeps full relative precision in dilute solutions at both ends.
        """
        if u > 0:
            e = math.exp(-u)
            x, y = 1.0 / (1.0 + e), e / (1.0 + e)
            ln_x, ln_y = -math.log1p(e), -u - math.log1p(e)
        else:
            e = math.exp(u)
            x, y = e / (1.0 + e), 1.0 / (1.0 + e)
            ln_x, ln_y = u - math.log1p(e), -math.log1p(e)
        f, df, d2f = self._excess(x, y)
        mu1 = self.g1 + self.rt * ln_y + f - x * df
        mu2 = self.g2 + self.rt * ln_x + f + y * df
        curvature = self.rt + x * y * d2f  # x y G″
        return mu1, mu2, -x * curvature, y * curvature, x

    def curvature(self, x: float) -> float:
        """x(1−x) d²G/dx² in J/mol: negative where the solution is unstable."""
        return self.rt + x * (1.0 - x) * self._excess(x, 1.0 - x)[2]

    def curvatures(self, x: Floats) -> Floats:
        """The same for an array of mole fractions."""
        return self.rt + x * (1.0 - x) * self._excess(x, 1.0 - x)[2]

    @overload
    def _excess(self, x: float, y: float) -> tuple[float, float, float]: ...
    @overload
    def _excess(self, x: Floats, y: Floats) -> tuple[Floats, Floats, Floats]: ...
    def _excess(self, x: Any, y: Any) -> Any:
        """Excess energy f = x y s(d), d = y − x, with its first and second derivative in x."""
        d = y - x
        s = ds = d2s = 0.0 * d
        for value in reversed(self.interaction):
            d2s = d2s * d + 2.0 * ds
            ds = ds * d + s
            s = s * d + value
        # df/dx with dd/dx = −2
        f = x * y * s
        df = d * s - 2.0 * x * y * ds
        d2f = -2.0 * s - 4.0 * d * ds + 4.0 * x * y * d2s
        return f, df, d2f


def logit(x: float) -> float:
    """ln(x/(1−x)), held within ±40 so that pure ends stay finite."""
    if x <= 0.0:
        return -40.0
    if x >= 1.0:
        return 40.0
    return max(-40.0, min(40.0, math.log(x / (1.0 - x))))
