"""Phases of any number of elements: energy, chemical potentials and their derivatives, many states at once.

Energies are J per mole of atoms, temperatures kelvin, compositions mole fractions. The excess energy is
that of Redlich and Kister over the pairs with the mole fractions as they are, as Muggianu, Gambino and Bros
extend it (J. Chim. Phys. 72 (1975) 83), plus x_i x_j x_k (x_i L_i + x_j L_j + x_k L_k) for triples. States
are given as u = ln x, so that dilute elements keep their full relative precision. In the shapes below B
counts states, m the elements a phase dissolves.
"""

from collections.abc import Mapping, Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from diagrams.gibbs import GAS_CONSTANT, TERMS, Energy, Floats, Kind
from diagrams.many.energies import EnergyTable

Ints = NDArray[np.int64]
Pair = tuple[int, int, tuple[Energy, ...]]
Triple = tuple[int, int, int, tuple[Energy, Energy, Energy]]

NOTHING = Energy((float("inf"),), ((0.0,) * len(TERMS),))


@dataclass(frozen=True)
class Naming:
    """What a solution is called: by steps in the mole fraction of one element, else by its main element.

    `alone` is the name where the phase stands in an equilibrium only once.
    """

    element: str | None = None
    steps: tuple[tuple[float, str], ...] = ()
    alone: str | None = None

    def name(self, x: Mapping[str, float], alone: bool) -> str:
        """Name of a composition set with mole fractions x; `alone` if it is the only one of its phase."""
        if alone and self.alone is not None:
            return self.alone
        for upper, name in self.steps:
            if self.element is None or x.get(self.element, 0.0) <= upper:
                return name
        if self.steps:
            return self.steps[-1][1]
        return f"({max(sorted(x), key=lambda el: x[el])})"


@dataclass(frozen=True, eq=False)
class Fixed:
    """A compound without width: mole fractions `x` over all elements of the system."""

    model: str
    kind: Kind
    name: str
    x: Floats
    energy: Energy


