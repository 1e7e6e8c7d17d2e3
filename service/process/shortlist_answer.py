"""A shortlist between the wire and the rules."""

from collections.abc import Sequence
from dataclasses import replace

from diagrams.elements import symbol
from diagrams.errors import InvalidInput
from diagrams.fillers import FILLERS_EDITION, FILLERS_GUIDANCE, Filler, fillers, find_filler
from service.process.budget_asked import budget_shown
from service.process.effort import check_effort
from service.process.known_limits import usual_superheat
from service.process.shortlist import MOST_SUPERHEAT, Candidate, Wanted, elements_of, shortlist
from service.process.shortlist_reasons import Reason, reasons_against, reasons_for
from service.process.suitability import base_metal
from service.process.upper_limits import UpperKnown, limit_shown
from service.process.window import Demands
from service.process.window_answer import demands_of
from service.process.window_terms import UpperLimit
from service.process.window_warnings import warnings_of_limits
from service.safety import safety_for
from service.schemas.shortlists import (
    BansAsked,
    ExcludedShown,
    ExclusionShown,
    RankedShown,
    ReasonShown,
    ShortlistAnswer,
    ShortlistQuestion,
)
from service.schemas.window import WarningShown

HIGHEST_PEAK = "highest peak"


def shortlist_of(question: ShortlistQuestion) -> ShortlistAnswer:
    """The shortlist asked for; raises InvalidInput and its like naming the field."""
    bases = [base_metal(key, f"base_metals.{k}") for k, key in enumerate(question.base_metals)]
    demands = _demands(question, bases)
    wanted = _wanted(question, bases, demands)
    found = shortlist(_chosen(question), wanted)
    shown = found.ranked[: question.most]
    hottest_c = max((c.window.maximum_peak_c or c.window.minimum_peak_c for c in shown), default=None)
    return ShortlistAnswer(
        ranked_count=len(found.ranked),
        ranked=[_ranked(k, candidate, wanted) for k, candidate in enumerate(shown, 1)],
        excluded_count=len(found.excluded),
        excluded=[
            ExcludedShown(
                name=filler.name,
                reasons=[ExclusionShown(code=e.code, text=e.text, by_c=e.by_c) for e in reasons],
            )
            for filler, reasons in found.excluded
        ],
        base_metals=[limit_shown(base) for base in bases],
        warnings=[
            WarningShown(code=warned.code, text=warned.text)
            for warned in warnings_of_limits(demands.upper_limits)
        ],
        edition=FILLERS_EDITION,
        guidance=FILLERS_GUIDANCE,
        safety=safety_for(elements_of(shown, demands), question.class_, hottest_c),
    )


def _demands(question: ShortlistQuestion, bases: Sequence[UpperKnown]) -> Demands:
    """What a window is asked, with the base metals and the highest peak among its limits."""
    if question.base_metal_margin_c and not bases:
        raise InvalidInput(
            "A margin is given, and no base metal.",
            field="base_metal_margin_c",
            remedy="Name base_metals, or leave it out.",
        )
    own = demands_of(question)
    limits = [
        UpperLimit(base.subject, base.limit_c, question.base_metal_margin_c, base)
        for base in dict.fromkeys(bases)
    ]
    if question.highest_peak_c is not None:
        limits.append(UpperLimit(HIGHEST_PEAK, question.highest_peak_c))
    bounding = [joint for joint in own.earlier_joints if joint.max_liquid_fraction < 1.0]
    if not (limits or own.upper_limits or bounding):
        raise InvalidInput(
            "Nothing bounds the peak: windows open above cannot be told apart by their width.",
            field="highest_peak_c",
            remedy="Give highest_peak_c, base_metals, upper_limits or earlier_joints.",
        )
    joints = own.earlier_joints
    _check_names(question, {MOST_SUPERHEAT, *(limit.name for limit in limits)})
    check_effort(
        [(f"earlier_joints.{k}.alloy", joint.subject) for k, joint in enumerate(joints)], tolerances=True
    )
    return replace(own, upper_limits=(*own.upper_limits, *limits))


