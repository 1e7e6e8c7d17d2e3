"""Carries columns on to neighbouring compositions, many at once, and proves what comes out.

Each change of phases is found at the new composition with the temperature as an unknown; then every state
between the changes is solved for and shown to lie on the lowest tangent plane. What is not proven is None.
"""

from collections import Counter
from dataclasses import replace

import numpy as np

from diagrams.gibbs import Floats
from diagrams.many.crossing import crossing
from diagrams.many.equilibrium import UNDER_TANGENT
from diagrams.many.newton import Flags, States, solve
from diagrams.many.stretch import liquid_fraction, names_of, stacked
from diagrams.many.system import Ints
from diagrams.many.tangent import deepest
from diagrams.sections.line import Line
from diagrams.sections.upright import HEIGHTS, Part, Upright
from diagrams.units import celsius_to_kelvin

AT_CHANGE = 1e-6  # of RT and of moles: leeway at a change itself, where a phase just touches the plane
PROVEN = [0, 7]  # of HEIGHTS
SAME_LOG = 1e-4  # twins nearer than this in ln x are one


def carried(line: Line, known: list[Upright], to_share: Floats) -> list[Upright | None]:
    """Columns at new compositions (B,), each from its own known one; all known ones have one sequence."""
    overall = line.overall(to_share)
    first = known[0]
    low, high = (celsius_to_kelvin(t) for t in line.temperature_range_c)
    count = len(known)
    changes = np.empty((count, len(first.parts) + 1))
    changes[:, 0], changes[:, -1] = low, high
    good = np.ones(count, dtype=np.bool_)
    for k in range(1, len(first.parts)):
        changes[:, k], converged = _change(line, known, overall, k)
        good &= converged
    with np.errstate(invalid="ignore"):
        good &= np.all(np.diff(changes, axis=1) > 0.0, axis=1)
    rows = np.flatnonzero(good)
    parts: list[list[Part]] = [[] for _ in range(count)]
    for k in range(len(first.parts)):
        if not rows.size:
            break
        found, proven = _states(line, known, overall, changes, k, rows)
        width = len(HEIGHTS)
        for i, row in enumerate(rows.tolist()):
            if proven[i]:
                states = found.take(slice(i * width, (i + 1) * width))
                names = names_of(line.sample, states, width // 2)
                liquid = liquid_fraction(line.sample, states)
                parts[row].append(Part(first.parts[k].sets, names, states, liquid))
        rows = rows[proven]
    alive = set(rows.tolist())
    return [
        Upright(float(to_share[i]), tuple(parts[i]), *line.temperature_range_c) if i in alive else None
        for i in range(count)
    ]


def by_one(one: tuple[int, ...], two: tuple[int, ...]) -> bool:
    """Whether one of two sets of phases is the other and one phase more."""
    a, b = Counter(one), Counter(two)
    return (a - b).total() + (b - a).total() == 1


def _change(line: Line, known: list[Upright], overall: Floats, k: int) -> tuple[Floats, Flags]:
    """Temperature of the change under part k at the new compositions."""
    under, over = known[0].parts[k - 1], known[0].parts[k]
    more, less = (under, over) if len(under.sets) > len(over.sets) else (over, under)
    gone = Counter(more.sets) - Counter(less.sets)
    if not by_one(under.sets, over.sets):
        t = np.array([float(column.parts[k].states.temperatures_k[0]) for column in known])
        return t, np.ones(len(known), dtype=np.bool_)  # invariant: proven, or not, by the states beside it
    part, end = (k - 1, -1) if more is under else (k, 0)
    ends = [column.parts[part].states for column in known]
    start = stacked([states.take([end]) for states in ends])
    (phase,) = gone
    may = [i for i, number in enumerate(start.sets) if number == phase]
    zero = min(may, key=lambda i: abs(float(start.amounts[0, i])))
    found = crossing(line.sample.system, overall, start, zero)
    return found.temperatures_k, found.converged


def _states(
    line: Line, known: list[Upright], overall: Floats, changes: Floats, k: int, rows: Ints
) -> tuple[States, Flags]:
    """States of part k at HEIGHTS for some rows, one row after the other, and which rows are proven."""
    width = len(HEIGHTS)
    low, high = changes[rows, k], changes[rows, k + 1]
    t = low[:, None] + (high - low)[:, None] * HEIGHTS
    t[:, -1] = high
    start = replace(stacked([known[row].parts[k].states for row in rows]), temperatures_k=t.ravel())
    found = solve(line.sample.system, np.repeat(overall[rows], width, axis=0), start)
    good = found.converged.copy()
    parts = known[0].parts
    tried = np.zeros(width, dtype=np.bool_)
    tried[PROVEN] = True
    # at a change the plane is that of the part above, unless it is an invariant taken over from a neighbour
    tried[-1] = k + 1 == len(parts) or not by_one(parts[k].sets, parts[k + 1].sets)
    leeway = np.where((HEIGHTS == 0.0) | (HEIGHTS == 1.0), AT_CHANGE, 10.0 * UNDER_TANGENT)
    leeway, tried = np.tile(leeway, len(rows)), np.tile(tried, len(rows))
    with np.errstate(invalid="ignore"):
        good &= found.amounts.min(axis=1) >= -leeway
    good &= _apart(found)
    left = np.flatnonzero(good & tried)
    if left.size:
        good[left] = deepest(line.sample, found.take(left)).height >= -leeway[left]
    proven: Flags = np.asarray(np.all(good.reshape(len(rows), width), axis=1))
    return found, proven


def _apart(states: States) -> Flags:
    """Which states do not hold one composition twice."""
    good = np.ones(len(states.mu), dtype=np.bool_)
    for i, number in enumerate(states.sets):
        for j in range(i):
            if states.sets[j] == number and states.logs[i].size:
                with np.errstate(invalid="ignore"):
                    good &= np.max(np.abs(states.logs[i] - states.logs[j]), axis=1) > SAME_LOG
    return good
