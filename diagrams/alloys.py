"""What an alloy is, and the ways of naming one: designation, mass percent, atomic percent, one string.

Nothing is guessed. A text that can be read both ways is a designation first: `Bi55Pb45` is the short
name J-STD-006 gives to 55.5 % Bi and 44.5 % Pb, and gives that alloy. To ask for exactly 55 and 45,
give `composition_wt`.
"""

import math
from collections.abc import Mapping
from dataclasses import dataclass, field
from types import MappingProxyType

from diagrams.alloy_text import COMPOSITION, LONGEST_TEXT, PART, TOTAL_TOLERANCE, unknown_alloy
from diagrams.elements import MOLAR_MASS, symbol
from diagrams.errors import InvalidComposition
from diagrams.fillers import Filler, match_filler, shown
from diagrams.units import at_to_wt

_ROUNDING = 1e-12  # percent: sums of a few decimal fractions miss 100 by less
_LONGEST_KEY = 40
_NEARLY = 10.0  # percent by which a sum misses 100 if somebody meant 100


@dataclass(frozen=True, slots=True)
class Alloy:
    """An alloy somebody asks about.

    `composition_wt` is mass percent by element, sorted by symbol, without zero entries, summing to 100;
    `given_total_wt` is the sum before normalisation (of the percents as given). `limits_wt` gives the
    lowest and highest mass percent of each element that has a tolerance: ± about the nominal cut at
    the physical ends 0 and 100, or the standard's own range, which may name an element the nominal
    leaves out (tin in RBCuZn-A) or leave the printed nominal outside (lithium in BAg-8a).
    `designation` and `filler` are set only if a designation was asked for.
    """

    composition_wt: Mapping[str, float]
    given_total_wt: float
    designation: str | None = None
    limits_wt: Mapping[str, tuple[float, float]] = field(default_factory=lambda: MappingProxyType({}))
    filler: Filler | None = None

    def __hash__(self) -> int:
        """Equal alloys hash alike, so that answers can be kept by alloy."""
        return hash((tuple(self.composition_wt.items()), self.designation, tuple(self.limits_wt.items())))

    @property
    def elements(self) -> tuple[str, ...]:
        """The elements present, sorted by symbol."""
        return tuple(self.composition_wt)


def alloy_from_designation(
    text: str, tolerance_wt: Mapping[str, float] | None = None, *, field: str = "designation"
) -> Alloy:
    """The alloy of a filler designation (see `find_filler`), with the standard's limits.

    `tolerance_wt`, if given, takes the place of all of the standard's limits (an empty one asks for none).
    Where the printed nominal misses 100, the remainder element takes the difference, as the standards
    mean it (BCuP-7: copper 88.2, not the printed 88); `given_total_wt` keeps the printed sum.
    Raises UnknownAlloy; InvalidComposition for a tolerance that makes no sense.
    """
    filler = match_filler(text)
    if filler is None:
        raise unknown_alloy(text, field, one_string=False)
    nominal = dict(filler.composition_wt)
    total = math.fsum(nominal.values())
    if filler.remainder is not None and abs(total - 100.0) > _ROUNDING:
        nominal[filler.remainder] += 100.0 - total
    composition = _normalised(nominal)
    limits = filler.limits_wt if tolerance_wt is None else _limits(composition, tolerance_wt)
    return Alloy(composition, total, filler.name, limits, filler)


def alloy_from_wt(
    composition_wt: Mapping[str, float],
    tolerance_wt: Mapping[str, float] | None = None,
    *,
    field: str = "composition_wt",
) -> Alloy:
    """The alloy of a composition in mass percent (sum 100 ± 0.1, then normalised to 100).

    `tolerance_wt` is ± mass percent about the nominal, by element. Raises InvalidComposition for
    unknown or repeated elements, values that are no number from 0 to 100, or a wrong sum. The result
    never carries a designation or a filler: composition asked, composition answered.
    """
    checked = _checked(composition_wt, field)
    return _from_checked(checked, math.fsum(checked.values()), tolerance_wt)


def alloy_from_at(
    composition_at: Mapping[str, float],
    tolerance_wt: Mapping[str, float] | None = None,
    *,
    field: str = "composition_at",
) -> Alloy:
    """As `alloy_from_wt`, from atomic percent; `given_total_wt` is then the sum of the atomic percents."""
    checked = _checked(composition_at, field)
    return _from_checked(at_to_wt(checked), math.fsum(checked.values()), tolerance_wt)


def parse_alloy(text: str, tolerance_wt: Mapping[str, float] | None = None, *, field: str = "alloy") -> Alloy:
    """The alloy of one string: a designation, or element symbols with mass percent.

    A designation wins where both readings fit. In a composition one element may stand without a number
    and takes the balance (`Ag3Cu0.5Sn`); symbols are spelled as usual (Ag, not AG), spaces may stand
    between complete pairs, hyphens may not. Raises UnknownAlloy or InvalidComposition.
    """
    if match_filler(text) is not None:
        return alloy_from_designation(text, tolerance_wt, field=field)
    parts = [(found[1], found[2]) for found in PART.finditer(text)] if _is_composition(text) else []
    if not parts or not all(el in MOLAR_MASS for el, _ in parts):
        raise unknown_alloy(text, field, one_string=True)
    numbers = {el: float(value) for el, value in parts if value is not None}
    opened = [el for el, value in parts if value is None]
    if len(numbers) + len(opened) != len(parts) or set(opened) & set(numbers):
        raise InvalidComposition(
            f"“{shown(text)}” names an element twice.", field=field, remedy="Name each element once."
        )
    if len(opened) > 1:
        raise InvalidComposition(
            f"“{shown(text)}” leaves {' and '.join(opened)} open.",
            field=field,
            remedy="Leave at most one element without a number; it takes the balance.",
        )
    if opened:
        balance = 100.0 - math.fsum(numbers.values())
        if balance <= _ROUNDING:
            raise InvalidComposition(
                f"“{shown(text)}” leaves nothing for {opened[0]}: the others sum to {100.0 - balance:g}.",
                field=field,
                remedy="The numbers given must sum to less than 100.",
            )
        numbers[opened[0]] = balance
    _check_total(numbers, text, field)
    return alloy_from_wt(numbers, tolerance_wt, field=field)


