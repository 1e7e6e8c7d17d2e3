"""Published limits of solder baths by the kind of bath, from the table of process limits."""

from dataclasses import dataclass
from functools import cache

from diagrams.reference import reference_table
from diagrams.sources import Source
from service.process.bounds import Bounds
from service.process.known_limits import PROCESS_LIMITS
from service.schemas.baths import BathKind

BOTH = "both baths"
_ROWS: dict[BathKind, tuple[str, tuple[str, ...]]] = {
    "SnPb assembly": ("Solder bath contamination limit J-STD-001 (SnPb)", ("assembly bath", BOTH)),
    "SnPb tinning": (
        "Solder bath contamination limit J-STD-001 (SnPb)",
        ("preconditioning (tinning) bath", BOTH),
    ),
    "lead-free assembly": ("Solder bath contamination limit J-STD-001 (Pb-free)", ("SAC-type bath",)),
    "SAC305 pot": ("Take-action limit, SAC305 bath (service chart)", ("SAC305 pot",)),
}


@dataclass(frozen=True)
class PublishedLimit:
    """Bounds (wt%) of one element, or of the sum of several."""

    elements: tuple[str, ...]
    bounds_wt: Bounds
    source: Source

    @property
    def label(self) -> str:
        """As the table has it."""
        return " + ".join(self.elements)


@cache
def bath_limits(kind: BathKind) -> tuple[PublishedLimit, ...]:
    """All limits of a kind of bath, in the order of the table."""
    topic, conditions = _ROWS[kind]
    found = []
    for row in reference_table(PROCESS_LIMITS):
        if row["topic"] != topic or row["condition"] not in conditions:
            continue
        low, high = (float(row[column]) if row[column] else None for column in ("min", "max"))
        elements = tuple(part.strip() for part in row["item"].split("+"))
        source = Source(row["source"], row["how"], row["confidence"])
        found.append(PublishedLimit(elements, Bounds(low, high), source))
    return tuple(found)