class Mixed:
    """A substitutional solution of the elements `members` (positions in the system, as array `index`).

    `pairs` and `triples` name positions in `members`. `windows` has one row a limit: the phase is described
    where windows · x ≥ 0.
    """

    def __init__(
        self,
        model: str,
        kind: Kind,
        naming: Naming,
        members: Sequence[int],
        ends: Sequence[Energy],
        pairs: Sequence[Pair],
        triples: Sequence[Triple],
        windows: Floats,
    ) -> None:
        self.model, self.kind, self.naming, self.windows = model, kind, naming, windows
        self.index: Ints = np.array(members, dtype=np.int64)
        self.size = m = len(members)
        self._orders = orders = max((len(terms) for *_, terms in pairs), default=0)
        self.energies = list(ends)
        for *_, terms in pairs:
            self.energies += [*terms, *([NOTHING] * (orders - len(terms)))]
        for *_, corners in triples:
            self.energies += corners
        i, j = (np.array([pair[k] for pair in pairs], dtype=np.int64) for k in (0, 1))
        a, b, c = (np.array([triple[k] for triple in triples], dtype=np.int64) for k in (0, 1, 2))
        self._pair, self._triple = (i, j), (a, b, c)
        one, cell = np.eye(m), np.eye(m * m)
        self._to_gradient = np.vstack([one[i], one[j], one[a], one[b], one[c]])
        self._to_hessian = np.vstack(
            [cell[k * m + k] for k in (i, j)]
            + [cell[i * m + j] + cell[j * m + i]]
            + [cell[k * m + k] for k in (a, b, c)]
            + [cell[k * m + q] + cell[q * m + k] for k, q in ((a, b), (a, c), (b, c))]
        )
        self._diagonal = np.arange(m)

    def basis(self, x: Floats) -> Floats:
        """Functions whose sum, weighted by the energies and RT, is G: from (N, m) to (N, energies + 1)."""
        i, j = self._pair
        a, b, c = self._triple
        product, difference = x[:, i] * x[:, j], x[:, i] - x[:, j]
        powers = difference[:, :, None] ** np.arange(self._orders)
        pairs = (product[:, :, None] * powers).reshape(len(x), -1)
        corners = np.stack([x[:, a], x[:, b], x[:, c]], axis=2)
        triples = (corners * (x[:, a] * x[:, b] * x[:, c])[:, :, None]).reshape(len(x), -1)
        mixing = np.sum(x * np.log(np.where(x > 0.0, x, 1.0)), axis=1, keepdims=True)
        return np.hstack([x, pairs, triples, mixing])

    def potentials(self, values: Floats, rt: Floats, u: Floats) -> tuple[Floats, Floats, Floats]:
        """Chemical potentials (B, m) at u = ln x, their derivatives in u (B, m, m), and x.

        `values` are the phase's energies (B, energies); potentials are exact where Σ x = 1.
        """
        x = np.exp(u)
        excess, gradient, hessian = self._excess(values, x)
        mean = np.einsum("bi,bi->b", x, gradient)
        mu = values[:, : self.size] + rt[:, None] * u + (excess - mean)[:, None] + gradient
        slope = (hessian - np.einsum("bj,bjk->bk", x, hessian)[:, None, :]) * x[:, None, :]
        slope[:, self._diagonal, self._diagonal] += rt[:, None]
        return mu, slope, x

    def _excess(self, values: Floats, x: Floats) -> tuple[Floats, Floats, Floats]:
        """Excess energy (B,) as a polynomial in independent x, its gradient and Hessian."""
        states, m = x.shape
        i, j = self._pair
        xi, xj = x[:, i], x[:, j]
        d, p = xi - xj, xi * xj
        stop = m + len(i) * self._orders
        terms = values[:, m:stop].reshape(states, len(i), self._orders)
        s = np.zeros_like(d)
        s1, s2 = np.zeros_like(d), np.zeros_like(d)
        for k in range(self._orders - 1, -1, -1):
            s2 = s2 * d + 2.0 * s1
            s1 = s1 * d + s
            s = s * d + terms[:, :, k]
        ps1, ps2 = p * s1, p * s2
        first = [xj * s + ps1, xi * s - ps1]
        second = [2.0 * xj * s1 + ps2, ps2 - 2.0 * xi * s1, s + d * s1 - ps2]
        excess: Floats = np.einsum("bp,bp->b", p, s)
        if len(self._triple[0]):
            corners = values[:, stop:].reshape(states, -1, 3)
            la, lb, lc = corners[:, :, 0], corners[:, :, 1], corners[:, :, 2]
            xa, xb, xc = (x[:, k] for k in self._triple)
            bc, ac, ab, level = xb * xc, xa * xc, xa * xb, xa * la + xb * lb + xc * lc
            excess = excess + np.sum(xa * bc * level, axis=1)
            first += [bc * (level + xa * la), ac * (level + xb * lb), ab * (level + xc * lc)]
            second += [2.0 * bc * la, 2.0 * ac * lb, 2.0 * ab * lc]
            second += [xc * (level + xb * lb + xa * la), xb * (level + xc * lc + xa * la)]
            second += [xa * (level + xc * lc + xb * lb)]
        gradient = np.hstack(first) @ self._to_gradient
        hessian = (np.hstack(second) @ self._to_hessian).reshape(states, m, m)
        return excess, gradient, hessian

    def inside(self, x: Floats, leeway: float = 1e-12) -> NDArray[np.bool_]:
        """Whether compositions (…, m) lie where the phase is described."""
        found: NDArray[np.bool_] = np.all(x @ self.windows.T >= -leeway, axis=-1)
        return found


@dataclass(frozen=True)
class AtT:
    """A system's energies at B temperatures: RT, those of each solution, and those of all compounds."""

    rt: Floats
    mixed: tuple[Floats, ...]
    fixed: Floats

    def take(self, which: Ints) -> "AtT":
        """The same at some of the temperatures."""
        return AtT(self.rt[which], tuple(v[which] for v in self.mixed), self.fixed[which])


class ManySystem:
    """Elements and all phases they can form; phases are numbered solutions first, then compounds."""

    def __init__(self, elements: Sequence[str], mixed: Sequence[Mixed], fixed: Sequence[Fixed]) -> None:
        self.elements = tuple(elements)
        self.mixed = tuple(mixed)
        self.fixed = tuple(fixed)
        self.fixed_x = np.array([c.x for c in fixed]).reshape(len(fixed), len(elements))
        self._table = EnergyTable([e for p in mixed for e in p.energies] + [c.energy for c in fixed])
        stops = np.cumsum([len(p.energies) for p in mixed])
        self._slices = [slice(stop - len(p.energies), stop) for p, stop in zip(mixed, stops, strict=True)]

    def phase(self, number: int) -> Mixed | Fixed:
        """The phase with a number."""
        count = len(self.mixed)
        return self.mixed[number] if number < count else self.fixed[number - count]

    def at(self, temperatures_k: Floats) -> AtT:
        """All energies at an array of temperatures."""
        values = self._table(temperatures_k)
        stop = self._slices[-1].stop if self._slices else 0
        return AtT(GAS_CONSTANT * temperatures_k, tuple(values[:, s] for s in self._slices), values[:, stop:])
