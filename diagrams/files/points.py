"""Reads diagrams given by points (data/points/*.json): tables of tie lines read off a published diagram."""

import json
from dataclasses import dataclass
from functools import cache
from importlib.resources import files
from typing import Any, Literal

from diagrams.errors import DataFault, UnknownDiagram
from diagrams.sources import Source

FOLDER = files("diagrams") / "data" / "points"


@dataclass(frozen=True)
class PointField:
    """A two-phase field as a table of tie lines: rows of °C, left wt%, right wt%, upwards."""

    phases: tuple[str, str]
    rows: tuple[tuple[float, float, float], ...]


@dataclass(frozen=True)
class PointInvariant:
    """An invariant: its kind, reaction on cooling, °C and the wt% of each phase, left to right."""

    kind: str
    reaction: str
    temperature_c: float
    compositions_wt: tuple[tuple[str, float], ...]


@dataclass(frozen=True)
class Points:
    """One points file."""

    id: str
    elements: tuple[str, str]
    edition: str
    temperature_range_c: tuple[float, float]
    second_wt_range: tuple[float, float]
    sources: tuple[Source, ...]
    notes: tuple[str, ...]
    kinds: dict[str, Literal["liquid", "solid"]]
    compounds_wt: dict[str, float]
    fields: tuple[PointField, ...]
    invariants: tuple[PointInvariant, ...]


def point_ids() -> tuple[str, ...]:
    """Ids of all stored points files, sorted."""
    return tuple(sorted(e.name[:-5] for e in FOLDER.iterdir() if e.name.endswith(".json")))


@cache
def read_points(diagram_id: str) -> Points:
    """Read one points file; raises UnknownDiagram or DataFault."""
    if diagram_id not in point_ids():
        raise UnknownDiagram(f"there are no points named {diagram_id}", field="id")
    return points_from(json.loads((FOLDER / f"{diagram_id}.json").read_text(encoding="utf-8")))


def points_from(document: dict[str, Any]) -> Points:
    """Build points from the parsed text of a points file; raises DataFault where it is incomplete."""
    try:
        return Points(
            id=document["id"],
            elements=tuple(document["elements"]),
            edition=document["edition"],
            temperature_range_c=tuple(document["served"]["temperature_c"]),
            second_wt_range=tuple(document["served"]["second_wt"]),
            sources=tuple(Source(**s) for s in document["sources"]),
            notes=tuple(document["notes"]),
            kinds=dict(document["phases"]),
            compounds_wt={k: float(v) for k, v in document["compounds_wt"].items()},
            fields=tuple(
                PointField(tuple(f["phases"]), tuple((float(t), float(a), float(b)) for t, a, b in f["rows"]))
                for f in document["fields"]
            ),
            invariants=tuple(
                PointInvariant(
                    i["kind"], i["reaction"], float(i["temperature_c"]), tuple(i["compositions_wt"].items())
                )
                for i in document["invariants"]
            ),
        )
    except (KeyError, TypeError, ValueError) as error:
        raise DataFault(
            f"points file {document.get('id', '?')} is not complete: {error!r}",
            remedy="Compare with the shipped points files.",
        ) from error
