"""What to mind about a window that is right as far as it goes."""

from collections.abc import Iterable, Sequence
from dataclasses import dataclass

from service.process.data_uncertainty import PRINTED, data_uncertainty
from service.process.known_limits import process_limit
from service.process.placed import Placed
from service.process.upper_limits import BASE_METAL
from service.process.window_parts import Term
from service.process.window_terms import EarlierJoint, UpperLimit, label

_JUMP = 1e-6  # liquid fraction; less is no melting at once


@dataclass(frozen=True)
class Warned:
    """One thing to mind; `code` is steady, `text` is for people."""

    code: str
    text: str


def warnings_of(
    filler: Placed,
    joints: Sequence[EarlierJoint],
    limits: Sequence[UpperLimit],
    upper: Sequence[Term],
    *,
    target_liquid_fraction: float,
    solidus_c: float,
    data_compared: bool,
) -> tuple[Warned, ...]:
    """All warnings, in a steady order."""
    found = []
    if target_liquid_fraction < 1.0:
        share = f"{100 * target_liquid_fraction:.4g} %"
        text = f"The filler need only be {share} liquid: the rest may stay behind as a skull."
        found.append(Warned("partly-liquid", text))
    if not upper:
        text = (
            "No upper limit was given and none is known: the window is open above. Parts, base metals, flux "
            "and filler all have one; give it as upper_limits."
        )
        found.append(Warned("no-upper-limit", text))
    for term in upper:
        if term.value_c < solidus_c:
            text = f"“{term.name}” allows {term.value_c:.2f} °C; the filler's solidus is {solidus_c:.2f} °C."
            found.append(Warned("limit-below-solidus", text))
    for joint in joints:
        found += _melting_at_once(joint)
    found += [Warned("alloy-note", text) for text in _noted([filler, *(j.subject for j in joints)])]
    found += [Warned("printed-values", text) for text in _printed([filler, *(j.subject for j in joints)])]
    if data_compared:
        unknown = _not_compared([filler, *(j.subject for j in joints)])
        found += [Warned("data-not-compared", text) for text in unknown]
    found += [Warned("from-memory", text) for text in _remembered([filler, *(j.subject for j in joints)])]
    return (*found, *warnings_of_limits(limits))


def warnings_of_limits(limits: Sequence[UpperLimit]) -> list[Warned]:
    """Those that have nothing to do with the filler."""
    found = [Warned("base-metal-solidus", text) for text in _at_the_solidus(limits)]
    return found + [Warned("from-memory", text) for text in _remembered_limits(limits)]


def _melting_at_once(joint: EarlierJoint) -> Iterable[Warned]:
    """An earlier joint whose bound stands on a temperature where much of it melts at once.

    A sensor tolerance keeps no distance: if the reading is that wrong, the joint is right there.
    """
    if joint.max_liquid_fraction >= 1.0 or joint.margin_c > 0.0:
        return
    melter = joint.subject.melter
    limit = melter.kept(joint.max_liquid_fraction)
    jump = melter.jump(limit.safe_low, limit.lowest_at or melter.alloy.composition_wt)
    if jump > _JUMP:
        yield Warned(
            "melts-at-once",
            f"At {limit.safe_low:.2f} °C {100 * jump:.3g} % of {joint.name} melts at once, and no margin_c "
            f"keeps a distance from it.",
        )


def _at_the_solidus(limits: Iterable[UpperLimit]) -> Iterable[str]:
    """Base metals heated right up to where they begin to melt; what a guide advises for aluminium."""
    advised = process_limit("keep brazing temperature under base-metal solidus by", "aluminium base metals")
    for limit in limits:
        known = limit.known
        if known is None or known.kind != BASE_METAL or limit.margin_c > 0.0:
            continue
        text = f"“{limit.name}” is bounded by where {known.subject} begins to melt, with no margin_c to it."
        if known.subject.startswith("Al "):
            text += f" {advised.limit:g} °C are advised ({advised.source.text}, {advised.source.how})."
        yield text


def _remembered_limits(limits: Iterable[UpperLimit]) -> Iterable[str]:
    for limit in limits:
        if limit.known is not None and limit.known.source.how == "from memory":
            yield f"The limit of “{limit.name}” stands in the table from memory: guidance, no claim."


def _noted(subjects: Iterable[Placed]) -> list[str]:
    """What their answers say of the alloys, each once."""
    return list(dict.fromkeys(f"{label(s)}: {note}" for s in subjects for note in s.shown.notes))


def _printed(subjects: Iterable[Placed]) -> list[str]:
    """What rests on printed temperatures alone, each once."""
    texts: dict[str, None] = {}
    for subject in subjects:
        if subject.melter.method == "standard table":
            texts[
                f"No data cover {label(subject)}: its printed solidus and liquidus stand in, for guidance. "
                f"How much is liquid between them, and what its tolerance changes, is not known."
            ] = None
    return list(texts)


def _not_compared(subjects: Iterable[Placed]) -> list[str]:
    """Alloys of whose data nothing tells how far they are off, each once."""
    lacking = [subject for subject in subjects if not data_uncertainty(subject.melter, 1.0).known]
    texts = [
        f"Nothing tells how far the data for {label(subject)} may be off: none of it is counted."
        for subject in lacking
    ]
    return list(dict.fromkeys(texts))


def _remembered(subjects: Iterable[Placed]) -> list[str]:
    """What rests on values written down from memory, each once."""
    texts: dict[str, None] = {}
    for subject in subjects:
        melter, row = subject.melter, subject.alloy.filler
        if any(source.how == "from memory" for source in melter.sources):
            told = f"{label(subject)} in the filler table" if melter.method == PRINTED else melter.data_id
            texts[f"The data for {told} rest on values from memory: guidance, no claim."] = None
        if row is None:
            continue
        limits = subject.melter.limits_wt and subject.tolerance_field != "tolerance_wt"
        if limits and "from memory" in row.limits_source:
            texts[f"The tolerance of {label(subject)} stands in the table from memory."] = None
        if row.brazing_range_c is not None and "from memory" in f"{row.how} {row.notes}":
            texts[f"The brazing range of {label(subject)} stands in the table from memory."] = None
    return list(texts)
