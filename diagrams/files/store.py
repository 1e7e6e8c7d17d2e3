"""Diagrams on disk: one JSON text a diagram, one vertex a line, so that a change of data reads in a diff."""

import json
from importlib.resources import files
from types import MappingProxyType
from typing import Any

import shapely

from diagrams.diagram import Diagram, Invariant, LineCompound, Region
from diagrams.errors import DataFault
from diagrams.sources import Source

FOLDER = files("diagrams") / "data" / "diagrams"
FORMAT = 1


def stored_ids() -> tuple[str, ...]:
    """Ids of all stored diagrams, sorted."""
    return tuple(sorted(e.name[:-5] for e in FOLDER.iterdir() if e.name.endswith(".json")))


def stored_text(diagram_id: str) -> str:
    """The text of a stored diagram."""
    return (FOLDER / f"{diagram_id}.json").read_text(encoding="utf-8")


def to_text(diagram: Diagram) -> str:
    """The text a diagram is stored as; the same diagram gives the same text."""
    head = {
        "format": FORMAT,
        "id": diagram.id,
        "elements": list(diagram.elements),
        "kind": diagram.kind,
        "edition": diagram.edition,
        "temperature_range_c": list(diagram.temperature_range_c),
        "composition_range_wt": list(diagram.composition_range_wt),
    }
    lines = [f" {_json(key)}: {_json(value)}," for key, value in head.items()]
    sources = [{"text": s.text, "how": s.how, "confidence": s.confidence} for s in diagram.sources]
    lines += _rows("sources", sources)
    lines += _rows("notes", list(diagram.notes))
    lines += _rows("invariants", [_invariant(i) for i in diagram.invariants])
    lines += _rows("compounds", [vars(c) for c in diagram.compounds])
    regions = ",\n".join(_region(r) for r in diagram.regions)
    return "{\n" + "\n".join(lines) + '\n "regions": [\n' + regions + "\n ]\n}\n"


def _json(value: Any) -> str:
    return json.dumps(value, ensure_ascii=False)


def _rows(key: str, values: list[Any]) -> list[str]:
    if not values:
        return [f' "{key}": [],']
    body = ",\n".join(f"  {_json(v)}" for v in values)
    return [f' "{key}": [\n{body}\n ],']


def _invariant(invariant: Invariant) -> dict[str, Any]:
    return {
        "kind": invariant.kind,
        "temperature_c": invariant.temperature_c,
        "reaction": invariant.reaction,
        "compositions_wt": dict(invariant.compositions_wt),
    }


def _region(region: Region) -> str:
    head: dict[str, Any] = {
        "phases": list(region.phases),
        "kinds": list(region.kinds),
        "models": list(region.models),
    }
    if region.beyond_wt:
        head["beyond_wt"] = dict(region.beyond_wt)
    if region.beyond_line:
        head["beyond_line"] = dict(region.beyond_line)
    words = ", ".join(f"{_json(k)}: {_json(v)}" for k, v in head.items())
    ring = ",\n".join(f"    {_json(list(p))}" for p in region.polygon.exterior.coords)
    return f'  {{{words},\n   "polygon": [\n{ring}\n   ]}}'


def from_text(text: str) -> Diagram:
    """Read a diagram from its stored text; raises DataFault where it is not in the stored form."""
    try:
        document = json.loads(text)
        if document["format"] != FORMAT:
            raise DataFault(f"format {document['format']} is not {FORMAT}")
        return Diagram(
            id=document["id"],
            elements=tuple(document["elements"]),
            kind=document["kind"],
            temperature_range_c=tuple(document["temperature_range_c"]),
            composition_range_wt=tuple(document["composition_range_wt"]),
            edition=document["edition"],
            sources=tuple(Source(**s) for s in document["sources"]),
            notes=tuple(document["notes"]),
            regions=tuple(_read_region(r) for r in document["regions"]),
            invariants=tuple(
                Invariant(
                    i["kind"], i["temperature_c"], i["reaction"], MappingProxyType(i["compositions_wt"])
                )
                for i in document["invariants"]
            ),
            compounds=tuple(LineCompound(**c) for c in document["compounds"]),
        )
    except (KeyError, TypeError, ValueError) as error:
        raise DataFault(f"a stored diagram is not readable: {error!r}") from error


def _read_region(document: dict[str, Any]) -> Region:
    return Region(
        phases=tuple(document["phases"]),
        kinds=tuple(document["kinds"]),
        models=tuple(document["models"]),
        polygon=shapely.Polygon(document["polygon"]),
        beyond_wt=MappingProxyType(document.get("beyond_wt", {})),
        beyond_line=MappingProxyType(
            {
                phase: tuple((float(wt), float(t)) for wt, t in line)
                for phase, line in document.get("beyond_line", {}).items()
            }
        ),
    )
