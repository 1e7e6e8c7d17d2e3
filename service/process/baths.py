"""A solder bath: each element against its limit, the drift, the melting, and what to draw off."""

from collections.abc import Mapping, Sequence
from dataclasses import dataclass

from diagrams.alloys import Alloy, alloy_from_wt
from diagrams.density import density
from diagrams.elements import symbol
from diagrams.errors import InvalidInput, NotCovered, OutsideData
from service.process.bath_exchange import Exchange, exchange
from service.process.bath_limits import PublishedLimit, bath_limits
from service.process.bounds import Bounds
from service.process.drift import Drift, Meeting, drift_of, meeting
from service.process.placed import Placed, placed, placed_alloy
from service.process.profiles.limits import Checked, held
from service.schemas.base import within
from service.schemas.baths import BathQuestion

JUST_BELOW_C = 0.01  # under the liquidus, where the first solid is looked for
KG_PER_L = 1.0  # of 1 g/cm³


@dataclass(frozen=True)
class Analysis:
    """A day and what the bath held, wt% summing to 100."""

    day: float
    alloy: Alloy
    given: frozenset[str]


@dataclass(frozen=True)
class LimitSeen:
    """One bound of a published limit, with the drift towards it."""

    limit: PublishedLimit
    checked: Checked
    analysed: bool
    drift: Drift | None
    meets: Meeting


@dataclass(frozen=True)
class Melted:
    """How the bath melted at an analysis; None of what no data tell, for the reason `unknown`."""

    day: float
    subject: Placed | None
    range_c: tuple[float, float] | None
    first_solid: str | None
    compound: bool
    unknown: str | None


@dataclass(frozen=True, eq=False)
class Bath:
    """Everything that is told of a bath."""

    mass_kg: float
    analyses: tuple[Analysis, ...]
    limits: tuple[LimitSeen, ...]
    melted: tuple[Melted, ...]
    exchange: Exchange | None
    replacement: Placed | None


def bath_of(question: BathQuestion) -> Bath:
    """The bath asked about; raises InvalidInput and its like naming the field."""
    analyses = _analyses(question)
    mass_kg = _mass_kg(question, analyses[-1].alloy)
    limits = tuple(seen for limit in bath_limits(question.kind) for seen in _seen(limit, analyses))
    ends = analyses[:1] if len(analyses) == 1 else (analyses[0], analyses[-1])
    melted = tuple(_melted(analysis, question.leave_out_traces_below_wt) for analysis in ends)
    replacement, found = None, None
    if question.replacement is not None:
        replacement = placed(question.replacement, "replacement")
        last, feed = analyses[-1].alloy.composition_wt, replacement.alloy.composition_wt
        found = exchange(last, feed, _targets(question))
    return Bath(mass_kg, analyses, limits, melted, found, replacement)


def _analyses(question: BathQuestion) -> tuple[Analysis, ...]:
    found: list[Analysis] = []
    for k, asked in enumerate(question.analyses):
        where = f"analyses.{k}.composition_wt"
        held_wt = {symbol(el, f"{where}.{el[:10]}"): wt for el, wt in asked.composition_wt.items()}
        if question.balance is not None:
            main = symbol(question.balance, "balance")
            if main in held_wt:
                raise InvalidInput(
                    f"{main} is given and is the balance as well.",
                    field=f"{where}.{main}",
                    remedy=f"Leave {main} out of the analyses, or leave out balance.",
                )
            rest = 100.0 - sum(held_wt.values())
            if rest < 0.0:
                raise InvalidInput(
                    f"The elements add up to {100.0 - rest:g} %.",
                    field=where,
                    remedy="Give mass percent that leave something to the balance.",
                )
            held_wt[main] = rest
        with within(f"analyses.{k}"):
            found.append(Analysis(asked.day, alloy_from_wt(held_wt), frozenset(held_wt)))
        if len(found) > 1 and found[-1].day < found[-2].day:
            raise InvalidInput(
                "The analyses step back in time.",
                field=f"analyses.{k}.day",
                remedy="Send them in the order in which they were taken.",
            )
    return tuple(found)


def _mass_kg(question: BathQuestion, alloy: Alloy) -> float:
    if (question.volume_l is None) is (question.mass_kg is None):
        raise InvalidInput(
            "The size of the bath is given twice or not at all.",
            field="mass_kg" if question.volume_l is None else "volume_l",
            remedy="Give volume_l or mass_kg.",
        )
    if question.mass_kg is not None:
        return question.mass_kg
    return (question.volume_l or 0.0) * density(alloy.composition_wt) * KG_PER_L


def _seen(limit: PublishedLimit, analyses: Sequence[Analysis]) -> list[LimitSeen]:
    rows = [a for a in analyses if a.given & set(limit.elements)]
    values = [_sum_wt(limit, a.alloy.composition_wt) for a in rows]
    drift = drift_of([a.day for a in rows], values)
    value, today = _sum_wt(limit, analyses[-1].alloy.composition_wt), analyses[-1].day
    analysed = bool(analyses[-1].given & set(limit.elements))
    return [
        LimitSeen(
            limit,
            checked,
            analysed,
            drift,
            meeting(drift, checked.bound, today, upwards=checked.side == "at most"),
        )
        for checked in held(limit.label, value, limit.bounds_wt, "wt%")
    ]


def _sum_wt(limit: PublishedLimit, composition_wt: Mapping[str, float]) -> float:
    return sum(composition_wt.get(el, 0.0) for el in limit.elements)


def _targets(question: BathQuestion) -> dict[str, Bounds]:
    found = {}
    for limit in bath_limits(question.kind):
        bounds = limit.bounds_wt
        if len(limit.elements) == 1 and bounds.high is not None:
            # an element the bath is meant to hold has a lower limit too, and is only kept between both
            share = 1.0 if bounds.low is not None else question.target_share
            found[limit.elements[0]] = Bounds(bounds.low, share * bounds.high)
    for text, asked in question.targets_wt.items():
        where = f"targets_wt.{text[:10]}"
        element = symbol(text, where)
        low, high = asked.at_least, asked.at_most
        if (low is None and high is None) or (low is not None and high is not None and low > high):
            raise InvalidInput(
                f"The target for {element} bounds nothing or holds nothing.",
                field=where,
                remedy="Give at_least, at_most or both, at_least not above at_most.",
            )
        found[element] = Bounds(low, high)
    return found


def _melted(analysis: Analysis, traces_below_wt: float | None) -> Melted:
    try:
        subject = placed_alloy(analysis.alloy, "analyses", traces_below_wt)
        solidus_c, liquidus_c = subject.melter.range_c
        state = subject.melter.equilibrium(liquidus_c - JUST_BELOW_C)
    except (NotCovered, OutsideData) as error:
        return Melted(analysis.day, None, None, None, False, f"{error} {error.remedy}".strip())
    solids = [phase for phase in state.phases if phase.kind != "liquid"]
    first = max(solids, key=lambda phase: phase.mass_fraction, default=None)
    name = None if first is None else first.name
    compound = name is not None and not name.startswith("(")
    return Melted(analysis.day, subject, (solidus_c, liquidus_c), name, compound, None)
