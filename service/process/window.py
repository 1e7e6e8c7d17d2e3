"""The temperature window of a joint: how hot it must read at least, how hot it may read at most, and why.

The coldest joint must read at least `minimum_peak_c`, while the hottest, `spread_c` above it, may read at
most `maximum_peak_c`. What is uncertain about alloy, data and sensor raises every lower term and lowers every
upper one, as the budget counts it.
"""

from collections.abc import Mapping, Sequence
from dataclasses import dataclass

from diagrams.errors import InvalidInput
from diagrams.questions.melter import Span
from service.process.budget import NO_ERRORS, Budget
from service.process.effort import check_effort
from service.process.placed import Placed, about
from service.process.sensors import Sensor, hottest_true_c
from service.process.window_parts import Part, Term
from service.process.window_terms import (
    BRAZING_MAXIMUM,
    BRAZING_MINIMUM,
    TARGET,
    EarlierJoint,
    UpperLimit,
    limit_term,
    practice_terms,
    remelting_term,
    target_term,
)
from service.process.window_verdict import Collision, Verdict, judge
from service.process.window_warnings import Warned, warnings_of
from service.schemas.uncertainty_words import ROOT_SUM_SQUARE, WORST_CASE, Combination


@dataclass(frozen=True, kw_only=True)
class Demands:
    """What is asked of a joint; fractions 0 to 1, temperatures °C, none of the differences negative."""

    target_liquid_fraction: float
    superheat_c: float = 0.0
    spread_c: float = 0.0
    budget: Budget = NO_ERRORS
    upper_limits: tuple[UpperLimit, ...] = ()
    earlier_joints: tuple[EarlierJoint, ...] = ()


@dataclass(frozen=True)
class JointSeen:
    """What an earlier joint goes through if the hottest joint reads the maximum.

    `nominal` counts the reading as true and the composition as nominal; `worst` takes the sensor to read low
    by its tolerance and the least favourable composition, however the budget is combined. Both None where
    there is no maximum, where it lies beyond the data, or where these tell bounds only.
    """

    joint: EarlierJoint
    starts_to_melt: Span
    nominal: float | None
    worst: float | None


@dataclass(frozen=True, kw_only=True)
class Window:
    """The window; without any upper term it is open above: no maximum, no width, no set point, feasible.

    `combined` has the verdict for both ways to combine uncertainties, whichever was chosen.

    `width_parts` add up to the width. `setpoint_c` is the middle of what is allowed, for the mean of the
    hottest and the coldest reading.
    """

    minimum_peak_c: float
    maximum_peak_c: float | None
    width_c: float | None
    width_parts: tuple[Part, ...]
    feasible: bool
    setpoint_c: float | None
    lower_terms: tuple[Term, ...]
    upper_terms: tuple[Term, ...]
    binding_lower: str
    binding_upper: str | None
    collision: Collision | None
    combined: Mapping[Combination, Verdict]
    earlier_joints: tuple[JointSeen, ...]
    warnings: tuple[Warned, ...]


def find_window(
    filler: Placed, demands: Demands, where: str = "alloy", *, seeing_joints: bool = True
) -> Window:
    """The window of a joint made with a filler; `where` is the path of the filler's alloy in the question.

    Without `seeing_joints` it is left open what earlier joints go through, which may take a search for each.

    Raises InvalidInput for names given twice and for too much to compute, OutsideData where a temperature
    needed lies beyond the data.
    """
    _check_names(demands)
    joints = ((f"earlier_joints.{k}.alloy", joint.subject) for k, joint in enumerate(demands.earlier_joints))
    check_effort([(where, filler), *joints], tolerances=True)
    budget = demands.budget
    with about(filler, where):
        solidus_c = filler.melter.kept(0.0).nominal
        lower = [target_term(filler, demands.target_liquid_fraction, demands.superheat_c, budget)]
    practice_lower, practice_upper = practice_terms(filler, budget)
    lower += practice_lower
    upper = [limit_term(limit, budget) for limit in demands.upper_limits] + practice_upper
    starts = []
    for k, joint in enumerate(demands.earlier_joints):
        with about(joint.subject, f"earlier_joints.{k}.alloy"):
            starts.append(joint.subject.melter.kept(0.0))
            upper += remelting_term(joint, budget)
    combined = {
        by: judge(
            [term.by(by) for term in lower],
            [term.by(by) for term in upper],
            demands.spread_c,
            demands.earlier_joints,
        )
        for by in (WORST_CASE, ROOT_SUM_SQUARE)
    }
    verdict = combined[budget.combination]
    maximum_c = None if verdict.upper is None else verdict.upper.value_c
    seen = tuple(
        _seen(joint, start, maximum_c, budget.sensor)
        for joint, start in zip(demands.earlier_joints, starts, strict=True)
        if seeing_joints
    )
    return Window(
        minimum_peak_c=verdict.lower.value_c,
        maximum_peak_c=maximum_c,
        width_c=verdict.width_c,
        width_parts=verdict.width_parts,
        feasible=verdict.feasible,
        setpoint_c=verdict.setpoint_c,
        lower_terms=tuple(lower),
        upper_terms=tuple(upper),
        binding_lower=verdict.lower.name,
        binding_upper=None if verdict.upper is None else verdict.upper.name,
        collision=verdict.collision,
        combined=combined,
        earlier_joints=seen,
        warnings=warnings_of(
            filler,
            demands.earlier_joints,
            demands.upper_limits,
            upper,
            target_liquid_fraction=demands.target_liquid_fraction,
            solidus_c=solidus_c,
            data_compared=budget.data_c is None,
        ),
    )


def _check_names(demands: Demands) -> None:
    """Terms are told apart by name alone."""
    taken = {name.casefold() for name in (TARGET, BRAZING_MINIMUM, BRAZING_MAXIMUM)}
    named: Sequence[tuple[str, Sequence[UpperLimit | EarlierJoint]]] = (
        ("upper_limits", demands.upper_limits),
        ("earlier_joints", demands.earlier_joints),
    )
    for field, items in named:
        for k, item in enumerate(items):
            key = " ".join(item.name.split()).casefold()
            if not key or key in taken:
                raise InvalidInput(
                    f"The name “{item.name}” is {'taken' if key else 'empty'}.",
                    field=f"{field}.{k}.name",
                    remedy="Give every upper limit and every earlier joint a name of its own.",
                )
            taken.add(key)


def _seen(joint: EarlierJoint, starts: Span, maximum_c: float | None, sensor: Sensor) -> JointSeen:
    if maximum_c is None:
        return JointSeen(joint, starts, None, None)
    melter = joint.subject.melter
    worst = melter.most_liquid_up_to(hottest_true_c(sensor, maximum_c))
    return JointSeen(joint, starts, melter.liquid_up_to(maximum_c), worst)
