"""How much of an alloy there is: its mass, or the geometry that gives it. Lengths mm and µm, masses g."""

import math
from collections.abc import Mapping

from diagrams.density import density
from diagrams.errors import InvalidInput
from service.schemas.mixtures import PartAsked

# The fields that name an amount, each with those that go with it; one way must be chosen.
WAYS = (
    ("mass_g", ()),
    ("ball_diameter_mm", ("count",)),
    ("paste_volume_mm3", ("metal_volume_share",)),
    ("plating_thickness_um", ("area_mm2",)),
)
_MAY_BE_LEFT_OUT = frozenset({"count"})
_CHOICE = (
    "Give exactly one of mass_g, ball_diameter_mm (with count), paste_volume_mm3 (with metal_volume_share) "
    "and plating_thickness_um (with area_mm2)."
)


def ball_g(diameter_mm: float, count: int, density_g_per_cm3: float) -> float:
    """Mass of balls."""
    return count * math.pi / 6.0 * diameter_mm**3 * density_g_per_cm3 / 1000.0


def paste_g(volume_mm3: float, metal_volume_share: float, density_g_per_cm3: float) -> float:
    """Mass of the metal in a paste."""
    return volume_mm3 * metal_volume_share * density_g_per_cm3 / 1000.0


def layer_g(thickness_um: float, area_mm2: float, density_g_per_cm3: float) -> float:
    """Mass of a layer."""
    return thickness_um / 1000.0 * area_mm2 * density_g_per_cm3 / 1000.0


def layer_um(mass_g: float, area_mm2: float, density_g_per_cm3: float) -> float:
    """Thickness of a layer of a mass, µm."""
    return mass_g * 1e6 / (area_mm2 * density_g_per_cm3)


def mass_of(part: PartAsked, composition_wt: Mapping[str, float], where: str) -> float:
    """Mass of a part in g; InvalidInput names the field at `where` that is missing or one too many."""
    given = [(way, more) for way, more in WAYS if getattr(part, way) is not None]
    if len(given) != 1:
        field = f"{where}.{given[1][0]}" if given else f"{where}.mass_g"
        told = f"as {' and '.join(way for way, _ in given)}" if given else "in none of the possible ways"
        raise InvalidInput(f"The amount is given {told}.", field=field, remedy=_CHOICE)
    ((way, more),) = given
    for name in more:
        if getattr(part, name) is None and name not in _MAY_BE_LEFT_OUT:
            raise InvalidInput(
                f"{name} is missing beside {way}.", field=f"{where}.{name}", remedy=f"Add {name}."
            )
    for other in {name for _, names in WAYS for name in names} - set(more):
        if getattr(part, other) is not None:
            raise InvalidInput(
                f"{other} does not go with {way}.", field=f"{where}.{other}", remedy="Leave it out."
            )
    if part.mass_g is not None:
        return part.mass_g
    heavy = density(composition_wt)
    if part.ball_diameter_mm is not None:
        return ball_g(part.ball_diameter_mm, part.count or 1, heavy)
    if part.paste_volume_mm3 is not None and part.metal_volume_share is not None:
        return paste_g(part.paste_volume_mm3, part.metal_volume_share, heavy)
    assert part.plating_thickness_um is not None  # the way chosen, complete as checked above
    assert part.area_mm2 is not None
    return layer_g(part.plating_thickness_um, part.area_mm2, heavy)
