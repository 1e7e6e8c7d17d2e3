"""A bath as answered."""

from diagrams.reference import reference_edition, reference_guidance
from service.process.baths import Bath, LimitSeen, Melted, bath_of
from service.process.known_limits import PROCESS_LIMITS
from service.safety import safety_for
from service.schemas.baths import (
    BathAnswer,
    BathLimit,
    BathMelting,
    BathQuestion,
    DriftShown,
    ExchangeShown,
    MeetingShown,
)
from service.schemas.source import reference_shown
from service.schemas.window import WarningShown


def bath_answer(question: BathQuestion) -> BathAnswer:
    """The bath asked about, as answered."""
    bath = bath_of(question)
    elements = frozenset().union(*(a.alloy.composition_wt for a in bath.analyses))
    if bath.replacement is not None:
        elements |= bath.replacement.elements
    hottest_c = max((m.range_c[1] for m in bath.melted if m.range_c is not None), default=None)
    return BathAnswer(
        mass_kg=bath.mass_kg,
        limits=[_limit(seen) for seen in bath.limits],
        within_limits=all(seen.checked.passed for seen in bath.limits),
        melting=[_melting(melted) for melted in bath.melted],
        exchange=_exchange(bath),
        edition=reference_edition(PROCESS_LIMITS),
        guidance=reference_guidance(PROCESS_LIMITS),
        warnings=_warnings(bath),
        safety=safety_for(elements, "solder", hottest_c),
    )


def _limit(seen: LimitSeen) -> BathLimit:
    checked, drift = seen.checked, seen.drift
    value, margin = checked.value, checked.margin
    assert value is not None  # an element not analysed counts as 0
    assert margin is not None
    return BathLimit(
        element=seen.limit.label,
        side=checked.side,
        bound_wt=checked.bound,
        value_wt=value,
        analysed=seen.analysed,
        margin_wt=margin,
        passed=checked.passed,
        drift=None
        if drift is None
        else DriftShown(points=drift.points, wt_per_day=drift.slope, standard_error=drift.slope_error),
        meets=MeetingShown(
            outlook=seen.meets.outlook,
            day=seen.meets.day,
            earliest_day=seen.meets.earliest,
            latest_day=seen.meets.latest,
        ),
        reference=reference_shown(seen.limit.source),
    )


def _melting(melted: Melted) -> BathMelting:
    low, high = melted.range_c or (None, None)
    subject = melted.subject
    return BathMelting(
        day=melted.day,
        alloy=None if subject is None else subject.shown,
        solidus_c=low,
        liquidus_c=high,
        sludge_c=high if melted.compound else None,
        first_solid=melted.first_solid,
        unknown=melted.unknown,
        source=None if subject is None else subject.source,
    )


def _exchange(bath: Bath) -> ExchangeShown | None:
    found = bath.exchange
    if found is None:
        return None
    if found.share is None:
        text = f"No exchange helps: the replacement does not bring {found.element} within its target."
    elif found.share == 0.0:
        text = "Nothing to draw off: every element lies within its target."
    else:
        text = (
            f"Draw off {found.share * bath.mass_kg:.4g} kg ({100 * found.share:.3g} % of the bath) and make "
            f"it up with the replacement; {found.element} asks for it."
        )
    return ExchangeShown(
        possible=found.share is not None,
        share=found.share,
        draw_off_kg=None if found.share is None else found.share * bath.mass_kg,
        element=found.element,
        after_wt=dict(found.after_wt),
        text=text,
    )


def _warnings(bath: Bath) -> list[WarningShown]:
    found = []
    few = [seen.limit.label for seen in bath.limits if seen.drift is not None and seen.drift.points < 3]
    if few or len(bath.analyses) < 3:
        text = "Fewer than three analyses: a drift and its uncertainty cannot be told."
        found.append(WarningShown(code="too-few-analyses", text=text))
    missing = sorted({seen.limit.label for seen in bath.limits if not seen.analysed})
    if missing:
        text = f"Not analysed, and counted as 0: {', '.join(missing)}."
        found.append(WarningShown(code="not-analysed", text=text))
    return found