def _is_composition(text: str) -> bool:
    return len(text) <= LONGEST_TEXT and COMPOSITION.fullmatch(text) is not None


def _check_total(numbers: Mapping[str, float], text: str, field: str) -> None:
    """Refuse a string whose numbers do not sum to 100, with the remedy that fits."""
    total = math.fsum(numbers.values())
    if abs(total - 100.0) <= TOTAL_TOLERANCE + 1e-9:
        return
    *others, last = numbers
    rest = math.fsum(numbers[el] for el in others)
    if others and abs(total - 100.0) <= _NEARLY and rest < 100.0:
        written = "".join(f"{el}{numbers[el]:.10g}" for el in others) + last
        remedy = f"Correct the numbers, or leave out the last one if {last} takes the balance: {written}."
    elif total < 100.0:
        remedy = "Add the element that takes the balance, without a number, such as Ag3Cu0.5Sn."
    else:
        remedy = "Correct the numbers, or leave one element without a number; it takes the balance."
    raise InvalidComposition(
        f"The percents of “{text.strip()}” sum to {total:.6g}, not 100.", field=field, remedy=remedy
    )


def _checked(composition: Mapping[str, float], field: str) -> dict[str, float]:
    """The composition with usual symbols, each value a number from 0 to 100, the sum 100 ± 0.1."""
    if not composition:
        raise InvalidComposition(
            "The composition is empty.",
            field=field,
            remedy='Give percent by element, such as {"Sn": 63, "Pb": 37}.',
        )
    checked: dict[str, float] = {}
    for name, value in composition.items():
        el = symbol(shown(name), _place_of(name, field))
        if el in checked:
            raise InvalidComposition(
                f"{el} is named twice.", field=_place_of(name, field), remedy="Name each element once."
            )
        checked[el] = _number(value, _place_of(name, field), highest=100.0, slack=TOTAL_TOLERANCE)
    total = math.fsum(checked.values())
    if not abs(total - 100.0) <= TOTAL_TOLERANCE + 1e-9:
        raise InvalidComposition(
            f"The composition sums to {total:.6g}, not 100.",
            field=field,
            remedy=f"Percents must sum to 100 ± {TOTAL_TOLERANCE:g}.",
        )
    return checked


def _place_of(name: str, field: str) -> str:
    """The dotted path of an entry, as the asker spelled it; of the whole where a path cannot hold it."""
    return f"{field}.{name}" if 0 < len(name) <= _LONGEST_KEY and "." not in name else field


def _number(value: object, field: str, *, highest: float, slack: float = 0.0) -> float:
    """A finite number from 0 to `highest` (and `slack`, left to the sum); booleans and texts are none."""
    if isinstance(value, bool) or not isinstance(value, int | float) or not 0.0 <= value <= highest + slack:
        short = isinstance(value, float) or (isinstance(value, int) and abs(value) < 10**9)
        told = f", not {value:g}" if short and not isinstance(value, bool) else ""
        raise InvalidComposition(
            f"{field} must be a number from 0 to {highest:g}{told}.",
            field=field,
            remedy=f"Give percent as a plain number from 0 to {highest:g}.",
        )
    return float(value)


def _from_checked(
    composition: Mapping[str, float], given: float, tolerance_wt: Mapping[str, float] | None
) -> Alloy:
    normal = _normalised(composition)
    return Alloy(normal, given, None, _limits(normal, tolerance_wt or {}))


def _normalised(composition: Mapping[str, float]) -> Mapping[str, float]:
    """Sorted, without zeros, summing to 100; values that already do so are kept to the last digit."""
    present = [el for el in sorted(composition) if composition[el] > 0.0]
    if len(present) == 1:  # exactly: a pure metal that rounding put above 100 would lie outside all data
        return MappingProxyType({present[0]: 100.0})
    total = math.fsum(composition.values())
    factor = 1.0 if abs(total - 100.0) <= _ROUNDING else 100.0 / total
    return MappingProxyType({el: composition[el] * factor for el in present})


def _limits(
    composition: Mapping[str, float], tolerance_wt: Mapping[str, float]
) -> Mapping[str, tuple[float, float]]:
    """Lowest and highest mass percent: nominal ± tolerance, cut at the physical ends 0 and 100."""
    limits: dict[str, tuple[float, float]] = {}
    for name, value in tolerance_wt.items():
        place = _place_of(name, "tolerance_wt")
        el = symbol(shown(name), place)
        if el not in composition or el in limits:
            raise InvalidComposition(
                f"tolerance_wt names {el}, "
                + ("twice." if el in limits else "which the alloy does not hold."),
                field=place,
                remedy="Name elements of the alloy, each once: " + ", ".join(composition) + ".",
            )
        tolerance = _number(value, place, highest=100.0)
        limits[el] = (max(0.0, composition[el] - tolerance), min(100.0, composition[el] + tolerance))
    return MappingProxyType({el: limits[el] for el in sorted(limits)})
