"""Limits of the reference tables, as the rules need them: one value with its source."""

from collections.abc import Mapping
from dataclasses import dataclass
from functools import cache

from diagrams.errors import DataFault
from diagrams.reference import reference_edition, reference_table
from diagrams.sources import Source

PROCESS_LIMITS, SAFETY_FACTS = "process_limits.csv", "safety_facts.csv"


@dataclass(frozen=True)
class KnownLimit:
    """One row of a table: the limit (a maximum, unless said otherwise) in `unit`, and the note beside it."""

    name: str
    limit: float
    unit: str
    note: str
    source: Source
    edition: str


@cache
def process_limit(item: str, condition: str, column: str = "max") -> KnownLimit:
    """The one row of the process limits with this item and condition; DataFault if it is not one."""
    rows = [r for r in reference_table(PROCESS_LIMITS) if (r["item"], r["condition"]) == (item, condition)]
    if len(rows) != 1:
        raise DataFault(f"{PROCESS_LIMITS} has {len(rows)} rows on {item}, {condition}.")
    row = rows[0]
    name = f"{row['topic']}: {item}, {condition}"
    return _known(name, row[column], row["unit"], row, PROCESS_LIMITS)


@cache
def safety_limit(subject: str, fact: str) -> KnownLimit:
    """The one row of the safety facts with this subject and fact; DataFault if it is not one."""
    rows = [r for r in reference_table(SAFETY_FACTS) if (r["subject"], r["fact"]) == (subject, fact)]
    if len(rows) != 1:
        raise DataFault(f"{SAFETY_FACTS} has {len(rows)} rows on {subject}, {fact}.")
    return _known(f"{subject}: {fact}", rows[0]["value"], rows[0]["unit"], rows[0], SAFETY_FACTS)


def _known(name: str, value: str, unit: str, row: Mapping[str, str], table: str) -> KnownLimit:
    source = Source(row["source"], row["how"], row["confidence"])
    return KnownLimit(name, float(value), unit, row["notes"], source, reference_edition(table))


def speaks_of(composition_wt: Mapping[str, float]) -> bool:
    """Whether there is something to tell of an alloy whatever its melting: gold in solder embrittles."""
    return tin_based(composition_wt) and "Au" in composition_wt


def tin_based(composition_wt: Mapping[str, float]) -> bool:
    """Whether an alloy is a tin or tin–lead solder: more than half of it tin and lead, and tin among them."""
    tin, lead = composition_wt.get("Sn", 0.0), composition_wt.get("Pb", 0.0)
    return tin > 0.0 and tin + lead > 50.0


def gold_limit(lead_bearing: bool) -> KnownLimit:
    """Gold in a tin-based joint, wt%, from which it is brittle."""
    return process_limit(f"gold in a {'SnPb' if lead_bearing else 'SAC'} joint", "embrittlement threshold")


def gold_volume_limit() -> KnownLimit:
    """Gold in a joint, vol%."""
    return process_limit("gold volume limit", "joint volume")


def gold_thickness_limit() -> KnownLimit:
    """Thickness of gold, µm, from which a standard wants it removed before soldering."""
    return process_limit(
        "gold thickness that asks for removal", "through-hole leads and solder terminals", "min"
    )


def usual_superheat() -> KnownLimit:
    """How far above its liquidus a filler is heated at most, °C; soldering and brazing alike."""
    return process_limit("brazing temperature above liquidus", "general practice")


def rohs_lead() -> KnownLimit:
    """Lead in a homogeneous material, wt%."""
    return safety_limit("lead", "RoHS maximum in homogeneous material")


def rohs_cadmium() -> KnownLimit:
    """Cadmium in a homogeneous material, wt%."""
    return safety_limit("cadmium", "RoHS maximum in homogeneous material")


def bismuth_lead_eutectic() -> KnownLimit:
    """Where bismuth, lead and tin melt together, °C: the upper end of what is printed."""
    return process_limit("bismuth with lead and tin", "ternary eutectic")
