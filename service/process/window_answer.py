"""A window between the wire and the rules."""

from collections.abc import Iterable

from diagrams.errors import InvalidInput
from diagrams.fillers import shown
from service.process.budget_asked import budget_of, budget_shown
from service.process.melting import span_of
from service.process.placed import Placed, placed, placed_text
from service.process.upper_limits import upper_limit
from service.process.window import Demands, JointSeen, Window, find_window
from service.process.window_parts import Part, Term
from service.process.window_terms import EarlierJoint, UpperLimit
from service.process.window_verdict import Collision
from service.safety import safety_for
from service.schemas.address import tolerance_of
from service.schemas.shortlists import ShortlistQuestion
from service.schemas.uncertainty import UncertaintyShown
from service.schemas.uncertainty_words import ROOT_SUM_SQUARE, WORST_CASE
from service.schemas.window import (
    CollisionShown,
    JointShown,
    LimitAsked,
    LiquidReached,
    PartShown,
    TermShown,
    WarningShown,
    WindowAddress,
    WindowAnswer,
    WindowQuestion,
)

THE_LIMIT, THE_KNOWN_LIMIT = "limit", "known limit"


def window_of(question: WindowQuestion) -> WindowAnswer:
    """The window asked for in a body."""
    filler = placed(question.alloy)
    demands = demands_of(question)
    return _shown(filler, demands, find_window(filler, demands))


def demands_of(question: WindowQuestion | ShortlistQuestion, where: str = "") -> Demands:
    """What a body asks of a joint besides its filler; `where` is the path of the question, for errors.

    Raises InvalidInput for limits, and as `placed` does for earlier joints.
    """
    before = f"{where}." if where else ""
    return Demands(
        target_liquid_fraction=question.target_liquid_fraction,
        superheat_c=question.superheat_c,
        spread_c=question.spread_c,
        budget=budget_of(question),
        upper_limits=tuple(
            limit_of(limit, f"{before}upper_limits.{k}") for k, limit in enumerate(question.upper_limits)
        ),
        earlier_joints=tuple(
            EarlierJoint(
                joint.name,
                placed(joint.alloy, f"{before}earlier_joints.{k}.alloy"),
                joint.max_liquid_fraction,
                joint.margin_c,
            )
            for k, joint in enumerate(question.earlier_joints)
        ),
    )


def window_at(address: WindowAddress) -> WindowAnswer:
    """The window asked for in an address line."""
    tolerance = tolerance_of(address.tolerance_wt)
    filler = placed_text(address.alloy, address.leave_out_traces_below_wt, tolerance)
    limits = [] if address.limit_c is None else [UpperLimit(THE_LIMIT, address.limit_c)]
    if address.known_limit is not None:
        known = upper_limit(address.known_limit, "known_limit")
        limits.append(UpperLimit(THE_KNOWN_LIMIT, known.limit_c, known=known))
    demands = Demands(
        target_liquid_fraction=address.target_liquid_fraction,
        superheat_c=address.superheat_c,
        spread_c=address.spread_c,
        budget=budget_of(address),
        upper_limits=tuple(limits),
    )
    return _shown(filler, demands, find_window(filler, demands, ""))


def _shown(filler: Placed, demands: Demands, found: Window) -> WindowAnswer:
    elements = filler.elements.union(
        *(joint.subject.elements for joint in demands.earlier_joints),
        *(limit.known.elements for limit in demands.upper_limits if limit.known is not None),
    )
    hottest_c = max(found.minimum_peak_c + demands.spread_c, found.maximum_peak_c or found.minimum_peak_c)
    return WindowAnswer(
        alloy=filler.shown,
        minimum_peak_c=found.minimum_peak_c,
        maximum_peak_c=found.maximum_peak_c,
        width_c=found.width_c,
        feasible=found.feasible,
        setpoint_c=found.setpoint_c,
        width_parts=_parts(found.width_parts),
        lower_terms=terms_shown(found.lower_terms),
        upper_terms=terms_shown(found.upper_terms),
        binding_lower=found.binding_lower,
        binding_upper=found.binding_upper,
        collision=None if found.collision is None else _collision(found.collision),
        budget=budget_shown(demands.budget, demands.spread_c, found.combined),
        earlier_joints=[_joint(seen, found.maximum_peak_c is not None) for seen in found.earlier_joints],
        warnings=[WarningShown(code=warned.code, text=warned.text) for warned in found.warnings],
        source=filler.source,
        safety=safety_for(elements, filler.process, hottest_c),
    )


def limit_of(asked: LimitAsked, where: str) -> UpperLimit:
    """A limit given or looked up; InvalidInput unless it is exactly one of both."""
    if (asked.limit_c is None) is (asked.known is None):
        both = asked.known is not None
        raise InvalidInput(
            f"“{shown(asked.name)}” has {'both limit_c and known' if both else 'neither limit_c nor known'}.",
            field=f"{where}.{'known' if both else 'limit_c'}",
            remedy="Give exactly one: a temperature as limit_c, or a key of GET /v1/known-limits as known.",
        )
    if asked.known is None:
        assert asked.limit_c is not None  # one of both, as checked above
        return UpperLimit(asked.name, asked.limit_c, asked.margin_c)
    known = upper_limit(asked.known, f"{where}.known")
    return UpperLimit(asked.name, known.limit_c, asked.margin_c, known)


def terms_shown(terms: Iterable[Term]) -> list[TermShown]:
    """Terms as answered."""
    return [
        TermShown(
            name=t.name,
            value_c=t.value_c,
            reason=t.reason,
            parts=_parts(t.parts),
            uncertainties=[
                UncertaintyShown(name=part.name, size_c=part.value_c, reason=part.reason)
                for part in t.uncertain
            ],
            worst_case_c=t.by(WORST_CASE).value_c,
            root_sum_square_c=t.by(ROOT_SUM_SQUARE).value_c,
        )
        for t in terms
    ]


def _parts(parts: Iterable[Part]) -> list[PartShown]:
    return [PartShown(name=part.name, value_c=part.value_c, reason=part.reason) for part in parts]


def _collision(found: Collision) -> CollisionShown:
    return CollisionShown(lower=found.lower, upper=found.upper, by_c=found.by_c, text=found.text)


def _joint(seen: JointSeen, bounded: bool) -> JointShown:
    return JointShown(
        name=seen.joint.name,
        alloy=seen.joint.subject.shown,
        max_liquid_fraction=seen.joint.max_liquid_fraction,
        margin_c=seen.joint.margin_c,
        starts_to_melt_c=span_of(seen.starts_to_melt),
        liquid_mass_fraction=LiquidReached(nominal=seen.nominal, worst=seen.worst) if bounded else None,
        source=seen.joint.subject.source,
    )