def _check_names(question: ShortlistQuestion, taken: set[str]) -> None:
    """The limits that a shortlist makes by itself have names of their own."""
    folded = {name.casefold() for name in taken}
    given = [(f"upper_limits.{k}", limit.name) for k, limit in enumerate(question.upper_limits)]
    given += [(f"earlier_joints.{k}", joint.name) for k, joint in enumerate(question.earlier_joints)]
    for field, name in given:
        if " ".join(name.split()).casefold() in folded:
            raise InvalidInput(
                f"The name “{name}” is that of a limit that the shortlist makes by itself.",
                field=f"{field}.name",
                remedy="Give it another name.",
            )


def _wanted(question: ShortlistQuestion, bases: Sequence[UpperKnown], demands: Demands) -> Wanted:
    if question.most_homologous is not None and question.service_temperature_c is None:
        raise InvalidInput(
            "A homologous service temperature needs a service temperature.",
            field="most_homologous",
            remedy="Give service_temperature_c too, or leave this out.",
        )
    bans = question.bans
    return Wanted(
        demands=demands,
        bases=tuple(bases),
        service_c=question.service_temperature_c,
        most_homologous=question.most_homologous,
        class_=question.class_,
        standard=question.standard,
        banned=_banned(bans),
        unwanted=_unwanted(bans),
        most_superheat_c=question.most_superheat_c or usual_superheat().limit,
    )


def _unwanted(bans: BansAsked) -> frozenset[str]:
    """The rows of the alloys named, whatever standard lists them."""
    named = [find_filler(text, field=f"bans.fillers.{k}") for k, text in enumerate(bans.fillers)]
    alike = [filler.composition_wt for filler in named]
    return frozenset(filler.name for filler in fillers() if filler.composition_wt in alike)


def _banned(bans: BansAsked) -> frozenset[str]:
    elements = {symbol(el, f"bans.elements.{k}") for k, el in enumerate(bans.elements)}
    if bans.lead:
        elements.add("Pb")
    if bans.cadmium:
        elements.add("Cd")
    return frozenset(elements)


def _chosen(question: ShortlistQuestion) -> list[Filler]:
    """The fillers to look at, each once, in the order of the table."""
    if not question.stocked_fillers:
        return list(fillers())
    stocked = {
        find_filler(text, field=f"stocked_fillers.{k}").name
        for k, text in enumerate(question.stocked_fillers)
    }
    return [filler for filler in fillers() if filler.name in stocked]


def _ranked(rank: int, candidate: Candidate, wanted: Wanted) -> RankedShown:
    window, filler = candidate.window, candidate.filler
    assert window.maximum_peak_c is not None  # something bounds it, as was checked
    assert window.setpoint_c is not None
    assert window.binding_upper is not None
    return RankedShown(
        rank=rank,
        name=filler.name,
        designations=dict(filler.designations),
        class_="braze" if filler.class_ == "braze" else "solder",
        composition_wt=dict(filler.composition_wt),
        solidus_c=candidate.solidus_c,
        liquidus_c=candidate.subject.melter.range_c[1],
        minimum_peak_c=window.minimum_peak_c,
        maximum_peak_c=window.maximum_peak_c,
        width_c=candidate.width_c,
        setpoint_c=window.setpoint_c,
        binding_lower=window.binding_lower,
        binding_upper=window.binding_upper,
        homologous_service_temperature=candidate.homologous,
        solid_above_service_c=None if wanted.service_c is None else candidate.solidus_c - wanted.service_c,
        reasons_for=_reasons(reasons_for(candidate, wanted)),
        reasons_against=_reasons(reasons_against(candidate, wanted)),
        budget=budget_shown(wanted.demands.budget, wanted.demands.spread_c, window.combined),
        source=candidate.subject.source,
    )


def _reasons(reasons: Sequence[Reason]) -> list[ReasonShown]:
    return [ReasonShown(code=reason.code, text=reason.text) for reason in reasons]
