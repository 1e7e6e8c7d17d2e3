"""What speaks for a filler on the list and what against it, each in a sentence."""

from dataclasses import dataclass

from service.process.shortlist import Candidate, Wanted
from service.process.window_terms import label
from service.process.window_warnings import warnings_of_limits

# Common practice: from here on a joint under load creeps, and a melting range is narrow or wide.
HOMOLOGOUS = 0.8
NARROW_C, WIDE_C = 5.0, 50.0


@dataclass(frozen=True)
class Reason:
    """One thing to weigh; `code` is steady, `text` is for people."""

    code: str
    text: str


def reasons_for(candidate: Candidate, wanted: Wanted) -> list[Reason]:
    """What speaks for it; its window always does."""
    window, filler = candidate.window, candidate.filler
    low_c, high_c = window.minimum_peak_c, window.maximum_peak_c
    text = (
        f"Its window is {candidate.width_c:.1f} °C wide: the coldest joint from {low_c:.1f} °C "
        f"(“{window.binding_lower}”), the hottest up to {high_c:.1f} °C (“{window.binding_upper}”)."
    )
    found = [Reason("window", text)]
    if wanted.service_c is not None:
        apart_c = candidate.solidus_c - wanted.service_c
        text = f"It stays solid: it begins to melt {apart_c:.1f} °C above the service temperature."
        found.append(Reason("solid-in-service", text))
    found += [Reason("practice", suits.text) for suits in candidate.practice if suits.verdict == "for"]
    range_c = _range_c(candidate)
    if range_c <= NARROW_C:
        text = f"It melts within {range_c:.1f} °C: it flows at once and into narrow gaps (common practice)."
        found.append(Reason("melting-range", text))
    if not (filler.lead_bearing or filler.cadmium_bearing):
        found.append(Reason("no-lead-no-cadmium", "It holds neither lead nor cadmium."))
    return found


def reasons_against(candidate: Candidate, wanted: Wanted) -> list[Reason]:
    """What speaks against it, the warnings of its window among it; those of limits hold for all alike."""
    filler = candidate.filler
    found = [Reason("practice", suits.text) for suits in candidate.practice if suits.verdict == "against"]
    if candidate.homologous is not None and candidate.homologous > HOMOLOGOUS:
        text = (
            f"In use it is at {candidate.homologous:.3f} of its solidus in kelvin: above {HOMOLOGOUS:g} a "
            "joint under steady load creeps and has little strength (common practice)."
        )
        found.append(Reason("homologous", text))
    range_c = _range_c(candidate)
    if range_c >= WIDE_C:
        text = (
            f"It melts over {range_c:.0f} °C: heated slowly, what melts first runs away from the rest "
            "(common practice)."
        )
        found.append(Reason("melting-range", text))
    if filler.lead_bearing:
        text = "It holds lead: rules on goods, drinking water and the workplace restrict it."
        found.append(Reason("lead", text))
    if filler.cadmium_bearing:
        text = "It holds cadmium: its fume can kill, and rules bar it from many uses."
        found.append(Reason("cadmium", text))
    if filler.class_ == "braze" and "Zn" in filler.composition_wt:
        text = "It holds zinc, which fumes when overheated and has no place in vacuum (common practice)."
        found.append(Reason("zinc", text))
    if candidate.by_print:
        text = (
            f"{label(candidate.subject)} was not computed for this list: its printed melting range, or where "
            "the data put it, the less favourable of both, was taken, without its tolerance; POST "
            "/v1/window computes it."
        )
        found.append(Reason("not-computed", text))
    of_limits = warnings_of_limits(wanted.demands.upper_limits)
    own = (warned for warned in candidate.window.warnings if warned not in of_limits)
    return found + [Reason(warned.code, warned.text) for warned in own]


def _range_c(candidate: Candidate) -> float:
    low_c, high_c = candidate.subject.melter.range_c
    return high_c - low_c
