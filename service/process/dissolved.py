"""How much of a metal dissolves: as given, or by a published rate, only where it was measured."""

from dataclasses import dataclass
from typing import Literal

from diagrams.alloys import Alloy
from diagrams.density import density, element_densities
from diagrams.errors import DataFault, InvalidInput, OutsideData
from service.process.amounts import layer_g, layer_um
from service.process.known_limits import KnownLimit, process_limit
from service.schemas.dissolution import DissolutionQuestion

RATE_CONDITION = "232 °C (450 °F)"
RATE_C, NEAR_C = 232.0, 0.5
RATE_WT, NEAR_WT = {"Sn": 60.0, "Pb": 40.0}, 0.5  # 0.5: the tolerance ISO 9453 gives tin in such solders
RATED = ("Au", "Ag", "Cu", "Pd")


@dataclass(frozen=True)
class Amount:
    """So much of a metal; thickness and area in µm and mm², None where the question names no area."""

    mass_g: float
    thickness_um: float | None
    area_mm2: float | None
    by: Literal["mass", "thickness", "published rate"]
    used_up: bool | None = None
    rate: KnownLimit | None = None


def solder_g(question: DissolutionQuestion, alloy: Alloy) -> float:
    """Mass of the solder in g; InvalidInput unless it is given in exactly one way."""
    if (question.solder_mass_g is None) == (question.solder_volume_mm3 is None):
        none = question.solder_mass_g is None
        raise InvalidInput(
            f"The amount of solder is given {'in neither way' if none else 'twice'}.",
            field="solder_mass_g" if none else "solder_volume_mm3",
            remedy="Give exactly one of solder_mass_g and solder_volume_mm3.",
        )
    if question.solder_mass_g is not None:
        return question.solder_mass_g
    return (question.solder_volume_mm3 or 0.0) * density(alloy.composition_wt) / 1000.0


def amount_of(question: DissolutionQuestion, metal: str, alloy: Alloy) -> Amount:
    """How much dissolves; InvalidInput for fields that miss or clash, OutsideData beyond published rates."""
    heavy = element_densities()[metal]
    thickness_um, area_mm2 = question.thickness_um, question.area_mm2
    if question.mass_g is not None:
        for field in ("thickness_um", "area_mm2", "time_above_melting_s"):
            if getattr(question, field) is not None:
                raise InvalidInput(
                    f"{field} does not go with mass_g.", field=field, remedy="Give the amount in one way."
                )
        return Amount(question.mass_g, None, None, "mass")
    if thickness_um is None and question.time_above_melting_s is None:
        raise InvalidInput(
            "How much dissolves is not given.",
            field="thickness_um",
            remedy="Give thickness_um with area_mm2, or mass_g; where a rate is published, "
            "time_above_melting_s with area_mm2.",
        )
    if area_mm2 is None:
        raise InvalidInput("area_mm2 is missing.", field="area_mm2", remedy="Give the wetted area.")
    if question.time_above_melting_s is None:
        assert thickness_um is not None  # one of the two was given, as checked above
        return Amount(layer_g(thickness_um, area_mm2, heavy), thickness_um, area_mm2, "thickness")
    rate = published_rate(metal, alloy, question.temperature_c)
    could_um = rate.limit * question.time_above_melting_s
    does_um = could_um if thickness_um is None else min(could_um, thickness_um)
    used_up = None if thickness_um is None else could_um >= thickness_um
    mass_g = layer_g(does_um, area_mm2, heavy)
    return Amount(mass_g, does_um, area_mm2, "published rate", used_up, rate)


def thickness_of(amount: Amount, metal: str, mass_g: float) -> float | None:
    """A mass of the metal as a layer on the area of the question, µm."""
    if amount.area_mm2 is None:
        return None
    return layer_um(mass_g, amount.area_mm2, element_densities()[metal])


def published_rate(metal: str, alloy: Alloy, temperature_c: float | None) -> KnownLimit:
    """The rate in µm/s; OutsideData for a metal, alloy or temperature it was not measured at."""
    instead = "Give thickness_um or mass_g instead: no law is made up."
    if temperature_c is None:
        raise InvalidInput(
            "temperature_c is missing beside time_above_melting_s.",
            field="temperature_c",
            remedy=f"Rates hold at one temperature only: {RATE_CONDITION}.",
        )
    if metal not in RATED:
        bound = ", nickel only as an upper bound (0.0013 µm/s)" if metal == "Ni" else ""
        raise OutsideData(
            f"No rate is published here for {metal}{bound}; there are those for {', '.join(RATED)}.",
            field="metal",
            remedy=instead,
        )
    apart = [abs(alloy.composition_wt.get(el, 0.0) - wt) for el, wt in RATE_WT.items()]
    if max(apart) > NEAR_WT:
        raise OutsideData(
            "The published rates were measured in 60Sn–40Pb only.", field="alloy", remedy=instead
        )
    if abs(temperature_c - RATE_C) > NEAR_C:
        raise OutsideData(
            f"The published rates were measured at {RATE_CONDITION} only, not at {temperature_c:g} °C.",
            field="temperature_c",
            remedy=instead,
        )
    rate = process_limit(metal, RATE_CONDITION)
    if rate.unit != "µm/s":
        raise DataFault(f"The rate of {metal} is not in µm/s.", field="process_limits.csv")
    return rate
