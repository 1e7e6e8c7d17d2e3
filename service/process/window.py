"""The temperature window of a joint: how hot it must read at least, how hot it may read at most, and why.

The coldest joint must read at least `minimum_peak_c`, while the hottest, `spread_c` above it, may read at
most `maximum_peak_c`. A sensor may be wrong by its tolerance either way, so every lower term is raised and
every upper term lowered by it.
"""

from collections.abc import Sequence
from dataclasses import dataclass

from diagrams.errors import InvalidInput
from diagrams.questions.melter import Span
from service.process.effort import check_effort
from service.process.placed import Placed, about
from service.process.window_terms import (
    BRAZING_MAXIMUM,
    BRAZING_MINIMUM,
    TARGET,
    EarlierJoint,
    Term,
    UpperLimit,
    limit_term,
    practice_terms,
    remelting_term,
    target_term,
)
from service.process.window_warnings import Warned, warnings_of


@dataclass(frozen=True, kw_only=True)
class Demands:
    """What is asked of a joint; fractions 0 to 1, temperatures °C, none of the differences negative."""

    target_liquid_fraction: float
    superheat_c: float = 0.0
    sensor_tolerance_c: float = 0.0
    spread_c: float = 0.0
    upper_limits: tuple[UpperLimit, ...] = ()
    earlier_joints: tuple[EarlierJoint, ...] = ()


@dataclass(frozen=True)
class Collision:
    """Two terms that leave no window; `by_c` degrees are missing between them, the spread included."""

    lower: str
    upper: str
    by_c: float
    text: str


@dataclass(frozen=True)
class JointSeen:
    """What an earlier joint goes through if the hottest joint reads the maximum.

    `nominal` counts the reading as true and the composition as nominal; `worst` takes the sensor to read low
    by its tolerance and the least favourable composition. Both None where there is no maximum, where it
    lies beyond the data, or where these tell bounds only.
    """

    joint: EarlierJoint
    starts_to_melt: Span
    nominal: float | None
    worst: float | None


@dataclass(frozen=True, kw_only=True)
class Window:
    """The window; without any upper term it is open above: no maximum, no width, no set point, feasible.

    `setpoint_c` is the middle of what is allowed, for the mean of the hottest and the coldest reading.
    """

    minimum_peak_c: float
    maximum_peak_c: float | None
    width_c: float | None
    feasible: bool
    setpoint_c: float | None
    lower_terms: tuple[Term, ...]
    upper_terms: tuple[Term, ...]
    binding_lower: str
    binding_upper: str | None
    collision: Collision | None
    earlier_joints: tuple[JointSeen, ...]
    warnings: tuple[Warned, ...]


def find_window(filler: Placed, demands: Demands, where: str = "alloy") -> Window:
    """The window of a joint made with a filler; `where` is the path of the filler's alloy in the question.

    Raises InvalidInput for names given twice and for too much to compute, OutsideData where a temperature
    needed lies beyond the data.
    """
    _check_names(demands)
    joints = ((f"earlier_joints.{k}.alloy", joint.subject) for k, joint in enumerate(demands.earlier_joints))
    check_effort([(where, filler), *joints])
    tolerance_c = demands.sensor_tolerance_c
    with about(filler, where):
        solidus_c = filler.melter.kept(0.0).nominal
        lower = [target_term(filler, demands.target_liquid_fraction, demands.superheat_c, tolerance_c)]
    practice_lower, practice_upper = practice_terms(filler, tolerance_c)
    lower += practice_lower
    upper = [limit_term(limit, tolerance_c) for limit in demands.upper_limits] + practice_upper
    starts = []
    for k, joint in enumerate(demands.earlier_joints):
        with about(joint.subject, f"earlier_joints.{k}.alloy"):
            starts.append(joint.subject.melter.kept(0.0))
            upper += remelting_term(joint, tolerance_c)
    highest = max(lower, key=lambda term: term.value_c)
    lowest = min(upper, key=lambda term: term.value_c, default=None)
    maximum_c = None if lowest is None else lowest.value_c
    seen = tuple(
        _seen(joint, start, maximum_c, tolerance_c)
        for joint, start in zip(demands.earlier_joints, starts, strict=True)
    )
    width_c = None if maximum_c is None else maximum_c - highest.value_c - demands.spread_c
    feasible = width_c is None or width_c >= 0.0
    middle_c = None if maximum_c is None or not feasible else 0.5 * (highest.value_c + maximum_c)
    return Window(
        minimum_peak_c=highest.value_c,
        maximum_peak_c=maximum_c,
        width_c=width_c,
        feasible=feasible,
        setpoint_c=middle_c,
        lower_terms=tuple(lower),
        upper_terms=tuple(upper),
        binding_lower=highest.name,
        binding_upper=None if lowest is None else lowest.name,
        collision=None if feasible or lowest is None else _collision(highest, lowest, demands.spread_c),
        earlier_joints=seen,
        warnings=warnings_of(
            filler,
            demands.earlier_joints,
            upper,
            target_liquid_fraction=demands.target_liquid_fraction,
            sensor_tolerance_c=tolerance_c,
            solidus_c=solidus_c,
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


def _seen(joint: EarlierJoint, starts: Span, maximum_c: float | None, tolerance_c: float) -> JointSeen:
    if maximum_c is None:
        return JointSeen(joint, starts, None, None)
    melter = joint.subject.melter
    worst = melter.most_liquid_up_to(maximum_c + tolerance_c)
    return JointSeen(joint, starts, melter.liquid_up_to(maximum_c), worst)


def _collision(lower: Term, upper: Term, spread_c: float) -> Collision:
    by_c = lower.value_c + spread_c - upper.value_c
    apart = f", and the hottest joint lies {spread_c:g} °C above the coldest" if spread_c else ""
    text = (
        f"“{lower.name}” asks the coldest joint to read {lower.value_c:.2f} °C at least, “{upper.name}” "
        f"allows the hottest {upper.value_c:.2f} °C at most{apart}: {by_c:.2f} °C are missing."
    )
    return Collision(lower.name, upper.name, by_c, text)
