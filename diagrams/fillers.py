"""The table of standard fillers, and how a designation finds its row."""

import difflib
import re
from collections.abc import Mapping
from dataclasses import dataclass
from functools import cache
from types import MappingProxyType

from diagrams.elements import symbol
from diagrams.errors import DataFault, UnknownAlloy
from diagrams.reference import reference_edition, reference_guidance, reference_table
from diagrams.sources import Source

_FILE = "fillers.csv"
FILLERS_EDITION = reference_edition(_FILE)
FILLERS_GUIDANCE = reference_guidance(_FILE)

# Column of the table and the standard it speaks of, in the order in which they win a shared designation.
_STANDARDS = (
    ("aws_a5_8", "AWS A5.8"),
    ("iso_17672", "ISO 17672"),
    ("j_std_006", "J-STD-006"),
    ("iso_9453", "ISO 9453"),
)
_LONGEST_DESIGNATION = 100
# Spaces of any kind, underscores, hyphens and the dashes that documents print for them.
_IGNORED = re.compile(r"[\s_\-\u2010-\u2015\u2212]+")


@dataclass(frozen=True, slots=True)
class Filler:
    """One row of the filler table.

    `name` is the designation shown, `also_named` its composition name if the name is none (SAC305).
    `class_` is “solder” or “braze”. `designations` maps a standard to the designation there.
    `composition_wt` is the nominal mass percent as printed (BCuP-7 sums to 99.8); `limits_wt` maps an
    element to its lowest and highest mass percent, and may name an element the nominal leaves out;
    `remainder` is the element the standard gives as the rest, None if it gives none or is silent.
    Temperatures are in °C. `source`, `how`, `confidence` and `notes` belong to the whole row,
    `limits_source` to the limits.
    """

    name: str
    also_named: str | None
    class_: str
    designations: Mapping[str, str]
    composition_wt: Mapping[str, float]
    limits_wt: Mapping[str, tuple[float, float]]
    remainder: str | None
    limits_source: str
    solidus_c: float
    liquidus_c: float
    brazing_range_c: tuple[float, float] | None
    single_melting_value: bool
    lead_bearing: bool
    cadmium_bearing: bool
    source: str
    how: str
    confidence: str
    notes: str

    def __hash__(self) -> int:
        """Names are unique in the table."""
        return hash(self.name)

    @property
    def reference(self) -> Source:
        """The origin of the row as one word."""
        return Source(self.source, self.how, self.confidence)


def designation_key(text: str) -> str:
    """The form in which designations are compared: lower case, without spaces, hyphens, underscores."""
    return _IGNORED.sub("", text).lower()


@cache
def fillers() -> tuple[Filler, ...]:
    """All fillers, solders first, in the order of the table."""
    return tuple(_filler(row) for row in reference_table(_FILE))


def find_filler(text: str, *, field: str = "designation") -> Filler:
    """The filler with this designation; case, spaces, hyphens and underscores do not matter.

    A designation that several rows carry (Ag 140 stands on the rows Ag 140 and BAg-28) gives the row
    whose name it is, else the row carrying it under AWS A5.8, ISO 17672, J-STD-006, ISO 9453, in
    this order. Raises UnknownAlloy, with the nearest designations as remedy.
    """
    filler = match_filler(text)
    if filler is None:
        near = near_designations(text)
        raise UnknownAlloy(
            f"“{shown(text)}” is no designation in the filler table.",
            field=field,
            remedy="Use a designation of ISO 9453, J-STD-006, ISO 17672 or AWS A5.8."
            + (f" Near: {', '.join(near)}." if near else ""),
        )
    return filler


def match_filler(text: str) -> Filler | None:
    """As `find_filler`, but None where no row has this designation."""
    return _index().get(designation_key(text)) if len(text) <= _LONGEST_DESIGNATION else None


def shown(text: str) -> str:
    """A user's text, short enough to be quoted in a message."""
    return text if len(text) <= _LONGEST_DESIGNATION else text[:_LONGEST_DESIGNATION] + "…"


def near_designations(text: str) -> list[str]:
    """Names of the fillers whose designations look most like a text, at most five."""
    if len(text) > _LONGEST_DESIGNATION:
        return []
    keys = difflib.get_close_matches(designation_key(text), sorted(_index()), n=5, cutoff=0.6)
    return list(dict.fromkeys(_index()[key].name for key in keys))


@cache
def _index() -> Mapping[str, Filler]:
    index: dict[str, Filler] = {}
    for filler in fillers():
        names = [filler.name]
        if filler.also_named:
            names += [filler.also_named, f"{filler.name} ({filler.also_named})"]
        for key in map(designation_key, names):
            if index.setdefault(key, filler) is not filler:
                raise DataFault(
                    f"Two fillers are named “{key}”.", field=_FILE, remedy="Names must be unique."
                )
    for _, standard in _STANDARDS:
        for filler in fillers():
            if standard in filler.designations:
                index.setdefault(designation_key(filler.designations[standard]), filler)
    return MappingProxyType(index)


def _filler(row: Mapping[str, str]) -> Filler:
    flags = {"yes": True, "no": False}
    brazing = (row["brazing_from_c"], row["brazing_to_c"])
    origin = Source(row["source"], row["how"], row["confidence"])
    filler = Filler(
        name=row["name"],
        also_named=row["also_named"] or None,
        class_=row["class"],
        designations=MappingProxyType({name: row[column] for column, name in _STANDARDS if row[column]}),
        composition_wt=MappingProxyType({el: float(v) for el, v in _pairs(row["composition_wt"])}),
        limits_wt=MappingProxyType({el: _range(v) for el, v in _pairs(row["limits_wt"])}),
        remainder=row["remainder"] or None,
        limits_source=row["limits_source"],
        solidus_c=float(row["solidus_c"]),
        liquidus_c=float(row["liquidus_c"]),
        brazing_range_c=(float(brazing[0]), float(brazing[1])) if all(brazing) else None,
        single_melting_value=flags[row["single_melting_value"]],
        lead_bearing=flags[row["lead_bearing"]],
        cadmium_bearing=flags[row["cadmium_bearing"]],
        source=origin.text,
        how=origin.how,
        confidence=origin.confidence,
        notes=row["notes"],
    )
    if filler.class_ not in ("solder", "braze"):
        raise DataFault(f"The row {filler.name} is no filler.", field=_FILE, remedy="Say solder or braze.")
    return filler


def _pairs(cell: str) -> list[tuple[str, str]]:
    """`Ag=3 Cu=0.5` as pairs of element and text."""
    return [(symbol(el, _FILE), value) for el, value in (part.split("=") for part in cell.split())]


def _range(text: str) -> tuple[float, float]:
    """`2.8..3.2` as lowest and highest."""
    lowest, highest = map(float, text.split(".."))
    if not 0.0 <= lowest <= highest <= 100.0:
        raise DataFault(
            f"“{text}” is no range of mass percent.", field=_FILE, remedy="Write lowest..highest."
        )
    return lowest, highest
