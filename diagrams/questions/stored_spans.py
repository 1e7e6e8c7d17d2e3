"""Solidus and liquidus over the tolerance of standard fillers that minimisation would have to search for.

A search takes a second or more; these answers are asked for every day, so they are kept as they were found.
`python -m diagrams.fitting.spans` writes them anew, which is due after any change of the data.
"""

import csv
from collections.abc import Mapping
from functools import cache
from importlib.resources import files
from typing import Literal

from diagrams.alloys import Alloy, alloy_from_designation
from diagrams.questions.melter import Span

End = Literal["solidus", "liquidus"]
PATH = ("data", "spans", "spans.csv")
COLUMNS = (
    "filler", "data", "edition", "end", "nominal_c", "lowest_c", "highest_c",
    "lowest_at_wt", "highest_at_wt", "tried",
)  # fmt: skip


def stored_span(alloy: Alloy, data_id: str, edition: str, end: End) -> Span | None:
    """The span kept for a filler as its standard has it; None for any other alloy, and for other data."""
    if alloy.filler is None:
        return None
    found = _spans().get((alloy.filler.name, data_id, edition, end))
    if found is None:
        return None
    standard = alloy_from_designation(alloy.filler.name)
    same = (alloy.composition_wt, alloy.limits_wt) == (standard.composition_wt, standard.limits_wt)
    return found if same else None


@cache
def _spans() -> Mapping[tuple[str, str, str, str], Span]:
    text = files("diagrams").joinpath(*PATH).read_text(encoding="utf-8")
    rows = csv.DictReader([line for line in text.splitlines() if not line.startswith("#")])
    return {
        (row["filler"], row["data"], row["edition"], row["end"]): Span(
            float(row["nominal_c"]),
            float(row["lowest_c"]),
            float(row["highest_c"]),
            _composition(row["lowest_at_wt"]),
            _composition(row["highest_at_wt"]),
            int(row["tried"]),
        )
        for row in rows
    }


def _composition(cell: str) -> Mapping[str, float]:
    return {el: float(wt) for el, _, wt in (part.partition("=") for part in cell.split())}
