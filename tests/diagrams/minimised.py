"""What the minimiser finds at one composition, read from its tie lines and single phases."""

from dataclasses import dataclass

from diagrams.equilibrium import Isotherm
from diagrams.gibbs import Phase


@dataclass(frozen=True)
class Amount:
    """One phase of an equilibrium: its composition x (mole fraction of the second element) and mole share."""

    phase: Phase
    x: float
    moles: float


def phases_at(isotherm: Isotherm, x: float) -> list[Amount]:
    """Stable phases and their mole shares at mole fraction x, left one first."""
    for tie in isotherm.ties:
        if tie.left < x < tie.right:
            share = (x - tie.left) / (tie.right - tie.left)
            return [Amount(tie.first, tie.left, 1.0 - share), Amount(tie.second, tie.right, share)]
    for tie in isotherm.ties:  # a compound is met at its own composition only
        if x in (tie.left, tie.right):
            return [Amount(tie.first if x == tie.left else tie.second, x, 1.0)]
    return [Amount(isotherm.single(x), x, 1.0)]
