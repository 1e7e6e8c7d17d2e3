"""The cautions in short, for pictures: the reminder, then the first sentence of each note."""

from collections.abc import Iterable

from service.safety import Process, safety_for

_EITHER_PROCESS = (
    "Flux, furnace gas and torch bring hazards of their own: ask for the cautions of your process."
)


def caution_lines(elements: Iterable[str], process: Process | None = None) -> tuple[str, str]:
    """Two paragraphs: what decides, and what to mind with an alloy of these elements.

    Without a process only what holds for soldering and brazing alike is told.
    """
    asked = frozenset(elements)
    safety = safety_for(asked, process or "solder")
    notes = safety.notes
    if process is None:
        alike = safety_for(asked, "braze").notes
        notes = [note for note in notes if note in alike]
    told = [f"{note.topic.capitalize()}: {_first_sentence(note.text)}" for note in notes]
    if process is None:
        told.append(_EITHER_PROCESS)
    return _first_sentence(safety.reminder), " ".join(told)


def _first_sentence(text: str) -> str:
    return text.partition(". ")[0].rstrip(".") + "."
