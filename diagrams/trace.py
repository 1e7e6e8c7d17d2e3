"""Follows every two-phase field of a binary over temperature: exact events, then vertices between them.

A two-phase field is a strand: at each temperature one tie line, so both its borders are single-valued in
temperature. What no strand covers is single-phase.
"""

from dataclasses import dataclass, field

from diagrams.equilibrium import Isotherm
from diagrams.errors import NotConverged
from diagrams.events import Event, at_temperature, find_event, same_ties
from diagrams.gibbs import Phase, System, logit
from diagrams.tie import Tie, solve_tie
from diagrams.units import x_to_second_wt

SCAN_STEP_K = 4.0
EVENT_BRACKET_K = 0.05
CLOSEST_EVENTS_K = 1e-5
SMOOTH = 0.08  # most an end of a tie line may move between scans, mole fraction
BORDER_WT = 0.001  # most a border may deviate between vertices, wt%
BORDER_RELATIVE = 0.01  # or this share of a dilute composition, whichever is less
BORDER_FLOOR_WT = 1e-6
SHORTEST_STEP_K = 0.001

Ends = tuple[float, float]


@dataclass
class Strand:
    """One two-phase field: kelvin with the two mole fractions at each vertex, upwards in temperature."""

    first: Phase
    second: Phase
    vertices: list[tuple[float, float, float]] = field(default_factory=list)
    opens: Event | None = None
    closes: Event | None = None


@dataclass(frozen=True)
class Trace:
    """All strands and events of a system between two temperatures (kelvin)."""

    system: System
    low_k: float
    high_k: float
    strands: tuple[Strand, ...]
    events: tuple[Event, ...]


def trace(system: System, low_k: float, high_k: float) -> Trace:
    """Trace a binary between two temperatures; raises NotConverged where a change cannot be explained."""
    bottom = Isotherm(system, low_k).ties
    events = _events(system, low_k, bottom, high_k)
    strands, running = [], [Strand(t.first, t.second, [(low_k, t.left, t.right)]) for t in bottom]
    strands += running
    for event in events:
        closing = running[event.index : event.index + len(event.below)]
        for strand, (a, b) in zip(closing, event.below, strict=True):
            _close(strand, event.temperature_k, (event.points[a][1], event.points[b][1]), event)
        opening = []
        for a, b in event.above:
            (first, x1), (second, x2) = event.points[a], event.points[b]
            opening.append(Strand(first, second, [(event.temperature_k, x1, x2)], opens=event))
        running[event.index : event.index + len(closing)] = opening
        strands += opening
    top = Isotherm(system, high_k).ties
    if [t.pair for t in top] != [(s.first.model, s.second.model) for s in running]:
        raise NotConverged(f"the events found do not lead to the state at {high_k:.2f} K")
    for strand, tie in zip(running, top, strict=True):
        _close(strand, high_k, (tie.left, tie.right), None)
    for strand in strands:
        _refine(system, strand)
    return Trace(system, low_k, high_k, tuple(strands), tuple(events))


def _close(strand: Strand, temperature_k: float, ends: Ends, event: Event | None) -> None:
    strand.vertices.append((temperature_k, *ends))
    strand.closes = event


def _events(system: System, low_k: float, bottom: list[Tie], high_k: float) -> list[Event]:
    events: list[Event] = []
    steps = max(2, round((high_k - low_k) / SCAN_STEP_K))
    here, ties = low_k, bottom
    for k in range(1, steps + 1):
        # Odd fractions keep the scan off round numbers, where assessed invariants like to sit.
        there = high_k if k == steps else low_k + (high_k - low_k) * (k + 0.0137) / steps
        other = Isotherm(system, there).ties
        _between(system, here, ties, there, other, events)
        here, ties = there, other
    return events


def _between(
    system: System, low_k: float, below: list[Tie], high_k: float, above: list[Tie], events: list[Event]
) -> None:
    """Append the events between two isotherms, upwards."""
    if len(below) == len(above) and all(same_ties(a, b, SMOOTH) for a, b in zip(below, above, strict=True)):
        return
    if high_k - low_k <= EVENT_BRACKET_K:
        event = _single_event(low_k, below, high_k, above)
        if event is not None:
            events.append(event)
            return
    if high_k - low_k < CLOSEST_EVENTS_K:
        raise NotConverged(
            f"cannot explain the change at {low_k:.4f} K from {[t.pair for t in below]} "
            f"to {[t.pair for t in above]}"
        )
    middle_k = low_k + 0.4871 * (high_k - low_k)
    middle = Isotherm(system, middle_k).ties
    _between(system, low_k, below, middle_k, middle, events)
    _between(system, middle_k, middle, high_k, above, events)


