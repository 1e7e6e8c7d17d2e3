"""Which fillers go with which base metals, as practice has it: rules with their sources, no computation."""

from collections.abc import Callable, Mapping, Sequence
from dataclasses import dataclass
from functools import cache
from typing import Literal, get_args

from diagrams.errors import DataFault, InvalidInput
from diagrams.fillers import Filler
from diagrams.reference import reference_edition, reference_table
from diagrams.sources import Source
from service.process.upper_limits import BASE_METAL, UpperKnown, upper_limit

TABLE = "suitability.csv"
EDITION = reference_edition(TABLE)
Verdict = Literal["for", "against", "barred"]

# How the base metals of the table begin, and the family they belong to; the first that fits counts.
_FAMILIES = (
    ("Cu-Ni", "copper-nickel"),
    ("Cu ", "copper"),
    ("beryllium copper", "beryllium-copper"),
    ("phosphor bronze", "bronze"),
    ("brass", "brass"),
    ("nickel silver", "copper-nickel"),  # about 18 % of nickel: what bars phosphorus there bars it here
    ("low-carbon steel", "iron"),
    ("grey cast iron", "cast-iron"),
    ("stainless", "stainless"),
    ("N", "nickel"),
    ("Ti", "titanium"),
    ("Al 5052", "aluminium-magnesium"),
    ("Al ", "aluminium"),
    ("Ag ", "silver"),
    ("sterling silver", "silver"),
)


def _most(filler: Filler, element: str) -> bool:
    return max(filler.composition_wt, key=lambda el: filler.composition_wt[el]) == element


def _braze(filler: Filler) -> bool:
    return filler.class_ == "braze"


# Kinds of filler, by what they hold.
KINDS: Mapping[str, Callable[[Filler], bool]] = {
    "copper-phosphorus": lambda f: _most(f, "Cu") and f.composition_wt.get("P", 0.0) >= 1.0,
    "aluminium-silicon": lambda f: _most(f, "Al"),
    "zinc-based": lambda f: f.class_ == "solder" and _most(f, "Zn"),
    "soft solder": lambda f: (
        f.class_ == "solder" and any(_most(f, el) for el in ("Sn", "Pb", "Bi", "In", "Cd"))
    ),
    "soft solder without zinc": lambda f: KINDS["soft solder"](f) and "Zn" not in f.composition_wt,
    "soft solder with zinc": lambda f: KINDS["soft solder"](f) and "Zn" in f.composition_wt,
    "solder not of zinc": lambda f: f.class_ == "solder" and not _most(f, "Zn"),
    "any solder": lambda f: f.class_ == "solder",
    "any braze": _braze,
    "braze without aluminium": lambda f: _braze(f) and not _most(f, "Al"),
    "silver braze": lambda f: _braze(f) and f.composition_wt.get("Ag", 0.0) >= 20.0,
    "silver with zinc and no nickel": lambda f: (
        _braze(f) and {"Ag", "Zn"} <= f.composition_wt.keys() and "Ni" not in f.composition_wt
    ),
    "copper braze": lambda f: _braze(f) and f.composition_wt.get("Cu", 0.0) >= 99.0,
    "nickel braze": lambda f: _braze(f) and _most(f, "Ni"),
}


@dataclass(frozen=True)
class Rule:
    """One rule of practice about families of base metals and a kind of filler."""

    bases: frozenset[str]
    kind: str
    verdict: Verdict
    text: str
    source: Source


@dataclass(frozen=True)
class Suits:
    """What a rule says of a filler on a base metal, in a sentence with its source."""

    verdict: Verdict
    text: str


@cache
def rules() -> tuple[Rule, ...]:
    """All rules; DataFault for one that speaks of a family or kind there is not."""
    families = {family for _, family in _FAMILIES}
    found = []
    for row in reference_table(TABLE):
        bases = frozenset(row["bases"].split())
        verdict = next((v for v in get_args(Verdict) if v == row["verdict"]), None)
        if not bases <= families or row["fillers"] not in KINDS or verdict is None:
            raise DataFault(f"{TABLE}: no rule can be made of {dict(row)}.", field=TABLE)
        origin = Source(row["source"], row["how"], row["confidence"])
        found.append(Rule(bases, row["fillers"], verdict, row["text"], origin))
    return tuple(found)


def family_of(base: UpperKnown) -> str:
    """The family of a stored base metal; DataFault where the table has one that belongs to none."""
    for start, family in _FAMILIES:
        if base.subject.startswith(start):
            return family
    raise DataFault(f"{base.subject} belongs to no family of base metals.", field=TABLE)


def base_metal(key: str, field: str) -> UpperKnown:
    """A stored base metal by its key; InvalidInput names the field."""
    known = upper_limit(key, field)
    if known.kind != BASE_METAL:
        raise InvalidInput(
            f"{known.key} is the limit of a {known.kind}, no base metal.",
            field=field,
            remedy="Name a key of kind `base metal` from GET /v1/known-limits.",
        )
    return known


def suits(filler: Filler, bases: Sequence[UpperKnown]) -> list[Suits]:
    """What the rules say of a filler on these base metals, in the order of the table, each text once."""
    found: dict[str, Suits] = {}
    for rule in rules():
        meant = [base.subject for base in bases if family_of(base) in rule.bases]
        if meant and KINDS[rule.kind](filler):
            how = "" if rule.source.how == rule.source.text else f", {rule.source.how}"
            origin = f"{rule.source.text}{how}; {EDITION}"
            text = f"On {', '.join(meant)}: {rule.text} ({origin})."
            found.setdefault(text, Suits(rule.verdict, text))
    return list(found.values())
