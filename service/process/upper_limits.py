"""Upper limits that the reference tables know, each under a key: base metals, components, fluxes."""

import difflib
import re
from collections.abc import Mapping
from dataclasses import dataclass
from functools import cache
from types import MappingProxyType
from typing import Literal

from diagrams.errors import DataFault, InvalidInput
from diagrams.fillers import designation_key, shown
from diagrams.reference import reference_edition, reference_guidance, reference_table
from diagrams.sources import Source
from service.process.known_limits import PROCESS_LIMITS
from service.safety import safety_for
from service.schemas.known_limits import KnownLimitsAnswer, KnownLimitShown
from service.schemas.source import reference_shown

Kind = Literal["base metal", "component", "flux"]
BASE_METAL: Kind = "base metal"
COMPONENT: Kind = "component"
FLUX: Kind = "flux"
# Topic of the table: kind of limit, column, start of the key.
_TOPICS: Mapping[str, tuple[Kind, str, str]] = {
    "Base metal solidus / liquidus": (BASE_METAL, "min", ""),
    "J-STD-020 classification temperature Tc": (COMPONENT, "max", "J-STD-020 "),
    "Flux working range": (FLUX, "max", "flux "),
}
_FLUX_CONDITIONS = ("activity range", "effective range")  # others tell of melting and fume, not of an end
# What base metals hold that cautions speak of; the lead of free-cutting brass, about 3 %, from memory.
_CAUTIONS = (
    ("beryllium copper", {"Be"}),
    ("brass", {"Zn"}),
    ("brass C36000", {"Pb"}),
    ("nickel silver", {"Zn"}),
)
_SIGNS = (("<", "under "), (">", "over "), ("≥", "from "), ("³", "3"))
_APART = re.compile(r"[^a-z0-9.]+")


@dataclass(frozen=True)
class UpperKnown:
    """A stored upper limit, °C; `told` is a sentence that says what it is and where it comes from."""

    key: str
    kind: Kind
    subject: str
    limit_c: float
    note: str
    source: Source

    @property
    def told(self) -> str:
        """What it is, its note, its source and the edition of the table."""
        means = {
            BASE_METAL: f"{self.subject} begins to melt at {self.limit_c:g} °C",
            COMPONENT: f"{self.subject} must not exceed {self.limit_c:g} °C at its peak",
            FLUX: f"{self.subject} works up to {self.limit_c:g} °C",
        }[self.kind]
        note = f"; {self.note}" if self.note else ""
        origin = f"{self.source.text}, {self.source.how}; {EDITION}"
        return f"{means}{note} ({origin})."

    @property
    def elements(self) -> frozenset[str]:
        """Elements in it that cautions speak of."""
        found = [elements for start, elements in _CAUTIONS if self.subject.startswith(start)]
        return frozenset().union(*found)


EDITION = reference_edition(PROCESS_LIMITS)
GUIDANCE = reference_guidance(PROCESS_LIMITS)


@cache
def upper_limits() -> Mapping[str, UpperKnown]:
    """All of them by key, in the order of the table; DataFault for keys that cannot be told apart."""
    found: dict[str, UpperKnown] = {}
    taken: set[str] = set()
    for row in reference_table(PROCESS_LIMITS):
        if row["topic"] not in _TOPICS:
            continue
        kind, column, start = _TOPICS[row["topic"]]
        if not row[column] or (kind == FLUX and row["condition"] not in _FLUX_CONDITIONS):
            continue
        subject = {
            BASE_METAL: row["item"],
            COMPONENT: f"J-STD-020 classification, {row['item']}, {row['condition']}",
            FLUX: f"Flux {row['item']}",
        }[kind]
        key = _key(f"{start}{row['item']} {row['condition'] if kind == COMPONENT else ''}")
        if designation_key(key) in taken:
            raise DataFault(f"Two upper limits have the key {key}.", field=PROCESS_LIMITS)
        taken.add(designation_key(key))
        source = Source(row["source"], row["how"], row["confidence"])
        note = f"its range begins at {row['min']} °C" if kind == FLUX else row["notes"]
        found[key] = UpperKnown(key, kind, subject, float(row[column]), note, source)
    return MappingProxyType(found)


def upper_limit(text: str, field: str) -> UpperKnown:
    """The limit with this key, without regard to case, spaces and hyphens.

    Raises InvalidInput naming `field`, with the nearest keys.
    """
    known = {designation_key(key): limit for key, limit in upper_limits().items()}
    asked = designation_key(text)
    if asked in known:
        return known[asked]
    keys = [key for key in known if asked and asked in key]
    keys += difflib.get_close_matches(asked, known, n=5, cutoff=0.5)
    near = list(dict.fromkeys(known[key].key for key in keys))
    raise InvalidInput(
        f"“{shown(text)}” is no stored upper limit.",
        field=field,
        remedy="GET /v1/known-limits lists all keys." + (f" Near: {', '.join(near[:5])}." if near else ""),
    )


def known_limits_shown() -> KnownLimitsAnswer:
    """All of them as answered."""
    limits = [limit_shown(limit) for limit in upper_limits().values()]
    safety = safety_for(frozenset().union(*(limit.elements for limit in upper_limits().values())))
    return KnownLimitsAnswer(limits=limits, edition=EDITION, guidance=GUIDANCE, safety=safety)


def limit_shown(limit: UpperKnown) -> KnownLimitShown:
    """One of them as answered."""
    return KnownLimitShown(
        key=limit.key,
        kind=limit.kind,
        subject=limit.subject,
        limit_c=limit.limit_c,
        note=limit.note or None,
        reference=reference_shown(limit.source),
    )


def _key(text: str) -> str:
    """Lower case, words parted by hyphens."""
    text = text.lower()
    for sign, word in _SIGNS:
        text = text.replace(sign, word)
    return _APART.sub("-", text).strip("-")
