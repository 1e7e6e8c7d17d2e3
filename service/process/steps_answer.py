"""A step plan between the wire and the rules."""

from collections.abc import Sequence

from service.process.budget import Budget
from service.process.budget_asked import budget_of, budget_shown
from service.process.placed import placed
from service.process.steps import (
    Collided,
    Joint,
    Plan,
    alternatives_of,
    check_names,
    limits_clash,
    plan_of,
)
from service.process.window import Demands, Window
from service.process.window_answer import limit_of, terms_shown
from service.process.window_terms import EarlierJoint
from service.safety import safety_for
from service.schemas.steps import (
    SeenLater,
    StepAlternative,
    StepAsked,
    StepCollision,
    StepsAnswer,
    StepShown,
    StepsQuestion,
)
from service.schemas.window import LiquidReached, WarningShown


def steps_of(question: StepsQuestion) -> StepsAnswer:
    """The plan asked for; raises InvalidInput and its like naming the field."""
    names = [asked.name for asked in question.joints]
    check_names(names)
    budget = budget_of(question)
    joints = [
        _joint(question, asked, f"joints.{k}", names, budget) for k, asked in enumerate(question.joints)
    ]
    plan = plan_of(joints)
    alternatives = [] if plan.steps else alternatives_of(joints, plan, question.stocked_fillers)
    elements = frozenset().union(*(joint.filler.elements for joint in joints))
    hottest = max(joints, key=lambda joint: joint.filler.melter.range_c[1])
    return StepsAnswer(
        feasible=bool(plan.steps),
        order=[joint.name for joint, _ in plan.steps],
        steps=[_step(joint, window) for joint, window in plan.steps],
        collision=_collision(plan.collisions[0]) if plan.collisions else None,
        collisions=[_collision(found) for found in plan.collisions],
        alternatives=[
            StepAlternative(
                joint=a.joint, filler=a.filler, order=list(a.order), narrowest_width_c=a.narrowest_c
            )
            for a in alternatives
        ],
        safety=safety_for(elements, hottest.filler.process, _hottest_c(plan, hottest)),
    )


def _joint(
    question: StepsQuestion, asked: StepAsked, field: str, names: Sequence[str], budget: Budget
) -> Joint:
    filler = placed(asked.alloy, f"{field}.alloy")
    limits = tuple(limit_of(limit, f"{field}.upper_limits.{k}") for k, limit in enumerate(asked.upper_limits))
    limits_clash(limits, names, field)
    return Joint(
        filler,
        EarlierJoint(asked.name, filler, asked.max_liquid_fraction_later, asked.margin_later_c),
        Demands(
            target_liquid_fraction=asked.target_liquid_fraction,
            superheat_c=asked.superheat_c,
            spread_c=question.spread_c,
            budget=budget,
            upper_limits=limits,
        ),
        field,
    )


def _step(joint: Joint, window: Window) -> StepShown:
    bounded = window.maximum_peak_c is not None
    return StepShown(
        name=joint.name,
        alloy=joint.filler.shown,
        minimum_peak_c=window.minimum_peak_c,
        maximum_peak_c=window.maximum_peak_c,
        width_c=window.width_c,
        setpoint_c=window.setpoint_c,
        lower_terms=terms_shown(window.lower_terms),
        upper_terms=terms_shown(window.upper_terms),
        binding_lower=window.binding_lower,
        binding_upper=window.binding_upper,
        budget=budget_shown(joint.demands.budget, joint.demands.spread_c, window.combined),
        earlier_joints=[
            SeenLater(
                name=seen.joint.name,
                max_liquid_fraction=seen.joint.max_liquid_fraction,
                liquid_mass_fraction=LiquidReached(nominal=seen.nominal, worst=seen.worst)
                if bounded
                else None,
            )
            for seen in window.earlier_joints
        ],
        warnings=[WarningShown(code=warned.code, text=warned.text) for warned in window.warnings],
        source=joint.filler.source,
    )


def _collision(found: Collided) -> StepCollision:
    return StepCollision(one=found.one, other=found.other, by_c=found.by_c, text=found.text)


def _hottest_c(plan: Plan, hottest: Joint) -> float:
    peaks = [window.maximum_peak_c or window.minimum_peak_c for _, window in plan.steps]
    return max(peaks, default=hottest.filler.melter.range_c[1])
