"""A judged run as it is answered."""

from collections.abc import Iterable

from service.process.budget import NO_ERRORS
from service.process.budget_asked import budget_shown
from service.process.profiles.check import Run, checked_run
from service.process.profiles.judge import SensorJudged
from service.process.profiles.limits import Checked
from service.process.sensors import hottest_true_c
from service.process.window_answer import terms_shown
from service.process.window_terms import EarlierJoint, remelting_term
from service.safety import safety_for
from service.schemas.profile import ProfileQuestion
from service.schemas.profile_verdict import (
    EarlierJointSeen,
    LevelsShown,
    LimitChecked,
    LiquidAt,
    ProfileAnswer,
    RepairMade,
    SensorShown,
    StandardUsed,
    Tightest,
    WindowJudged,
)
from service.schemas.source import reference_shown
from service.schemas.uncertainty import BudgetShown
from service.schemas.window import LiquidReached, WarningShown


def profile_of(question: ProfileQuestion) -> ProfileAnswer:
    """The verdict on a run, as answered."""
    run = checked_run(question)
    judged = run.judged
    peaks = [s.peak.value for s in judged.sensors if s.sensor.kind == "joint"]
    elements = run.filler.elements.union(*(joint.subject.elements for joint in run.demands.earlier_joints))
    return ProfileAnswer(
        verdict="pass" if judged.passed else "fail",
        tightest=_tightest(judged.tightest, judged.tightest_sensor),
        alloy=run.filler.shown,
        window=WindowJudged(
            minimum_peak_c=run.bounds.low,
            maximum_peak_c=run.bounds.high,
            feasible=_feasible(run),
            given=run.window is None,
        ),
        budget=_budget(run),
        levels=LevelsShown(
            solidus_c=run.levels.solidus_c,
            liquidus_c=run.levels.liquidus_c,
            target_c=run.levels.target_c,
            hold_still_c=run.hold_still_c,
            hold_still_by=run.hold_still_by,
        ),
        sensors=[_sensor(sensor) for sensor in judged.sensors],
        run_limits=_checks(judged.run_checks),
        peak_spread_c=max(peaks) - min(peaks),
        hold_still_s=judged.hold_still.lasts_s,
        hold_still_from_s=judged.hold_still.from_s,
        hold_still_to_s=judged.hold_still.to_s,
        earlier_joints=[_earlier(run, joint) for joint in run.demands.earlier_joints],
        standard=_standard(run),
        repairs=[RepairMade(repair=m.repair, sensor=m.sensor, count=m.count) for m in run.mended],
        warnings=_warnings(run),
        source=run.filler.source,
        safety=safety_for(elements, run.filler.process, run.hottest_c),
    )


def _budget(run: Run) -> BudgetShown | None:
    if run.window is None:
        return None
    return budget_shown(run.demands.budget, run.demands.spread_c, run.window.combined)


def _feasible(run: Run) -> bool:
    if run.window is not None:
        return run.window.feasible
    low, high = run.bounds.low, run.bounds.high
    return low is None or high is None or low <= high


def _tightest(found: Checked | None, sensor: str | None) -> Tightest | None:
    if found is None:
        return None
    return Tightest(limit=found.limit, side=found.side, sensor=sensor, margin=found.margin, unit=found.unit)


def _sensor(judged: SensorJudged) -> SensorShown:
    return SensorShown(
        name=judged.sensor.trace.name,
        on=judged.sensor.kind,
        peak_c=judged.peak.value,
        peak_at_s=judged.peak.time_s,
        time_above_solidus_s=judged.time_above_solidus_s,
        time_at_target_s=judged.time_at_target_s,
        limits=_checks(judged.checks),
        liquid=[LiquidAt(time_s=t, liquid_mass_fraction=f) for t, f in judged.liquid],
    )


def _checks(checks: Iterable[Checked]) -> list[LimitChecked]:
    return [
        LimitChecked(
            limit=c.limit,
            side=c.side,
            value=c.value,
            bound=c.bound,
            margin=c.margin,
            unit=c.unit,
            passed=c.passed,
            why=c.why,
        )
        for c in checks
    ]


def _earlier(run: Run, joint: EarlierJoint) -> EarlierJointSeen:
    melter = joint.subject.melter
    worst_c = hottest_true_c(run.demands.budget.sensor, run.hottest_c)
    return EarlierJointSeen(
        name=joint.name,
        alloy=joint.subject.shown,
        max_liquid_fraction=joint.max_liquid_fraction,
        bound=next(iter(terms_shown(remelting_term(joint, run.demands.budget))), None),
        liquid_mass_fraction=LiquidReached(
            nominal=melter.liquid_up_to(run.hottest_c), worst=melter.most_liquid_up_to(worst_c)
        ),
        source=joint.subject.source,
    )


def _standard(run: Run) -> StandardUsed | None:
    found = run.standard
    if found is None:
        return None
    return StandardUsed(
        profile=found.key,
        edition=found.edition,
        note=found.note,
        reference=reference_shown(found.source),
    )


def _warnings(run: Run) -> list[WarningShown]:
    """What the window warns of, and a window that no run can meet."""
    found = [] if run.window is None else [*run.window.warnings]
    shown = [WarningShown(code=warned.code, text=warned.text) for warned in found]
    if not _feasible(run):
        text = "Nothing can meet this window: its minimum lies above its maximum, or the spread is too wide."
        shown.append(WarningShown(code="no-window", text=text))
    if run.window is None and not run.demands.earlier_joints and run.demands.budget != NO_ERRORS:
        text = (
            "The window was given, and there are no earlier joints: the uncertainty budget that came with it "
            "counts nowhere."
        )
        shown.append(WarningShown(code="budget-unused", text=text))
    if run.standard is not None and run.standard.note:
        text = f"{run.standard.key}: {run.standard.note}."
        shown.append(WarningShown(code="standard-note", text=text))
    return shown
