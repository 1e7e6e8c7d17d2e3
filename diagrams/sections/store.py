"""Sections on disk: a JSON text each, one vertex or station a line, so that a change reads in a diff."""

import json
from importlib.resources import files
from types import MappingProxyType
from typing import Any

import shapely

from diagrams.diagram import Region
from diagrams.errors import DataFault
from diagrams.sections.section import Contour, Run, Section, SectionInvariant, Station
from diagrams.sources import Source

FOLDER = files("diagrams") / "data" / "sections"
LINES = "lines.json"  # which sections are to be stored
FORMAT = 1


def stored_names() -> tuple[str, ...]:
    """Names of all stored sections, sorted."""
    return tuple(
        sorted(e.name[:-5] for e in FOLDER.iterdir() if e.name.endswith(".json") and e.name != LINES)
    )


def stored_text(name: str) -> str:
    """The text of a stored section."""
    return (FOLDER / f"{name}.json").read_text(encoding="utf-8")


def to_text(section: Section) -> str:
    """The text a section is stored as; the same section gives the same text."""
    head = {
        "format": FORMAT,
        "id": section.id,
        "name": section.name,
        "from": {"name": section.from_name, "wt": dict(section.from_wt)},
        "to": {"name": section.to_name, "wt": dict(section.to_wt)},
        "to_share_max": section.to_share_max,
        "temperature_range_c": list(section.temperature_range_c),
        "data": section.data_id,
        "edition": section.edition,
        "compounds": [[share, name] for share, name in section.compounds.items()],
    }
    parts = [f" {_json(key)}: {_json(value)}" for key, value in head.items()]
    sources = [{"text": s.text, "how": s.how, "confidence": s.confidence} for s in section.sources]
    parts.append(_rows("sources", sources, " "))
    parts.append(_rows("notes", list(section.notes), " "))
    parts.append(_rows("invariants", [vars(i) for i in section.invariants], " "))
    regions = [
        _rows("polygon", [list(p) for p in r.polygon.exterior.coords], "   ", _words(r))
        for r in section.regions
    ]
    parts.append(_list("regions", regions))
    contours = [
        _rows("line", [list(p) for p in line], "   ", f'"liquid": {_json(c.liquid_mass_fraction)}')
        for c in section.contours
        for line in c.lines
    ]
    parts.append(_list("contours", contours))
    runs = [
        _rows(
            "stations",
            [[s.to_share, list(s.levels), [list(x) for x in s.liquids]] for s in run.stations],
            "   ",
            f'"fields": {_json(list(run.fields))}',
        )
        for run in section.runs
    ]
    parts.append(_list("runs", runs))
    return "{\n" + ",\n".join(parts) + "\n}\n"


def _json(value: Any) -> str:
    return json.dumps(value, ensure_ascii=False)


def _words(region: Region) -> str:
    head: dict[str, Any] = {
        "phases": list(region.phases),
        "kinds": list(region.kinds),
        "models": list(region.models),
    }
    if region.polygon.interiors:  # a field all around another
        head["holes"] = [[list(p) for p in ring.coords] for ring in region.polygon.interiors]
    return ", ".join(f"{_json(k)}: {_json(v)}" for k, v in head.items())


def _rows(key: str, values: list[Any], indent: str, before: str = "") -> str:
    lead = f"{before},\n{indent}" if before else indent
    if not values:
        return f'{lead}"{key}": []'
    body = ",\n".join(f"{indent} {_json(v)}" for v in values)
    return f'{lead}"{key}": [\n{body}\n{indent}]'


def _list(key: str, items: list[str]) -> str:
    body = ",\n".join(f"  {{{item}}}" for item in items)
    return f' "{key}": [\n{body}\n ]'


def from_text(text: str) -> Section:
    """Read a section from its stored text; raises DataFault where it is not in the stored form."""
    try:
        document = json.loads(text)
        if document["format"] != FORMAT:
            raise DataFault(f"format {document['format']} is not {FORMAT}")
        return _section(document)
    except (KeyError, TypeError, ValueError) as error:
        raise DataFault(f"a stored section is not readable: {error!r}") from error


def _section(document: dict[str, Any]) -> Section:
    lines: dict[float, list[tuple[tuple[float, float], ...]]] = {}
    for item in document["contours"]:
        lines.setdefault(item["liquid"], []).append(tuple((x, t) for x, t in item["line"]))
    low, high = document["temperature_range_c"]
    return Section(
        id=document["id"],
        name=document["name"],
        from_wt=MappingProxyType(document["from"]["wt"]),
        to_wt=MappingProxyType(document["to"]["wt"]),
        from_name=document["from"]["name"],
        to_name=document["to"]["name"],
        to_share_max=document["to_share_max"],
        temperature_range_c=(low, high),
        data_id=document["data"],
        edition=document["edition"],
        sources=tuple(Source(**s) for s in document["sources"]),
        notes=tuple(document["notes"]),
        regions=tuple(
            Region(
                tuple(r["phases"]),
                tuple(r["kinds"]),
                tuple(r["models"]),
                shapely.Polygon(r["polygon"], r.get("holes", [])),
            )
            for r in document["regions"]
        ),
        contours=tuple(Contour(liquid, tuple(found)) for liquid, found in lines.items()),
        invariants=tuple(SectionInvariant(**i) for i in document["invariants"]),
        compounds=MappingProxyType(dict(document["compounds"])),
        runs=tuple(
            Run(
                tuple(run["fields"]),
                tuple(
                    Station(x, tuple(levels), tuple(tuple(v) for v in liquids))
                    for x, levels, liquids in run["stations"]
                ),
            )
            for run in document["runs"]
        ),
    )
