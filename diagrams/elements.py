"""Elements the data speak of: molar mass in g/mol."""

from collections.abc import Mapping
from types import MappingProxyType

from diagrams.errors import InvalidComposition

# IUPAC standard atomic weights (abridged 2021 table), from memory.
MOLAR_MASS: Mapping[str, float] = MappingProxyType(
    {
        "Ag": 107.8682, "Al": 26.9815, "Au": 196.96657, "B": 10.81, "Bi": 208.9804,
        "C": 12.011, "Cd": 112.414, "Cr": 51.9961, "Cu": 63.546, "Fe": 55.845,
        "Ge": 72.63, "In": 114.818, "Li": 6.94, "Mg": 24.305, "Mn": 54.938,
        "Ni": 58.6934, "P": 30.97376, "Pb": 207.2, "Pd": 106.42, "Sb": 121.76,
        "Si": 28.0855, "Sn": 118.71, "Zn": 65.38,
    }
)  # fmt: skip


def symbol(text: str, field: str = "composition_wt") -> str:
    """Return the element symbol in its usual spelling; raise InvalidComposition if unknown."""
    tidy = text.capitalize()
    if tidy not in MOLAR_MASS:
        raise InvalidComposition(
            f"“{text}” is no element known here{_likely_slip(text)}.",
            field=field,
            remedy="Use element symbols such as " + ", ".join(sorted(MOLAR_MASS)) + ".",
        )
    return tidy


def _likely_slip(text: str) -> str:
    """What is most often wrong with a text that is nearly a symbol."""
    if text.strip().capitalize() in MOLAR_MASS:
        return ": there is a space in it"
    return ": write the symbol, not the name" if len(text) > 2 and text.isalpha() else ""
