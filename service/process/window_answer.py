"""A window between the wire and the rules."""

from service.process.melting import span_of
from service.process.placed import Placed, placed, placed_text
from service.process.window import Collision, Demands, JointSeen, Window, find_window
from service.process.window_terms import EarlierJoint, UpperLimit
from service.safety import safety_for
from service.schemas.window import (
    CollisionShown,
    JointShown,
    LiquidReached,
    TermShown,
    WarningShown,
    WindowAddress,
    WindowAnswer,
    WindowQuestion,
)

THE_LIMIT = "limit"


def window_of(question: WindowQuestion) -> WindowAnswer:
    """The window asked for in a body."""
    filler = placed(question.alloy)
    demands = Demands(
        target_liquid_fraction=question.target_liquid_fraction,
        superheat_c=question.superheat_c,
        sensor_tolerance_c=question.sensor_tolerance_c,
        spread_c=question.spread_c,
        upper_limits=tuple(UpperLimit(limit.name, limit.limit_c) for limit in question.upper_limits),
        earlier_joints=tuple(
            EarlierJoint(
                joint.name,
                placed(joint.alloy, f"earlier_joints.{k}.alloy"),
                joint.max_liquid_fraction,
                joint.margin_c,
            )
            for k, joint in enumerate(question.earlier_joints)
        ),
    )
    return _shown(filler, demands, find_window(filler, demands))


def window_at(address: WindowAddress) -> WindowAnswer:
    """The window asked for in an address line."""
    filler = placed_text(address.alloy, address.leave_out_traces_below_wt)
    limits = () if address.limit_c is None else (UpperLimit(THE_LIMIT, address.limit_c),)
    demands = Demands(
        target_liquid_fraction=address.target_liquid_fraction,
        superheat_c=address.superheat_c,
        sensor_tolerance_c=address.sensor_tolerance_c,
        spread_c=address.spread_c,
        upper_limits=limits,
    )
    return _shown(filler, demands, find_window(filler, demands, ""))


def _shown(filler: Placed, demands: Demands, found: Window) -> WindowAnswer:
    elements = filler.elements.union(*(joint.subject.elements for joint in demands.earlier_joints))
    hottest_c = max(found.minimum_peak_c + demands.spread_c, found.maximum_peak_c or found.minimum_peak_c)
    return WindowAnswer(
        alloy=filler.shown,
        minimum_peak_c=found.minimum_peak_c,
        maximum_peak_c=found.maximum_peak_c,
        width_c=found.width_c,
        feasible=found.feasible,
        setpoint_c=found.setpoint_c,
        lower_terms=[TermShown(name=t.name, value_c=t.value_c, reason=t.reason) for t in found.lower_terms],
        upper_terms=[TermShown(name=t.name, value_c=t.value_c, reason=t.reason) for t in found.upper_terms],
        binding_lower=found.binding_lower,
        binding_upper=found.binding_upper,
        collision=None if found.collision is None else _collision(found.collision),
        earlier_joints=[_joint(seen, found.maximum_peak_c is not None) for seen in found.earlier_joints],
        warnings=[WarningShown(code=warned.code, text=warned.text) for warned in found.warnings],
        source=filler.source,
        safety=safety_for(elements, filler.process, hottest_c),
    )


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
