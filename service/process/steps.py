"""Step soldering: the order of the heatings, their windows, or what collides and which filler would help."""

from collections.abc import Sequence
from dataclasses import dataclass, replace

from diagrams.errors import DiagramsError, InvalidInput
from service.process.effort import check_effort
from service.process.placed import Placed, about, placed
from service.process.step_order import Heating, clashes, order_of
from service.process.window import Demands, Window, find_window
from service.process.window_terms import EarlierJoint, UpperLimit, remelting_term
from service.process.window_verdict import MELTS_AT_ONCE, melting_at_its_bound
from service.schemas.alloy import AlloyAsked

BELOW_C = 1e-6  # a joint that melts at once at its bound has to stay below it


@dataclass(frozen=True, eq=False)
class Joint:
    """A joint to be made: its filler, what its own heating is asked, what it may take later."""

    filler: Placed
    as_earlier: EarlierJoint
    demands: Demands
    field: str

    @property
    def name(self) -> str:
        """As the question calls it."""
        return self.as_earlier.name


@dataclass(frozen=True)
class Collided:
    """Two joints, or one against its own limits; `by_c` degrees are missing."""

    one: str
    other: str | None
    by_c: float
    text: str


@dataclass(frozen=True, eq=False)
class Plan:
    """Joints in order with their windows; without an order the collisions, least missing first."""

    steps: tuple[tuple[Joint, Window], ...]
    collisions: tuple[Collided, ...]


@dataclass(frozen=True)
class Alternative:
    """A filler in place of a joint's, the order it allows and its narrowest window."""

    joint: str
    filler: str
    order: tuple[str, ...]
    narrowest_c: float | None


def plan_of(joints: Sequence[Joint]) -> Plan:
    """The plan of joints with names of their own; raises what `find_window` raises."""
    check_effort([(f"{joint.field}.alloy", joint.filler) for joint in joints])
    heatings, alone = [], []
    for joint in joints:
        window = _window(joint, ())
        if not window.feasible and window.collision is not None:
            alone.append(Collided(joint.name, None, window.collision.by_c, window.collision.text))
        heatings.append(Heating(joint.name, window.minimum_peak_c + joint.demands.spread_c, _keeps_c(joint)))
    order = order_of(heatings)
    pairs = [
        Collided(
            clash.one,
            clash.other,
            clash.least_c,
            f"Neither of “{clash.one}” and “{clash.other}” can come first: made second, “{clash.one}” passes "
            f"what “{clash.other}” bears by {clash.one_passes_other_c:.2f} °C, “{clash.other}” what "
            f"“{clash.one}” bears by {clash.other_passes_one_c:.2f} °C.",
        )
        for clash in clashes(heatings)
    ]
    if order is None or alone:
        return Plan((), tuple(sorted([*alone, *pairs], key=lambda c: (c.by_c, c.one, c.other or ""))))
    by_name = {joint.name: joint for joint in joints}
    steps: list[tuple[Joint, Window]] = []
    for heating in order:
        joint = by_name[heating.name]
        steps.append((joint, _window(joint, [done for done, _ in steps])))
    return Plan(tuple(steps), ())


def alternatives_of(joints: Sequence[Joint], plan: Plan, stocked: Sequence[str]) -> list[Alternative]:
    """Stocked fillers that allow an order in place of one that collides, the widest first.

    Raises what `placed` raises for a designation, naming `stocked_fillers.k`.
    """
    fillers = [
        (text, placed(AlloyAsked(designation=text), f"stocked_fillers.{k}")) for k, text in enumerate(stocked)
    ]
    colliding = {name for collision in plan.collisions for name in (collision.one, collision.other)}
    found = []
    for k, joint in enumerate(joints):
        if joint.name not in colliding:
            continue
        for text, filler in fillers:
            if filler.melter is joint.filler.melter:
                continue
            other = replace(joint, filler=filler, as_earlier=replace(joint.as_earlier, subject=filler))
            try:
                tried = plan_of([*joints[:k], other, *joints[k + 1 :]])
            except DiagramsError:
                continue  # no data tell what this filler would do
            if tried.steps:
                widths = [window.width_c for _, window in tried.steps if window.width_c is not None]
                order = tuple(done.name for done, _ in tried.steps)
                found.append(Alternative(joint.name, text, order, min(widths, default=None)))
    return sorted(found, key=lambda a: (-(float("inf") if a.narrowest_c is None else a.narrowest_c), a.joint))


def check_names(names: Sequence[str]) -> None:
    """Raise InvalidInput for a name that is empty or taken."""
    seen: set[str] = set()
    for k, name in enumerate(names):
        key = " ".join(name.split()).casefold()
        if not key or key in seen:
            raise InvalidInput(
                f"The name “{name}” is {'taken' if key else 'empty'}.",
                field=f"joints.{k}.name",
                remedy="Give every joint a name of its own.",
            )
        seen.add(key)


def limits_clash(limits: Sequence[UpperLimit], names: Sequence[str], field: str) -> None:
    """Raise InvalidInput where a limit is called like a joint: terms are told apart by name."""
    taken = {" ".join(name.split()).casefold() for name in names}
    for k, limit in enumerate(limits):
        if " ".join(limit.name.split()).casefold() in taken:
            raise InvalidInput(
                f"The limit “{limit.name}” is called like a joint.",
                field=f"{field}.upper_limits.{k}.name",
                remedy="Give it another name.",
            )


def _window(joint: Joint, earlier: Sequence[Joint]) -> Window:
    demands = replace(joint.demands, earlier_joints=tuple(done.as_earlier for done in earlier))
    return find_window(joint.filler, demands, f"{joint.field}.alloy")


def _keeps_c(joint: Joint) -> float | None:
    """What the hottest joint of a later heating may read, °C; None if this one may melt again."""
    with about(joint.filler, f"{joint.field}.alloy"):
        terms = remelting_term(joint.as_earlier, joint.demands.budget)
        if not terms:
            return None
        at_once = melting_at_its_bound(joint.as_earlier) > MELTS_AT_ONCE
    return terms[0].value_c - (BELOW_C if at_once else 0.0)
