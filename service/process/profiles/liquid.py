"""Liquid fraction along a record: the melting curve read at every moment, jumps and kinks included."""

from collections.abc import Sequence

import numpy as np
from shapely import LineString

from service.process.profiles.trace import Floats, Trace

TRUE_TO = 0.001  # of liquid fraction, or of the run's duration: how far the shortened curve may lie off

Points = Sequence[tuple[float, float]]


def fractions_at(curve: Points, temperatures_c: Floats) -> Floats:
    """Liquid fractions (n,) at temperatures (n,) from a melting curve of (°C, fraction), upwards.

    At a jump the value just above; below the first point its value, above the last its value.
    """
    t, f = np.array(curve).T
    k = np.clip(np.searchsorted(t, temperatures_c, side="right"), 1, len(t) - 1)
    rise = t[k] - t[k - 1]
    share = np.where(rise > 0.0, (temperatures_c - t[k - 1]) / np.where(rise > 0.0, rise, 1.0), 1.0)
    found: Floats = f[k - 1] + np.clip(share, 0.0, 1.0) * (f[k] - f[k - 1])
    return found


def liquid_along(trace: Trace, curve: Points) -> tuple[tuple[float, float], ...]:
    """(s, fraction) along a record, as few points as are true to TRUE_TO between straight lines."""
    times, fractions = _everything(_where_it_changes(trace, curve), curve)
    lasts = trace.end_s - trace.start_s
    bends = np.ones(len(fractions), dtype=np.bool_)
    bends[1:-1] = (fractions[1:-1] != fractions[:-2]) | (fractions[1:-1] != fractions[2:])
    points = np.column_stack([(times[bends] - trace.start_s) / lasts, fractions[bends]])
    line = LineString(points).simplify(TRUE_TO, preserve_topology=False)
    return tuple((trace.start_s + x * lasts, f) for x, f in line.coords)


def _where_it_changes(trace: Trace, curve: Points) -> Trace:
    """The record without samples between two others that are as wholly solid, or liquid, as they are."""
    t, f = np.array(curve).T
    low_c, high_c = float(t[f <= f[0]].max()), float(t[f >= f[-1]].min())
    state = (trace.temperature_c >= low_c).astype(np.int8) + (trace.temperature_c > high_c)
    kept = state == 1
    changes = state[1:] != state[:-1]
    kept[1:] |= changes
    kept[:-1] |= changes
    kept[[0, -1]] = True
    return Trace(trace.name, trace.time_s[kept], trace.temperature_c[kept])


def _everything(trace: Trace, curve: Points) -> tuple[Floats, Floats]:
    """Times and fractions at every sample and wherever the record passes a point of the curve."""
    kinks, f = np.array(curve).T
    readings, times = trace.temperature_c, trace.time_s
    here = np.searchsorted(kinks, readings, side="right")
    first, last = np.minimum(here[:-1], here[1:]), np.maximum(here[:-1], here[1:])
    passed = last - first  # how many points of the curve lie between one sample and the next
    segment = np.repeat(np.arange(len(passed)), passed)
    within = np.arange(len(segment)) - np.repeat(np.cumsum(passed) - passed, passed)
    rising = readings[segment + 1] > readings[segment]
    # passed in the order of the temperature, up or down, so that a jump's two points come out right
    point = np.where(rising, first[segment] + within, last[segment] - 1 - within)
    share = (kinks[point] - readings[segment]) / (readings[segment + 1] - readings[segment])
    crossing = times[segment] + share * (times[segment + 1] - times[segment])
    place = np.concatenate([np.arange(len(times)) * 1.0, segment + 0.5])
    order = np.argsort(place, kind="stable")
    return (
        np.concatenate([times, crossing])[order],
        np.concatenate([fractions_at(curve, readings), f[point]])[order],
    )