def _single_event(low_k: float, below: list[Tie], high_k: float, above: list[Tie]) -> Event | None:
    prefix = 0
    shortest = min(len(below), len(above))
    while prefix < shortest and same_ties(below[prefix], above[prefix], SMOOTH / 4):
        prefix += 1
    suffix = 0
    while suffix < shortest - prefix and same_ties(below[-1 - suffix], above[-1 - suffix], SMOOTH / 4):
        suffix += 1
    return find_event(
        prefix,
        low_k,
        below[prefix : len(below) - suffix],
        high_k,
        above[prefix : len(above) - suffix],
    )


def _refine(system: System, strand: Strand) -> None:
    """Put vertices between the two ends of a strand until straight lines between them are close enough."""
    low, high = strand.vertices
    start = [low]
    span = high[0] - low[0]
    inner = [low[0] + f * span for f in (0.07, 0.5, 0.93)]
    points = [_solve(system, strand, t, low, high) for t in inner]
    for a, b in zip([low, *points], [*points, high], strict=True):
        _subdivide(system, strand, a, b, start, 0)
    strand.vertices = start


Vertex = tuple[float, float, float]


def _subdivide(system: System, strand: Strand, a: Vertex, b: Vertex, out: list[Vertex], depth: int) -> None:
    """Append the vertices after `a` up to and with `b`."""
    middle_k = 0.5 * (a[0] + b[0])
    if b[0] - a[0] > 2 * SHORTEST_STEP_K and depth < 40:
        middle = _solve(system, strand, middle_k, a, b)
        if not all(_straight(system, a[i], middle[i], b[i]) for i in (1, 2)):
            _subdivide(system, strand, a, middle, out, depth + 1)
            _subdivide(system, strand, middle, b, out, depth + 1)
            return
    out.append(b)


def _straight(system: System, low: float, middle: float, high: float) -> bool:
    first, second = system.elements
    a, m, b = (x_to_second_wt(x, first, second) for x in (low, middle, high))
    allowed = max(BORDER_FLOOR_WT, min(BORDER_WT, BORDER_RELATIVE * min(m, 100.0 - m)))
    return abs(m - 0.5 * (a + b)) <= allowed


def _solve(system: System, strand: Strand, temperature_k: float, a: Vertex, b: Vertex) -> Vertex:
    """The strand's tie line at a temperature between two known vertices."""
    share = (temperature_k - a[0]) / (b[0] - a[0])
    if a[2] - a[1] < 1e-9:  # opens in a point: the ends part like the root of the distance
        share = share**0.5
    elif b[2] - b[1] < 1e-9:
        share = 1.0 - (1.0 - share) ** 0.5
    left, right = (_between_logits(a[i], b[i], share) for i in (1, 2))
    try:
        one, two = at_temperature(strand.first, temperature_k), at_temperature(strand.second, temperature_k)
        tie = solve_tie(one, two, left, right)
        inside = all(_near(value, a[i], b[i]) for i, value in ((1, tie.left), (2, tie.right)))
        if tie.left < tie.right and inside:
            return (temperature_k, tie.left, tie.right)
    except NotConverged:
        pass  # a poor start; the global search below decides
    found = [
        t
        for t in Isotherm(system, temperature_k).ties
        if t.first is strand.first and t.second is strand.second
    ]
    if not found:
        raise NotConverged(f"{strand.first.model} + {strand.second.model} lost at {temperature_k:.4f} K")
    tie = min(found, key=lambda t: abs(t.left - left) + abs(t.right - right))
    return (temperature_k, tie.left, tie.right)


def _between_logits(a: float, b: float, share: float) -> float:
    if min(a, b) > 0.02 and max(a, b) < 0.98:
        return a + share * (b - a)
    u = logit(a) + share * (logit(b) - logit(a))
    return float(1.0 / (1.0 + 2.718281828459045**-u))


def _near(value: float, a: float, b: float) -> bool:
    low, high = min(a, b), max(a, b)
    room = 0.5 * (high - low) + 0.01
    return low - room <= value <= high + room
