"""The common tangent of two phases at one temperature: Newton's method on chemical potentials."""

from dataclasses import dataclass

from diagrams.errors import NotConverged
from diagrams.gibbs import Compound, Phase, SolutionAtT, logit

MOST_STEPS = 60
TOLERANCE = 1e-10  # of RT, on both chemical potentials


@dataclass(frozen=True)
class FixedAtT:
    """A compound at one temperature."""

    phase: Compound
    rt: float
    g: float


PhaseAtT = SolutionAtT | FixedAtT


@dataclass(frozen=True)
class Tie:
    """Two phases in equilibrium: mole fractions `left` ≤ `right` and the potentials they share (J/mol)."""

    first: Phase
    second: Phase
    left: float
    right: float
    mu1: float
    mu2: float

    @property
    def pair(self) -> tuple[str, str]:
        """Models of the two phases, left first."""
        return self.first.model, self.second.model


def solve_tie(a: PhaseAtT, b: PhaseAtT, left: float, right: float) -> Tie:
    """Tie line between phase a (starting at mole fraction `left`) and phase b (`right`).

    Raises NotConverged if Newton's method fails, leaves a phase's window, or both ends fall together.
    """
    if isinstance(a, FixedAtT) and isinstance(b, FixedAtT):
        slope = (b.g - a.g) / (b.phase.x - a.phase.x)
        mu1 = a.g - a.phase.x * slope
        return Tie(a.phase, b.phase, a.phase.x, b.phase.x, mu1, mu1 + slope)
    if isinstance(a, FixedAtT) or isinstance(b, FixedAtT):
        return _with_compound(a, b, left, right)
    return _two_solutions(a, b, left, right)


def _with_compound(a: PhaseAtT, b: PhaseAtT, left: float, right: float) -> Tie:
    fixed, solution, start = (a, b, right) if isinstance(a, FixedAtT) else (b, a, left)
    if not isinstance(fixed, FixedAtT) or not isinstance(solution, SolutionAtT):
        raise NotConverged("a tie line needs at least one solution here")
    xc, u = fixed.phase.x, logit(start)
    for _ in range(MOST_STEPS):
        mu1, mu2, d1, d2, x = solution.potentials(u)
        residual = (1.0 - xc) * mu1 + xc * mu2 - fixed.g
        if abs(residual) < TOLERANCE * solution.rt and abs(x - xc) > 0:
            _check_window(solution, x)
            if isinstance(a, FixedAtT):
                return Tie(a.phase, b.phase, xc, x, mu1, mu2)
            return Tie(a.phase, b.phase, x, xc, mu1, mu2)
        slope = (1.0 - xc) * d1 + xc * d2
        if slope == 0.0:
            break
        u -= max(-1.5, min(1.5, residual / slope))
        if abs(u) > 60:
            break
    raise NotConverged(f"no tie line of {solution.phase.model} with {fixed.phase.model}")


def _two_solutions(a: SolutionAtT, b: SolutionAtT, left: float, right: float) -> Tie:
    u, v = logit(left), logit(right)
    for _ in range(MOST_STEPS):
        a1, a2, da1, da2, xa = a.potentials(u)
        b1, b2, db1, db2, xb = b.potentials(v)
        r1, r2 = a1 - b1, a2 - b2
        if abs(r1) + abs(r2) < TOLERANCE * a.rt:
            if a.phase is b.phase and abs(xa - xb) < 1e-7:
                break
            _check_window(a, xa)
            _check_window(b, xb)
            return Tie(a.phase, b.phase, xa, xb, a1, a2)
        determinant = -da1 * db2 + db1 * da2
        if determinant == 0.0:
            break
        du = (-r1 * db2 + db1 * r2) / determinant
        dv = (da1 * r2 - da2 * r1) / determinant
        scale = min(1.0, 1.0 / max(abs(du), abs(dv), 1e-30))
        u -= scale * du
        v -= scale * dv
        if abs(u) > 60 or abs(v) > 60:
            break
    raise NotConverged(f"no tie line between {a.phase.model} and {b.phase.model}")


def _check_window(solution: SolutionAtT, x: float) -> None:
    low, high = solution.phase.window
    if (low > 0.0 and x <= low) or (high < 1.0 and x >= high):
        raise NotConverged(
            f"{solution.phase.model} would be stable at x = {x:.4f}, at or beyond its window {low}..{high}"
        )
