"""What is wrong with a text that names no alloy, and the one way of writing it that works.

Nothing is repaired in silence: a slip is named, and the spelling that would be understood is offered only
after it has been tried.
"""

import math
import re
from collections.abc import Iterator

from diagrams.elements import MOLAR_MASS
from diagrams.errors import DiagramsError, InvalidComposition, UnknownAlloy
from diagrams.fillers import match_filler, near_designations, shown

LONGEST_TEXT = 200
TOTAL_TOLERANCE = 0.1  # percent by which a given composition may miss 100
# Element symbol in its usual spelling, then mass percent; spaces only between complete pairs, because in
# “Sn-3Ag” and “Sn 3Ag” the number belongs to the element after it.
PART = re.compile(r"([A-Z][a-z]?)([0-9]{1,3}(?:\.[0-9]{1,6})?)?")
COMPOSITION = re.compile(rf" *(?:{PART.pattern} *(?![0-9.]))+")

_STANDARDS = "ISO 9453, J-STD-006, ISO 17672 or AWS A5.8"
_SIGNS = re.compile(r"[^A-Za-z0-9.\s\-\u2010-\u2015\u2212]")
_DASHES = re.compile(r"[\s\-\u2010-\u2015\u2212]+")
_DECIMAL_COMMA = re.compile(r"(?<=[0-9]),(?=[0-9])")
_PREFIX = re.compile(r"^[SBL][\s-](?=[A-Z])|(?<=[a-z0-9])[\s-][0-9]{3,4}(?:/[0-9]{3,4})?$")
_NUMBER_FIRST = re.compile(r"(?:(?:[0-9]{1,3}(?:\.[0-9]{1,6})?)?[A-Z][a-z]?)+")
_NUMBER_FIRST_PART = re.compile(r"([0-9]{1,3}(?:\.[0-9]{1,6})?)?([A-Z][a-z]?)")
_ODD_NUMBER = re.compile(r"[0-9]\.(?![0-9])|\.[0-9]{7}|[0-9]{4}|[0-9][eE][0-9]")
_RATIO = re.compile(r"[0-9.]+(?:\s*[/:-]\s*[0-9.]+)+")
_ELEMENTS = frozenset(
    re.findall(
        "[A-Z][a-z]?",
        "HHeLiBeBCNOFNeNaMgAlSiPSClArKCaScTiVCrMnFeCoNiCuZnGaGeAsSeBrKrRbSrYZrNbMoTcRuRhPdAgCdInSnSbTeI"
        "XeCsBaLaCePrNdPmSmEuGdTbDyHoErTmYbLuHfTaWReOsIrPtAuHgTlPbBiPoAtRnFrRaAcThPaU",
    )
)


def unknown_alloy(text: str, field: str, *, one_string: bool) -> DiagramsError:
    """The error for a text that is no alloy; `one_string` tells whether a composition would do as well.

    UnknownAlloy, or InvalidComposition where it is a composition that cannot be read.
    """
    if len(text) > LONGEST_TEXT:
        return UnknownAlloy(
            f"“{shown(text)}” is too long to name an alloy.",
            field=field,
            remedy=f"Give at most {LONGEST_TEXT} characters.",
        )
    for wrong, candidate in _readings(text, one_string):
        if advice := _advice(candidate, one_string):
            return UnknownAlloy(f"“{shown(text)}” {wrong}.", field=field, remedy=advice)
    return _numbers_first(text, field, one_string) or _unknown(text, field, one_string)


def percents_of(text: str) -> dict[str, float] | None:
    """Mass percent by element of a composition in one string that is entirely right, else None."""
    if len(text) > LONGEST_TEXT or not COMPOSITION.fullmatch(text):
        return None
    parts = [(found[1], found[2]) for found in PART.finditer(text)]
    numbers = {el: float(value) for el, value in parts if value is not None}
    opened = [el for el, value in parts if value is None]
    if (
        len({el for el, _ in parts}) < len(parts)
        or len(opened) > 1
        or not numbers.keys() <= MOLAR_MASS.keys()
    ):
        return None
    total = math.fsum(numbers.values())
    if opened:
        return numbers | {opened[0]: 100.0 - total} if opened[0] in MOLAR_MASS and total < 100.0 else None
    return numbers if abs(total - 100.0) <= TOTAL_TOLERANCE else None


