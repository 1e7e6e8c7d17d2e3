"""How an alloy freezes, as answered: at equilibrium beside without diffusion in the solid."""

from functools import lru_cache
from itertools import pairwise

import numpy as np

from diagrams.errors import OutsideData
from diagrams.questions.melter import Melter
from diagrams.solidification.scheil import Frozen, frozen
from diagrams.solidification.states import freezing_of
from service.process.placed import Placed, about
from service.safety import safety_for
from service.schemas.solidification import (
    Forming,
    FreezingStep,
    HoldStill,
    SolidificationAnswer,
    SolidTotal,
)
from service.schemas.window import WarningShown

MOST_STEPS = 40  # told of either way
RESIDUAL = 0.001
MATTERS_C = 3.0  # a joint that is held still too short a time by so much is at risk
TRACE_WT = 1e-6


def solidification_of(subject: Placed, residual: float, where: str = "alloy") -> SolidificationAnswer:
    """The answer for an alloy; NotCovered where only printed values tell of it."""
    melter = subject.melter
    with about(subject, where):
        found = _frozen(melter)
        solidus_c, liquidus_c = melter.range_c
        equilibrium_c = _falls_at_equilibrium(melter, residual)
        told = _told_at_equilibrium(melter, (solidus_c, liquidus_c))
    without_c = found.falls_to(residual)
    filler = melter.alloy.filler
    data = freezing_of(melter)
    return SolidificationAnswer(
        alloy=subject.shown,
        residual_liquid_fraction=residual,
        liquidus_c=liquidus_c,
        solidus_c=solidus_c,
        hold_still_c=HoldStill(equilibrium=equilibrium_c, without_diffusion=without_c),
        below_equilibrium_c=_apart(equilibrium_c, without_c),
        below_standard_solidus_c=_apart(None if filler is None else filler.solidus_c, without_c),
        steps=[*told, *_thinned(found)],
        solids=[
            SolidTotal(
                name=name,
                mass_fraction=amount,
                composition_wt=_percents(data.elements, mean.tolist()),
            )
            for name, (amount, mean) in found.solids.items()
        ],
        last_liquid_wt=_percents(data.elements, found.last_w.tolist()),
        unfrozen=found.unfrozen,
        warnings=_warnings(found, equilibrium_c, without_c, data.range_c[0]),
        source=subject.source,
        safety=safety_for(subject.elements, subject.process, liquidus_c),
    )


def hold_still_c(subject: Placed, solidus_c: float) -> tuple[float, str]:
    """Below which temperature a joint is frozen however it cools, and how that comes about.

    Where only printed values tell of the alloy that is its lowest solidus `solidus_c`.
    """
    if subject.melter.curve is None:
        return solidus_c, "lowest printed solidus; after quick cooling the last liquid may freeze lower"
    found = _frozen(subject.melter)
    reached_c = found.falls_to(RESIDUAL)
    if reached_c is None:
        lowest_c = freezing_of(subject.melter).range_c[0]
        return (
            lowest_c,
            "lowest temperature of the data, at which some may still be liquid after quick cooling",
        )
    told = f"without diffusion in the solid less than {RESIDUAL:g} of the mass is liquid below it"
    return min(reached_c, solidus_c), told


@lru_cache(maxsize=256)
def _frozen(melter: Melter) -> Frozen:
    data = freezing_of(melter)
    composition_wt = melter.alloy.composition_wt
    w = np.array([composition_wt.get(el, 0.0) / 100.0 for el in data.elements])
    return frozen(data, w, melter.range_c[1])


def _falls_at_equilibrium(melter: Melter, residual: float) -> float | None:
    curve = melter.curve
    assert curve is not None  # printed values were refused before
    try:
        return curve.first_exceeds(residual)
    except OutsideData:
        return None


def _told_at_equilibrium(melter: Melter, range_c: tuple[float, float]) -> list[FreezingStep]:
    """The curve's points between solidus and liquidus, downwards, with what forms from one to the next."""
    curve = melter.curve
    assert curve is not None  # printed values were refused before
    points = [(c, f) for c, f in curve.points if range_c[0] <= c <= range_c[1]]
    kept = sorted({round(x) for x in np.linspace(0, len(points) - 1, MOST_STEPS).tolist()}, reverse=True)
    steps: list[FreezingStep] = []
    before: dict[str, float] = {}
    for k in kept:
        temperature_c, fraction = points[k]
        state = melter.equilibrium(temperature_c)
        # at a jump the upper point is the state above it, the lower one that below
        solids = state.below if state.below is not None and fraction < 1.0 and _lower(points, k) else state
        now = {p.name: p.mass_fraction for p in solids.phases if p.kind != "liquid"}
        formed = [Forming(name=n, mass_fraction=m - before.get(n, 0.0)) for n, m in now.items()]
        steps.append(
            FreezingStep(
                model="equilibrium",
                temperature_c=temperature_c,
                liquid_mass_fraction=fraction,
                forming=[f for f in formed if f.mass_fraction > 0.0],
            )
        )
        before = now
    return steps


def _lower(points: list[tuple[float, float]], k: int) -> bool:
    return k + 1 < len(points) and points[k + 1][0] == points[k][0]


def _thinned(found: Frozen) -> list[FreezingStep]:
    """At most MOST_STEPS steps; what formed in those left out is added to the next."""
    count = len(found.steps)
    marks = sorted({round(x) for x in np.linspace(0, count - 1, min(count, MOST_STEPS)).tolist()})
    told = []
    for before, k in pairwise([-1, *marks]):
        formed: dict[str, float] = {}
        for step in found.steps[before + 1 : k + 1]:
            for name, mass in step.formed.items():
                formed[name] = formed.get(name, 0.0) + mass
        step = found.steps[k]
        told.append(
            FreezingStep(
                model="without diffusion",
                temperature_c=step.temperature_c,
                liquid_mass_fraction=step.liquid,
                forming=[Forming(name=n, mass_fraction=m) for n, m in formed.items() if m > 0.0],
            )
        )
    return told


def _apart(upper_c: float | None, lower_c: float | None) -> float | None:
    return None if upper_c is None or lower_c is None else upper_c - lower_c


def _percents(elements: tuple[str, ...], w: list[float]) -> dict[str, float]:
    return {el: 100.0 * share for el, share in zip(elements, w, strict=True) if 100.0 * share > TRACE_WT}


def _warnings(
    found: Frozen, equilibrium_c: float | None, without_c: float | None, lowest_c: float
) -> list[WarningShown]:
    warnings = []
    apart_c = _apart(equilibrium_c, without_c)
    if apart_c is not None and apart_c > MATTERS_C:
        text = (
            f"Cooled quickly, liquid can be left {apart_c:.0f} °C below the solidus of equilibrium: hold the "
            f"joint still down to {without_c:.0f} °C, and count with that when it is heated again."
        )
        warnings.append(WarningShown(code="freezes-late", text=text))
    if found.unfrozen:
        text = (
            f"{100 * found.unfrozen:.2g} % is still liquid at {lowest_c:g} °C, where the data end: how far "
            "down it stays liquid is not known."
        )
        warnings.append(WarningShown(code="outside-data", text=text))
    return warnings
