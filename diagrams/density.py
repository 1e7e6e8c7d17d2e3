"""Densities, to turn volumes into masses: the elements' from the table, an alloy's by adding volumes."""

from collections.abc import Mapping
from functools import cache
from types import MappingProxyType

from diagrams.elements import MOLAR_MASS
from diagrams.errors import DataFault
from diagrams.reference import reference_edition, reference_guidance, reference_table
from diagrams.sources import Source

_FILE = "densities.csv"
DENSITIES_EDITION = reference_edition(_FILE)
DENSITIES_GUIDANCE = reference_guidance(_FILE)


@cache
def element_densities() -> Mapping[str, float]:
    """Density of each element as a solid at room temperature, g/cm³ (the same number in mg/mm³)."""
    found = {row["element"]: float(row["density_g_per_cm3"]) for row in reference_table(_FILE)}
    if found.keys() != MOLAR_MASS.keys():
        raise DataFault("The densities miss an element.", field=_FILE, remedy="Give one row an element.")
    return MappingProxyType(found)


@cache
def densities_source() -> Source:
    """Where the densities come from."""
    row = reference_table(_FILE)[0]
    return Source(row["source"], row["how"], row["confidence"])


def density(composition_wt: Mapping[str, float]) -> float:
    """Density of an alloy in g/cm³: as if its elements kept their volumes (ideal mixing)."""
    return sum(composition_wt.values()) / volume_cm3(composition_wt)


def volume_cm3(masses_g: Mapping[str, float]) -> float:
    """Volume in cm³ of masses in grams by element, as if each kept its own."""
    densities = element_densities()
    return sum(mass_g / densities[element] for element, mass_g in masses_g.items())
