"""A section from a line between two alloys: columns, polygons, contours, invariants."""

import hashlib
import json
from collections import Counter
from dataclasses import replace
from itertools import pairwise
from types import MappingProxyType

from diagrams.sections.contours import contours_of
from diagrams.sections.line import Line
from diagrams.sections.naming import Named
from diagrams.sections.section import Run, Section, SectionInvariant
from diagrams.sections.stations import runs_of
from diagrams.sections.sweep import swept
from diagrams.sections.tiling import regions_of
from diagrams.sources import Source

ID_LENGTH = 12


def section_id(line: Line) -> str:
    """The id of a section: the same line in the same range on the same edition has the same."""
    content = {
        "from": {el: float(wt) for el, wt in line.from_wt.items()},
        "to": {el: float(wt) for el, wt in line.to_wt.items()},
        "most": float(line.most),
        "temperature_range_c": [float(t) for t in line.temperature_range_c],
        "data": line.place.file.id,
        "edition": line.place.file.edition,
    }
    text = json.dumps(content, sort_keys=True)
    return hashlib.sha256(text.encode()).hexdigest()[:ID_LENGTH]


def build_section(line: Line, name: str, from_name: str, to_name: str) -> Section:
    """Compute a section; raises NotConverged where it cannot be proven."""
    columns = swept(line)
    runs, named = runs_of(line, columns)
    regions, numbers = regions_of(runs, named)
    fields = [
        tuple(regions[n].name if n >= 0 else run.fields[k] for k, n in enumerate(row))
        for run, row in zip(runs, numbers, strict=True)
    ]
    runs = tuple(replace(run, fields=names) for run, names in zip(runs, fields, strict=True))
    file = line.place.file
    return Section(
        id=section_id(line),
        name=name,
        from_wt=MappingProxyType(dict(line.from_wt)),
        to_wt=MappingProxyType(dict(line.to_wt)),
        from_name=from_name,
        to_name=to_name,
        to_share_max=line.most,
        temperature_range_c=line.temperature_range_c,
        data_id=file.id,
        edition=file.edition,
        sources=tuple(Source(s["text"], s["how"], s["confidence"]) for s in file.sources),
        notes=file.notes,
        regions=tuple(regions),
        contours=contours_of(runs),
        invariants=_invariants(runs, named),
        compounds=MappingProxyType(dict(line.compounds)),
        runs=runs,
    )


def _invariants(runs: tuple[Run, ...], named: list[list[list[Named]]]) -> tuple[SectionInvariant, ...]:
    """Levels at which more than one phase changes, runs on end with each other put together."""
    found: dict[tuple[float, str, str], SectionInvariant] = {}
    for run, parts in zip(runs, named, strict=True):
        for k, (under, over) in enumerate(pairwise(parts)):
            if _differ(under, over) < 2:
                continue
            level = sorted(s.levels[k + 1] for s in run.stations)[len(run.stations) // 2]
            key = round(level, 2), run.fields[k], run.fields[k + 1]
            west, east = run.stations[0].to_share, run.stations[-1].to_share
            known = found.get(key)
            if known is not None:
                west, east = min(west, known.from_share), max(east, known.to_share)
            found[key] = SectionInvariant(round(level, 3), *key[1:], west, east)
    return tuple(sorted(found.values(), key=lambda i: (i.temperature_c, i.from_share)))


def _differ(one: list[Named], two: list[Named]) -> int:
    a, b = (Counter(model for _, _, model in phases) for phases in (one, two))
    return (a - b).total() + (b - a).total()
