"""What to mind about a mixture, each warning with its limit and the source of that."""

from collections.abc import Iterator, Mapping, Sequence
from dataclasses import dataclass
from typing import Literal

from diagrams.sources import Source
from service.process.known_limits import (
    KnownLimit,
    bismuth_lead_eutectic,
    gold_limit,
    rohs_cadmium,
    rohs_lead,
    tin_based,
)
from service.process.placed import Placed

Code = Literal["gold-embrittlement", "lead-in-lead-free", "bismuth-and-lead", "cadmium"]


@dataclass(frozen=True)
class Sourced:
    """One thing to mind; `code` is steady, `text` is for people."""

    code: Code
    text: str
    source: Source
    edition: str


def mixture_warnings(
    composition_wt: Mapping[str, float], parts: Sequence[Placed | None], solidus_c: float | None
) -> tuple[Sourced, ...]:
    """All warnings, in a steady order; `solidus_c` is None where it is not known."""
    return tuple(_warnings(composition_wt, parts, solidus_c))


def lead_free(subject: Placed) -> bool:
    """Whether an alloy is a solder that counts as free of lead."""
    return subject.process == "solder" and subject.alloy.composition_wt.get("Pb", 0.0) <= rohs_lead().limit


def _warnings(
    wt: Mapping[str, float], parts: Sequence[Placed | None], solidus_c: float | None
) -> Iterator[Sourced]:
    gold = gold_limit("Pb" in wt)
    if tin_based(wt) and wt.get("Au", 0.0) > gold.limit:
        yield _told(
            "gold-embrittlement",
            f"The mixture holds {wt['Au']:.3g} wt% gold; above {gold.limit:g} wt% a tin-based joint is "
            f"brittle. Remove gold before soldering, or let more solder take it up ({gold.note}).",
            gold,
        )
    lead = rohs_lead()
    if wt.get("Pb", 0.0) > lead.limit and any(part is not None and lead_free(part) for part in parts):
        yield _told(
            "lead-in-lead-free",
            f"A lead-free part comes to hold {wt['Pb']:.3g} wt% lead; above {lead.limit:g} wt% a material is "
            f"not free of lead under the EU's rules. Handle, mark and dispose of it as lead-bearing.",
            lead,
        )
    if "Pb" in wt and "Bi" in wt:
        eutectic = bismuth_lead_eutectic()
        begins = "a temperature not known" if solidus_c is None else f"{solidus_c:.1f} °C at equilibrium"
        yield _told(
            "bismuth-and-lead",
            f"Bismuth meets lead: with tin they melt from about {eutectic.limit:g} °C on. Computed, this "
            f"mixture begins to melt at {begins}; on real cooling the last liquid may freeze lower.",
            eutectic,
        )
    cadmium = rohs_cadmium()
    if wt.get("Cd", 0.0) > cadmium.limit:
        yield _told(
            "cadmium",
            f"The mixture holds {wt['Cd']:.3g} wt% cadmium, whose fume is very poisonous; above "
            f"{cadmium.limit:g} wt% a material breaks the EU's limit. Use a cadmium-free filler.",
            cadmium,
        )


def _told(code: Code, text: str, limit: KnownLimit) -> Sourced:
    return Sourced(code, text, limit.source, limit.edition)
