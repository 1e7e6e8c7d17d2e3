"""Lines of equal liquid fraction through the stations of a section."""

from itertools import pairwise

from diagrams.sections.section import HEIGHTS, Contour, Point, Run, Station
from diagrams.sections.stations import DECIMALS_C

DRAWN = (0.1, 0.25, 0.5, 0.75, 0.9)


def contours_of(runs: tuple[Run, ...]) -> tuple[Contour, ...]:
    """One contour for each fraction of DRAWN, in as many lines as the frame cuts it into."""
    return tuple(Contour(fraction, _lines(runs, fraction)) for fraction in DRAWN)


def _lines(runs: tuple[Run, ...], fraction: float) -> tuple[tuple[Point, ...], ...]:
    lines: list[tuple[Point, ...]] = []
    line: list[Point] = []
    for run in runs:
        for station in run.stations:
            t = _from_which_on(station, fraction)
            if t is None:
                lines.append(tuple(line))
                line = []
            elif not line or line[-1] != (station.to_share, t):
                line.append((station.to_share, t))
    lines.append(tuple(line))
    return tuple(line for line in lines if len(line) > 1)


def _from_which_on(station: Station, fraction: float) -> float | None:
    """The lowest temperature from which on the fraction is liquid; None if that lies beyond the frame."""
    points: list[tuple[float, float]] = []
    for k, liquids in enumerate(station.liquids):
        under, over = station.levels[k], station.levels[k + 1]
        heights = HEIGHTS if len(liquids) > 1 else (0.0, 1.0)
        values = liquids if len(liquids) > 1 else liquids * 2
        points += [(under + h * (over - under), f) for h, f in zip(heights, values, strict=True)]
    if points[-1][1] < fraction or points[0][1] >= fraction:
        return None
    for (t0, f0), (t1, f1) in reversed(list(pairwise(points))):
        if f0 < fraction <= f1:
            return round(t0 + (t1 - t0) * (fraction - f0) / (f1 - f0), DECIMALS_C)
        if f0 < fraction:
            return round(t1, DECIMALS_C)
    return None
