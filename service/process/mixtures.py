"""What becomes of alloys that melt together, and what that does to the melting of the first."""

import math
from collections.abc import Sequence
from dataclasses import dataclass

from diagrams.alloys import Alloy
from diagrams.density import densities_source, density
from diagrams.errors import NotCovered, OutsideData
from diagrams.questions.mixing import Portion, mixed
from diagrams.reference import reference_edition
from service.process.amounts import mass_of
from service.process.effort import check_effort
from service.process.equilibrium import state_at, state_shown
from service.process.known_limits import PROCESS_LIMITS, speaks_of
from service.process.melting import points_of, shown_point
from service.process.mixture_warnings import Sourced, mixture_warnings
from service.process.placed import Placed, about, placed_alloy, placed_or_known
from service.safety import Process, safety_for
from service.schemas.alloy import alloy_shown
from service.schemas.mixtures import (
    Mixed,
    MixedLiquid,
    MixtureAnswer,
    MixturesQuestion,
    PartUsed,
    Shift,
    SourcedWarning,
    StateAt,
)
from service.schemas.source import SourceUsed, reference_shown

Range = tuple[float, float]
_TRACES = "A little of an element may be left out of the reckoning with leave_out_traces_below_wt."


@dataclass(frozen=True, eq=False)
class Part:
    """So much (grams) of an alloy, and its data by itself if there are any."""

    alloy: Alloy
    mass_g: float
    subject: Placed | None

    @property
    def portion(self) -> Portion:
        """What goes into the mixture."""
        return Portion(self.alloy, self.mass_g)

    @property
    def range_c(self) -> Range | None:
        """Its own solidus and liquidus; None if no data tell."""
        if self.subject is None:
            return None
        try:
            return self.subject.melter.range_c
        except OutsideData:
            return None


@dataclass(frozen=True, eq=False)
class Mixture:
    """Parts together; `unknown` says why no data tell how they melt, and then the data are None."""

    parts: tuple[Part, ...]
    alloy: Alloy
    subject: Placed | None
    range_c: Range | None
    unknown: str | None = None

    @property
    def elements(self) -> frozenset[str]:
        """All that is in it."""
        return frozenset(el for part in self.parts for el in part.alloy.composition_wt)

    @property
    def process(self) -> Process | None:
        """Solder or braze; where no data tell, as the first part."""
        subject = self.subject or self.parts[0].subject
        return None if subject is None else subject.process


def mixture_of(question: MixturesQuestion) -> MixtureAnswer:
    """The mixture asked for; InvalidInput, NotCovered, OutsideData name the field that is wrong."""
    parts = []
    for k, asked in enumerate(question.parts):
        subject, alloy = placed_or_known(asked.alloy, f"parts.{k}.alloy")
        parts.append(Part(alloy, mass_of(asked, alloy.composition_wt, f"parts.{k}"), subject))
    check_effort((f"parts.{k}.alloy", part.subject) for k, part in enumerate(parts))
    mix = mixture(parts, "parts", question.leave_out_traces_below_wt)
    shown = mixture_shown(mix, question.temperature_c)
    hottest_c = max((c for c in (shown.liquidus_c, question.temperature_c) if c is not None), default=None)
    return MixtureAnswer(**dict(shown), safety=safety_for(mix.elements, mix.process, hottest_c))


def mixture(parts: Sequence[Part], field: str, leave_out_below_wt: float | None = None) -> Mixture:
    """What parts give together; raises InvalidInput, NotCovered, OutsideData, naming `field`.

    Where no data tell how it melts, it is refused, unless it is gold in a solder, on which the tables hold
    limits.
    """
    whole = mixed([part.portion for part in parts], field)
    try:
        subject = placed_alloy(whole, field, leave_out_below_wt)
        with about(subject):
            return Mixture(tuple(parts), whole, subject, subject.melter.range_c)
    except (NotCovered, OutsideData) as error:
        if not speaks_of(whole.composition_wt):
            error.remedy = f"{error.remedy} {_TRACES}".strip()
            raise
        return Mixture(tuple(parts), whole, None, None, f"{error} {error.remedy}".strip())


def mixture_shown(mix: Mixture, temperature_c: float | None) -> Mixed:
    """The mixture as answered."""
    ranges = [part.range_c for part in mix.parts]
    total_g = math.fsum(part.mass_g for part in mix.parts)
    solidus_c, liquidus_c = mix.range_c or (None, None)
    subjects = [part.subject for part in mix.parts]
    warnings = mixture_warnings(mix.alloy.composition_wt, subjects, solidus_c)
    subject = mix.subject
    return Mixed(
        composition_wt=dict((subject or mix).alloy.composition_wt),
        left_out_wt={} if subject is None else subject.shown.left_out_wt,
        mass_g=total_g,
        parts=[_part(part, own, total_g) for part, own in zip(mix.parts, ranges, strict=True)],
        solidus_c=solidus_c,
        liquidus_c=liquidus_c,
        melting_unknown=mix.unknown,
        curve=[] if subject is None else [shown_point(*point) for point in points_of(subject.melter)],
        shift=_shift(mix.range_c, ranges[0]),
        all_mixed_liquid=None if liquidus_c is None else _all_liquid(liquidus_c, ranges),
        at_temperature=_state(subject, temperature_c),
        densities=reference_shown(densities_source()),
        warnings=[warning_shown(warned) for warned in warnings],
        source=limits_source() if subject is None else subject.source,
    )


def limits_source() -> SourceUsed:
    """The source of an answer that rests on the table of limits alone."""
    edition = reference_edition(PROCESS_LIMITS)
    return SourceUsed(diagram=PROCESS_LIMITS.removesuffix(".csv"), edition=edition, method="standard table")


def warning_shown(warned: Sourced) -> SourcedWarning:
    """A warning as answered."""
    return SourcedWarning(
        code=warned.code,
        text=warned.text,
        reference=reference_shown(warned.source),
        edition=warned.edition,
    )


def _part(part: Part, own: Range | None, total_g: float) -> PartUsed:
    subject = part.subject
    return PartUsed(
        alloy=alloy_shown(part.alloy) if subject is None else subject.shown,
        mass_g=part.mass_g,
        mass_share=part.mass_g / total_g,
        density_g_per_cm3=density(part.alloy.composition_wt),
        solidus_c=None if own is None else own[0],
        liquidus_c=None if own is None else own[1],
        source=None if subject is None else subject.source,
    )


def _shift(mix: Range | None, first: Range | None) -> Shift | None:
    if mix is None or first is None:
        return None
    return Shift(
        solidus_c=mix[0] - first[0],
        liquidus_c=mix[1] - first[1],
        pasty_range_c=(mix[1] - mix[0]) - (first[1] - first[0]),
    )


def _all_liquid(liquidus_c: float, ranges: Sequence[Range | None]) -> MixedLiquid:
    own = [each[1] for each in ranges if each is not None]
    every_c = max(liquidus_c, *own) if len(own) == len(ranges) else None
    return MixedLiquid(at_equilibrium_c=liquidus_c, every_part_molten_c=every_c)


def _state(mix: Placed | None, temperature_c: float | None) -> StateAt | None:
    if mix is None or temperature_c is None:
        return None
    found = state_at(mix, temperature_c)
    return StateAt(
        **dict(state_shown(found)),
        temperature_c=temperature_c,
        on_boundary=found.on_boundary,
        just_below=state_shown(found.below) if found.below is not None else None,
    )
