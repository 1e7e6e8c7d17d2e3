"""Whether lower and upper bounds leave a window, how wide, and what collides if they leave none.

Where much of an earlier joint melts at once at its very bound (a eutectic), a temperature there is read as
the state just above, as everywhere: the joint must stay below it, and a window of no width would not do.
"""

from collections.abc import Sequence
from dataclasses import dataclass

from service.process.window_parts import Part, Term, spread
from service.process.window_terms import EarlierJoint

SAME_C = 1e-9  # bounds that differ by less are one temperature: sums of decimals miss by less
JUST_ABOVE_C = 0.002  # how far above a bound its other side is read
MELTS_AT_ONCE = 0.01  # share of the mass; a steep curve melts less than that in so little


@dataclass(frozen=True)
class Collision:
    """Two terms that leave no window; `by_c` degrees are missing between them, the spread included.

    None are missing where the two meet at one temperature that the upper one excludes.
    """

    lower: str
    upper: str
    by_c: float
    text: str


@dataclass(frozen=True)
class Verdict:
    """Which terms decide and what they leave; without an upper term nothing bounds the window above."""

    lower: Term
    upper: Term | None
    width_parts: tuple[Part, ...]
    width_c: float | None
    feasible: bool
    setpoint_c: float | None
    collision: Collision | None


def judge(
    lower: Sequence[Term], upper: Sequence[Term], spread_c: float, joints: Sequence[EarlierJoint]
) -> Verdict:
    """The highest lower and the lowest upper term against each other."""
    highest = max(lower, key=lambda term: term.value_c)
    lowest = min(upper, key=lambda term: term.value_c, default=None)
    if lowest is None:
        return Verdict(highest, None, (), None, True, None, None)
    parts = (
        Part("maximum peak", lowest.value_c, f"“{lowest.name}” allows the hottest joint no more."),
        Part("minimum peak", -highest.value_c, f"“{highest.name}” asks the coldest joint for no less."),
        spread(spread_c),
    )
    width_c = sum(part.value_c for part in parts)
    if abs(width_c) > SAME_C:
        if width_c < 0.0:
            return Verdict(
                highest, lowest, parts, width_c, False, None, _apart(highest, lowest, spread_c, -width_c)
            )
    else:
        width_c = 0.0
        bounds = {term.name for term in upper if term.value_c <= lowest.value_c + SAME_C}
        for joint in joints:
            share = melting_at_its_bound(joint) if joint.name in bounds else 0.0
            if share > MELTS_AT_ONCE:
                excluded = next(term for term in upper if term.name == joint.name)
                return Verdict(
                    highest, excluded, parts, 0.0, False, None, _touching(highest, excluded, spread_c, share)
                )
    middle_c = 0.5 * (highest.value_c + lowest.value_c)
    return Verdict(highest, lowest, parts, width_c, True, middle_c, None)


def melting_at_its_bound(joint: EarlierJoint) -> float:
    """What melts at once of a joint at the temperature that bounds it, as a share; 0 with a margin."""
    if joint.margin_c > 0.0:
        return 0.0
    melter = joint.subject.melter
    bound = melter.kept(joint.max_liquid_fraction)
    jump = melter.jump(bound.safe_low, bound.lowest_at or melter.alloy.composition_wt)
    above = melter.most_liquid_up_to(bound.safe_low + JUST_ABOVE_C)
    return max(jump, 0.0 if above is None else above - joint.max_liquid_fraction)


def _apart(lower: Term, upper: Term, spread_c: float, by_c: float) -> Collision:
    text = (
        f"“{lower.name}” asks the coldest joint to read {lower.value_c:.2f} °C at least, “{upper.name}” "
        f"allows the hottest {upper.value_c:.2f} °C at most{_hotter(spread_c)}: {by_c:.2f} °C are missing."
    )
    return Collision(lower.name, upper.name, by_c, text)


def _touching(lower: Term, upper: Term, spread_c: float, share: float) -> Collision:
    text = (
        f"“{lower.name}” asks the coldest joint to read {lower.value_c:.2f} °C at least, and the hottest has "
        f"to stay below the {upper.value_c:.2f} °C of “{upper.name}”, of which {100 * share:.3g} % melts at "
        f"once there{_hotter(spread_c)}: they meet at one temperature and overlap by 0 °C."
    )
    return Collision(lower.name, upper.name, 0.0, text)


def _hotter(spread_c: float) -> str:
    return f", and the hottest joint lies {spread_c:g} °C above the coldest" if spread_c else ""