def _readings(text: str, one_string: bool) -> Iterator[tuple[str, str]]:
    """What is wrong, and the text without it: slip upon slip, each mended on top of those before."""
    if not one_string:
        yield "is a composition, not a designation", text
    wrongs = []
    mended = _DECIMAL_COMMA.sub(".", text)
    if mended != text:
        wrongs.append("has a decimal comma")
        yield " and ".join(wrongs), mended
    if signs := list(dict.fromkeys(_SIGNS.findall(mended))):
        wrongs.append("holds " + ", ".join(f"“{sign}”" for sign in signs[:5]) + ", which no name has")
        mended = _SIGNS.sub("", mended)
        yield " and ".join(wrongs), mended
    if (bare := _PREFIX.sub("", mended)) != mended:
        mended = bare
        wrongs.append("has a prefix or an ending that the names here do not have")
        yield " and ".join(wrongs), mended
    if (cased := re.sub(r"[A-Za-z]+", lambda run: _recased(run[0]), mended)) != mended:
        mended = cased
        wrongs.append("does not spell the symbols as usual (Sn, Pb)")
        yield " and ".join(wrongs), mended
    if (turned := _turned(mended)) is not None and mended[:1].isdigit():
        wrongs.append("puts the numbers before the elements")
        yield " and ".join(wrongs), turned


def _recased(run: str) -> str:
    """Letters as element symbols in their usual spelling; unchanged if they are none."""
    made, rest = "", run
    while rest:
        length = next((n for n in (2, 1) if rest[:n].capitalize() in MOLAR_MASS and len(rest) >= n), 0)
        if not length:
            return run
        made, rest = made + rest[:length].capitalize(), rest[length:]
    return made


def _turned(text: str) -> str | None:
    """A composition whose numbers stand before the elements, written the other way round."""
    joined = _DASHES.sub("", text)
    if not _NUMBER_FIRST.fullmatch(joined):
        return None
    parts = [(found[2], found[1]) for found in _NUMBER_FIRST_PART.finditer(joined)]
    if not any(number for _, number in parts):
        return None
    return "".join(el + number for el, number in parts if number) + "".join(
        el for el, number in parts if not number
    )


def _advice(candidate: str, one_string: bool) -> str | None:
    """How to write what a text seems to mean; None if it means nothing."""
    candidate = " ".join(candidate.split())
    percents = percents_of(candidate)
    if match_filler(candidate) is not None or (percents is not None and one_string):
        return f"Write “{candidate}”."
    if percents is None:
        return None
    told = ", ".join(f'"{el}": {value:.10g}' for el, value in percents.items())
    return f"Give composition_wt {{{told}}} in place of designation."


def _numbers_first(text: str, field: str, one_string: bool) -> DiagramsError | None:
    """The error for “Sn-3Ag”, in which a number may belong to the element on either side of it."""
    turned = _turned(text)
    if turned is None or not {found[1] for found in PART.finditer(turned) if found[1]} <= MOLAR_MASS.keys():
        return None
    remedy = (
        "Write each number right after its element, without hyphens; the numbers sum to 100, or one element "
        "has none and takes the balance: Ag3Cu0.5Sn."
    )
    if text[:1].isdigit():
        wrong = "puts the numbers before the elements"
    elif COMPOSITION.fullmatch(text):
        return None
    else:
        wrong = "is ambiguous: a number may belong to the element before or after it"
        if advice := _advice(turned, one_string):
            remedy = f"If the numbers belong to the elements after them: {advice[0].lower()}{advice[1:]}"
    return InvalidComposition(f"“{shown(text)}” {wrong}.", field=field, remedy=remedy)


def _unknown(text: str, field: str, one_string: bool) -> DiagramsError:
    """The error where no slip explains a text: elements that no data hold, or the nearest names."""
    parts = [found[1] for found in PART.finditer(text)] if COMPOSITION.fullmatch(text) else []
    missing = [el for el in dict.fromkeys(parts) if el not in MOLAR_MASS]
    near = near_designations(text)
    wrong = f"“{shown(text)}” is no designation in the filler table"
    other = "a composition such as Ag3Cu0.5Sn" if one_string else "give composition_wt"
    remedy = f"Use a designation of {_STANDARDS}, or {other}."
    if missing and _ELEMENTS.issuperset(parts):
        wrong += f", and no data here hold {', '.join(missing)}"
        remedy = f"The elements known here are {', '.join(sorted(MOLAR_MASS))}."
    elif _RATIO.fullmatch(text.strip()):
        wrong, remedy = f"“{shown(text)}” names no elements", "Name them, such as Sn60Pb40."
    elif near:
        remedy += f" Near: {', '.join(near)}."
    elif missing:
        wrong += f", and {missing[0]} is no element symbol"
    elif _ODD_NUMBER.search(text):
        wrong = f"“{shown(text)}” holds a number that cannot be read"
        remedy = "Write percents with a point and 1 to 6 decimals, or without decimals: Ag3Cu0.5Sn."
    return UnknownAlloy(f"{wrong}.", field=field, remedy=remedy)
