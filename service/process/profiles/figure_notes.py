"""What the picture of a run says beside its plot, and how it tells its sensors apart."""

from collections.abc import Sequence

from diagrams.figure_sheet import Note
from diagrams.figure_style import CAUTION, INVARIANT, MARK, both_scales
from service.process.profiles.check import Run
from service.process.profiles.judge import SensorJudged
from service.process.profiles.limits import Checked
from service.process.sensors import SensorClass

COLOURS = ("#1f4e79", "#2f7d32", "#6a3d7c", "#8a5a00", "#00707a", "#c0561a", "#3d3f8f", "#555f66")
STYLES = ("-", (0, (5, 2)), (0, (1.5, 1.5)), (0, (6, 2, 1.5, 2)))
PASSES, FAILS = "#2f7d32", MARK
MOST_SENSORS, MOST_FAILURES = 14, 8  # that are named


def verdict_told(run: Run) -> str:
    """Passed or failed, and the tightest margin."""
    tightest = run.judged.tightest
    if tightest is None:
        return "nothing asked of it"
    told = "passed" if run.judged.passed else "failed"
    whose = f" of {_short(run.judged.tightest_sensor)}" if run.judged.tightest_sensor else ""
    if tightest.margin is None:
        return f"{told}: {tightest.limit}{whose} not shown by the record"
    return f"{told}; tightest: {tightest.limit}{whose}, margin {_amount(tightest.margin, tightest.unit)}"


def side_notes(run: Run) -> list[Note]:
    """All side notes, from the top down."""
    judged, levels, bounds = run.judged, run.levels, run.bounds
    colour = PASSES if judged.passed else FAILS
    notes = [Note("Passed" if judged.passed else "Failed", head=True, colour=colour)]
    failures = _failures(run)
    notes += [Note(text, colour=FAILS) for text in failures[:MOST_FAILURES]]
    if len(failures) > MOST_FAILURES:
        notes.append(Note(f"and {len(failures) - MOST_FAILURES} more", colour=FAILS))
    notes.append(Note("Window of the peak", head=True, colour=INVARIANT))
    low, high = (None if c is None else both_scales(c) for c in (bounds.low, bounds.high))
    notes.append(Note(f"lowest {low or 'not bounded'}"))
    notes.append(Note(f"highest {high or 'not bounded'}"))
    notes.append(Note(_counted(run)))
    notes.append(Note("Melting range", head=True, colour=CAUTION))
    notes += [
        Note(f"solidus {both_scales(levels.solidus_c)}"),
        Note(f"liquidus {both_scales(levels.liquidus_c)}"),
        Note(f"target reached from {both_scales(levels.target_c)}"),
    ]
    notes.append(Note("Sensors and their peaks", head=True))
    for k, sensor in enumerate(judged.sensors[:MOST_SENSORS]):
        told = ", ".join(filter(None, ("part" if sensor.sensor.kind == "part" else "", _drawn(sensor, k))))
        more = f" ({told})" if told else ""
        text = f"{_short(sensor.sensor.trace.name)}{more}: {sensor.peak.value:.1f} °C"
        if sensor.sensor.limit_c is not None:
            text += f", at most {sensor.sensor.limit_c:.1f} °C (dotted)"
        notes.append(Note(text, swatch=colour_of(k)))
    if len(judged.sensors) > MOST_SENSORS:
        notes.append(Note(f"and {len(judged.sensors) - MOST_SENSORS} more"))
    notes.append(Note("Hold still", head=True))
    lasts_s = judged.hold_still.lasts_s
    lasts = "until after the record's end" if lasts_s is None else f"{lasts_s:.1f} s"
    notes.append(Note(f"{lasts} (shaded), frozen below {run.hold_still_c:.1f} °C"))
    return notes


def passes(judged: SensorJudged) -> bool:
    """Whether a sensor meets all that is asked of it."""
    return all(check.passed for check in judged.checks)


def colour_of(k: int) -> str:
    """The colour of the k-th sensor."""
    return COLOURS[k % len(COLOURS)]


def style_of(judged: SensorJudged, k: int) -> str | tuple[int, Sequence[float]]:
    """The dashes of the k-th sensor."""
    return STYLES[_dashes(judged, k)]


def _counted(run: Run) -> str:
    """Where the window comes from and which uncertainties it counts."""
    if run.window is None:
        return "given with the question"
    budget = run.demands.budget
    sensor = budget.sensor.name if isinstance(budget.sensor, SensorClass) else ""
    data = "data as compared with prints" if budget.data_c is None else ""
    return ", ".join(filter(None, (f"{budget.combination} of alloy, data and sensor", sensor, data)))


def _failures(run: Run) -> list[str]:
    named: list[tuple[Checked, str]] = [
        (check, f" of {_short(judged.sensor.trace.name)}")
        for judged in run.judged.sensors
        for check in judged.checks
    ]
    named += [(check, "") for check in run.judged.run_checks]
    failed = [(check, whose) for check, whose in named if not check.passed]
    failed.sort(key=lambda pair: (pair[0].tightness, pair[0].limit, pair[1]))
    return [_failure(check, whose) for check, whose in failed]


def _failure(check: Checked, whose: str) -> str:
    if check.value is None:
        return f"{check.limit}{whose}: {check.why}"
    value, bound = _amount(check.value, check.unit), _amount(check.bound, check.unit)
    return f"{check.limit}{whose}: {value}, {check.side} {bound}"


def _amount(value: float, unit: str) -> str:
    told = f"{value:.2f} {unit}" if unit == "°C/s" else f"{value:.1f} {unit}"
    return told.replace("-", "−")


def _short(name: str) -> str:
    """A name for the picture: not too long, and of characters that a picture may hold."""
    plain = "".join(c if c.isprintable() else "\ufffd" for c in name)
    return plain if len(plain) <= 30 else f"{plain[:29]}…"


def _drawn(judged: SensorJudged, k: int) -> str:
    """The style in words."""
    return ("", "dashed", "dotted", "dash and dot")[_dashes(judged, k)]


def _dashes(judged: SensorJudged, k: int) -> int:
    """Parts are dashed; more sensors than colours are told apart by their dashes."""
    return (k // len(COLOURS) + (1 if judged.sensor.kind == "part" else 0)) % len(STYLES)
