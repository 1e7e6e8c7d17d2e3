"""Limits on a metal that dissolves into a joint, and the amount at which each is reached."""

from collections.abc import Iterator

from diagrams.alloys import Alloy
from diagrams.density import element_densities, volume_cm3
from service.process.dissolved import Amount, thickness_of
from service.process.known_limits import (
    KnownLimit,
    gold_limit,
    gold_thickness_limit,
    gold_volume_limit,
    rohs_cadmium,
    rohs_lead,
    tin_based,
)
from service.schemas.dissolution import LimitReached
from service.schemas.source import reference_shown


def limits_of(metal: str, amount: Amount, alloy: Alloy, solder_g: float) -> list[LimitReached]:
    """What the tables say of this metal in such a joint, in a steady order."""
    return list(_limits(metal, amount, alloy, solder_g))


def _limits(metal: str, amount: Amount, alloy: Alloy, solder_g: float) -> Iterator[LimitReached]:
    wt = alloy.composition_wt
    if metal == "Au" and tin_based(wt):
        yield _by_mass(gold_limit("Pb" in wt), metal, amount, alloy, solder_g)
        yield _by_volume(gold_volume_limit(), metal, amount, alloy, solder_g)
        if amount.thickness_um is not None and amount.by != "published rate":
            removal = gold_thickness_limit()
            mass_g = amount.mass_g * removal.limit / amount.thickness_um
            yield _shown(removal, metal, amount, amount.thickness_um, mass_g)
    if metal == "Pb" and wt.get("Pb", 0.0) <= rohs_lead().limit:
        yield _by_mass(rohs_lead(), metal, amount, alloy, solder_g)
    if metal == "Cd" and wt.get("Cd", 0.0) <= rohs_cadmium().limit:
        yield _by_mass(rohs_cadmium(), metal, amount, alloy, solder_g)


def _by_mass(limit: KnownLimit, metal: str, amount: Amount, alloy: Alloy, solder_g: float) -> LimitReached:
    """In wt%: of solder and metal together x grams make w = (a₀ m + 100 x) / (m + x)."""
    before_wt = alloy.composition_wt.get(metal, 0.0)
    value = (before_wt * solder_g + 100.0 * amount.mass_g) / (solder_g + amount.mass_g)
    at_g = max(0.0, solder_g * (limit.limit - before_wt) / (100.0 - limit.limit))
    return _shown(limit, metal, amount, value, at_g)


def _by_volume(limit: KnownLimit, metal: str, amount: Amount, alloy: Alloy, solder_g: float) -> LimitReached:
    """In vol%, each element keeping its volume."""
    heavy = element_densities()[metal]
    shares_g = {el: wt * solder_g / 100.0 for el, wt in alloy.composition_wt.items()}
    solder_cm3, before_cm3 = volume_cm3(shares_g), shares_g.get(metal, 0.0) / heavy
    added_cm3 = amount.mass_g / heavy
    value = 100.0 * (before_cm3 + added_cm3) / (solder_cm3 + added_cm3)
    at_cm3 = (limit.limit * solder_cm3 - 100.0 * before_cm3) / (100.0 - limit.limit)
    return _shown(limit, metal, amount, value, max(0.0, at_cm3 * heavy))


def _shown(limit: KnownLimit, metal: str, amount: Amount, value: float, at_g: float) -> LimitReached:
    unit = limit.unit
    assert unit in ("wt%", "vol%", "µm")  # the rows asked for have these
    return LimitReached(
        name=limit.name,
        limit=limit.limit,
        unit="wt%" if unit == "wt%" else "vol%" if unit == "vol%" else "µm",
        value=value,
        reached=value >= limit.limit,
        at_mass_g=at_g,
        at_thickness_um=thickness_of(amount, metal, at_g),
        note=limit.note,
        reference=reference_shown(limit.source),
        edition=limit.edition,
    )
