"""Lists and tolerances in an address line: `temperatures_c=185,200` and `tolerance_wt=Sn:0.5,Pb:0.5`."""

import math
import re

from diagrams.errors import InvalidInput
from service.schemas.alloy import MOST_ELEMENTS, Amounts

NUMBER = re.compile(r"-?(?:0|[1-9][0-9]*)(?:\.[0-9]+)?(?:[eE][+-]?[0-9]+)?")
LONGEST_LIST = 4000  # characters; longer ones are for POST
TOLERANCE = (
    "How far the real alloy may lie from the nominal: element, colon, ± mass percent, with commas between. "
    "Left out, a designation brings its standard's own limits if the table has them, and a composition none."
)


def numbers_of(text: str | None, field: str) -> list[float]:
    """The numbers of a list divided by commas; InvalidInput names the field and the place in it."""
    if text is None:
        return []
    return [_number(part, f"{field}.{k}") for k, part in enumerate(text.split(","))]


def tolerance_of(text: str | None, field: str = "tolerance_wt") -> Amounts | None:
    """± mass percent by element; None where none is given. InvalidInput names the field."""
    if text is None:
        return None
    amounts: dict[str, float] = {}
    for part in text.split(",", MOST_ELEMENTS):
        element, colon, number = part.partition(":")
        if not colon or not element.isalpha() or element in amounts:
            raise InvalidInput(
                "An element is given twice." if element in amounts else "A tolerance cannot be read.",
                field=field,
                remedy="Write each element once, a colon and ± mass percent, commas between: Sn:0.5,Pb:0.5.",
            )
        amounts[element] = _number(number, f"{field}.{element[:40]}")
    return tuple(amounts.items())


def _number(text: str, field: str) -> float:
    if not NUMBER.fullmatch(text) or not math.isfinite(float(text)):
        raise InvalidInput(
            f"“{field}” must be a number.",
            field=field,
            remedy="Write plain numbers with commas between and no spaces: 185,200.5.",
        )
    return float(text)
