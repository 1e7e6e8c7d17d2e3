"""The single terms of a window: a temperature each, and the reason for it in full."""

from collections.abc import Mapping
from dataclasses import dataclass

from service.process.budget import Budget
from service.process.data_uncertainty import PRINTED
from service.process.placed import Placed
from service.process.upper_limits import UpperKnown
from service.process.window_parts import Part, Term, margin, superheat

TARGET = "target liquid fraction"
BRAZING_MINIMUM = "brazing range minimum"
BRAZING_MAXIMUM = "brazing range maximum"


@dataclass(frozen=True)
class UpperLimit:
    """A temperature that a part, a board or a base metal must not exceed.

    `known` if it is a stored one; `told` says what it is where its name and figure do not.
    """

    name: str
    limit_c: float
    margin_c: float = 0.0
    known: UpperKnown | None = None
    told: str = ""


@dataclass(frozen=True, eq=False)
class EarlierJoint:
    """A joint made before, that this heating must not melt beyond a fraction (0..1); margin in °C."""

    name: str
    subject: Placed
    max_liquid_fraction: float = 0.0
    margin_c: float = 0.0


def target_term(filler: Placed, fraction: float, superheat_c: float, budget: Budget) -> Term:
    """Hot enough for the liquid fraction even at the least favourable composition in tolerance."""
    found = filler.melter.needed(fraction)
    reason = (
        f"{label(filler)} is {_reached(fraction)} liquid from {found.nominal:.2f} °C on{_bound(filler)}; "
        f"{_at_worst(filler, 'from', found.highest, found.highest_at)} ({_data(filler)})."
    )
    name = "liquidus" if fraction == 1.0 else "temperature of the target fraction"
    start = Part(name, found.nominal, reason)
    uncertain = budget.above(found, filler.melter, fraction, superheat_c)
    return Term(TARGET, start, (superheat(superheat_c),), uncertain, True, budget.combination)


def limit_term(limit: UpperLimit, budget: Budget) -> Term:
    """A named limit, lowered by what the sensor may miss."""
    reason = limit.told or f"{limit.name} may reach {limit.limit_c:g} °C."
    if limit.known is not None:
        reason = f"{limit.name}: {limit.known.told}"
    start = Part("limit", limit.limit_c, reason)
    uncertain = (budget.read_low(limit.limit_c - limit.margin_c),)
    return _upper(limit.name, start, (margin(limit.margin_c),), uncertain, budget)


def practice_terms(filler: Placed, budget: Budget) -> tuple[list[Term], list[Term]]:
    """The ends of the brazing range that the standard gives this filler, as lower and as upper term.

    The lower end counts too: a filler that is molten may still not flow (BNi-6, BCu-1), and one of a wide
    melting range is by practice brazed before all of it is liquid, which is for the target fraction to say.
    It stands as it is printed, without superheat, which the range has in it. Solders have no such range.
    """
    row = filler.alloy.filler
    if row is None or row.brazing_range_c is None:
        return [], []
    low_c, high_c = row.brazing_range_c
    reason = (
        f"The filler table gives {row.name} a brazing range of {low_c:g} to {high_c:g} °C ({row.source}; "
        f"{row.how}): guidance from practice, left out if the alloy is given by composition."
    )
    start, end = Part(BRAZING_MINIMUM, low_c, reason), Part(BRAZING_MAXIMUM, high_c, reason)
    lower = Term(BRAZING_MINIMUM, start, (), (budget.read_high(low_c),), True, budget.combination)
    upper = _upper(BRAZING_MAXIMUM, end, (), (budget.read_low(high_c),), budget)
    return [lower], [upper]


def remelting_term(joint: EarlierJoint, budget: Budget) -> list[Term]:
    """The highest temperature an earlier joint stands; none if it may melt altogether."""
    if joint.max_liquid_fraction >= 1.0:
        return []
    found = joint.subject.melter.kept(joint.max_liquid_fraction)
    reason = (
        f"{joint.name} ({label(joint.subject)}) stays {_kept(joint.max_liquid_fraction)} up to "
        f"{found.nominal:.2f} °C{_bound(joint.subject)}; "
        f"{_at_worst(joint.subject, 'up to', found.lowest, found.lowest_at)} "
        f"({_data(joint.subject)})."
    )
    name = "solidus" if joint.max_liquid_fraction == 0.0 else "temperature of the most liquid allowed"
    start = Part(name, found.nominal, reason)
    uncertain = budget.below(found, joint.subject.melter, joint.max_liquid_fraction, joint.margin_c)
    return [_upper(joint.name, start, (margin(joint.margin_c),), uncertain, budget)]


def _upper(
    name: str, start: Part, asked: tuple[Part, ...], uncertain: tuple[Part, ...], budget: Budget
) -> Term:
    """An upper bound; no reading beyond the end of the sensor's class tells anything."""
    return Term(name, start, asked, uncertain, False, budget.combination, budget.highest_reading_c)


def label(subject: Placed) -> str:
    """The alloy as people call it."""
    alloy = subject.alloy
    return alloy.designation or "".join(f"{el}{wt:.4g}" for el, wt in alloy.composition_wt.items())


def _reached(fraction: float) -> str:
    return "all" if fraction == 1.0 else f"at least {100 * fraction:.4g} %"


def _kept(fraction: float) -> str:
    return "wholly solid" if fraction == 0.0 else f"at most {100 * fraction:.4g} % liquid"


def _bound(subject: Placed) -> str:
    """Said where a temperature is a bound only."""
    return " for certain, which is all its standard tells" if subject.melter.method == PRINTED else ""


def _at_worst(
    subject: Placed, preposition: str, temperature_c: float | None, at: Mapping[str, float] | None
) -> str:
    limits = subject.melter.limits_wt
    if temperature_c is None or at is None:
        return "what its tolerance may change is not known"
    if not limits:
        return f"no tolerance is known, {_amounts(subject.alloy.composition_wt)} is taken as it is"
    after = " on" if preposition == "from" else ""
    within = ", ".join(f"{low:.4g} to {high:.4g} wt% {el}" for el, (low, high) in limits.items())
    where = _amounts({el: at.get(el, 0.0) for el in limits})
    return f"at worst within {within}, at {where}, {preposition} {temperature_c:.2f} °C{after}"


def _amounts(composition_wt: Mapping[str, float]) -> str:
    return ", ".join(f"{wt:.4g} wt% {el}" for el, wt in composition_wt.items())


def _data(subject: Placed) -> str:
    melter = subject.melter
    if melter.method == "standard table":
        return f"printed values, {melter.edition}"
    return (
        f"{'diagram' if melter.method == 'polygon' else 'system'} {melter.data_id}, edition {melter.edition}"
    )
