"""Many functions of temperature evaluated together, as one matrix product."""

from collections.abc import Sequence

import numpy as np

from diagrams.gibbs import TERMS, Energy, Floats


class EnergyTable:
    """Energies stacked as rows of coefficients over the terms of `gibbs.TERMS`, piece by piece."""

    def __init__(self, energies: Sequence[Energy]) -> None:
        breaks = sorted({t for e in energies for t in e.below_k[:-1]})
        starts = [-np.inf, *breaks]
        self._breaks = np.array(breaks)
        self._rows = np.zeros((len(starts), len(energies), len(TERMS)))
        for p, start in enumerate(starts):
            for k, energy in enumerate(energies):
                piece = sum(1 for t in energy.below_k[:-1] if t <= start)
                self._rows[p, k] = energy.coefficients[piece]

    def __call__(self, temperatures_k: Floats) -> Floats:
        """Values in J/mol: one row a temperature, one column an energy."""
        t = temperatures_k
        basis = np.stack([np.ones_like(t), t, t * np.log(t), t * t, t**3, 1.0 / t, t**7, t**-9.0], axis=1)
        piece = np.searchsorted(self._breaks, t, side="right")
        found = np.empty((t.size, self._rows.shape[1]))
        for p in np.unique(piece):
            held = piece == p
            found[held] = basis[held] @ self._rows[p].T
        return found
