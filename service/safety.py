"""The cautions that come with every answer, chosen by what was asked about."""

import json
from collections.abc import Iterable
from functools import cache, lru_cache
from importlib.resources import files
from typing import Any, Literal, NamedTuple

from diagrams.errors import DataFault
from service.schemas.base import RegulationPointer, Safety, SafetyNote

Process = Literal["solder", "braze"]
PROCESSES: tuple[Process, Process] = ("solder", "braze")


class _Entry(NamedTuple):
    note: SafetyNote
    always: bool
    elements: frozenset[str]
    process: str | None
    above_c: float | None


class _Notes(NamedTuple):
    edition: str
    entries: tuple[_Entry, ...]
    regulations: list[RegulationPointer]
    reminder: str
    thresholds_c: tuple[float, ...]


def safety_for(
    elements: Iterable[str], process: Process | None = None, temperature_c: float | None = None
) -> Safety:
    """Return the cautions for an alloy of these elements, worked by a process at a temperature in °C.

    Without a process the fluxes and gases of both are warned of; without a temperature no boiling point
    is named. Nothing asked about gives the cautions that always hold. Lead among the elements always
    brings the notes on lead.
    """
    asked = elements if isinstance(elements, frozenset) else frozenset(elements)
    passed = None if temperature_c is None else sum(temperature_c >= limit for limit in _notes().thresholds_c)
    return _chosen(asked, process, passed)


def safety_of_examples() -> Safety:
    """Return the cautions for pages that show examples: those that always hold, and those on lead."""
    solder, braze = (safety_for({"Pb"}, process) for process in PROCESSES)
    return solder.model_copy(update={"notes": [note for note in solder.notes if note in braze.notes]})


def safety_edition() -> str:
    """Return the edition of the stored notes."""
    return _notes().edition


@lru_cache(maxsize=4096)
def _chosen(elements: frozenset[str], process: Process | None, passed: int | None) -> Safety:
    stored = _notes()
    reached_c = None if passed is None else (float("-inf"), *stored.thresholds_c)[passed]
    nothing_asked = not elements and process is None and passed is None
    chosen = [
        entry.note
        for entry in stored.entries
        if entry.always or (not nothing_asked and _applies(entry, elements, process, reached_c))
    ]
    return Safety(notes=chosen, regulations=stored.regulations, reminder=stored.reminder)


def _applies(
    entry: _Entry, elements: frozenset[str], process: Process | None, reached_c: float | None
) -> bool:
    return (
        (not entry.elements or not entry.elements.isdisjoint(elements))
        and (entry.process is None or process is None or entry.process == process)
        and (entry.above_c is None or (reached_c is not None and reached_c >= entry.above_c))
    )


@cache
def _notes() -> _Notes:
    raw = json.loads(files("service").joinpath("data/safety_notes.json").read_text(encoding="utf-8"))
    entries = tuple(_entry(item) for item in raw["notes"])
    if not any(e.elements >= {"Pb"} and e.process is None and e.above_c is None for e in entries):
        raise DataFault("The safety notes hold no unconditional note on lead.")
    return _Notes(
        edition=raw["edition"],
        entries=entries,
        regulations=[RegulationPointer(region=r["region"], pointer=r["pointer"]) for r in raw["regulations"]],
        reminder=raw["reminder"],
        thresholds_c=tuple(sorted({entry.above_c for entry in entries if entry.above_c is not None})),
    )


def _entry(item: dict[str, Any]) -> _Entry:
    when = item["when"]
    unknown = set(when) - {"always", "elements", "process", "above_c"}
    if unknown or not when:
        raise DataFault(f"The safety note on {item['topic']} has a condition that cannot be read.")
    return _Entry(
        note=SafetyNote(topic=item["topic"], text=item["text"]),
        always=bool(when.get("always", False)),
        elements=frozenset(when.get("elements", ())),
        process=when.get("process"),
        above_c=when.get("above_c"),
    )
