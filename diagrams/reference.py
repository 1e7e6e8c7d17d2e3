"""Reads the shipped reference tables: text files whose first lines, marked with #, say what they hold."""

import csv
import json
from collections.abc import Mapping
from functools import cache
from importlib.resources import files

from diagrams.errors import DataFault


@cache
def reference_table(name: str) -> tuple[Mapping[str, str], ...]:
    """All rows of a table such as `fillers.csv`, as text; empty cells are empty strings.

    Raises DataFault if a row has more or fewer cells than the head, or a number of rows other than
    the edition promises.
    """
    text = files("diagrams").joinpath("data", "reference", name).read_text(encoding="utf-8")
    lines = [line for line in text.splitlines() if not line.startswith("#")]
    head, *body = csv.reader(lines, strict=True)
    for cells in body:
        if len(cells) != len(head):
            raise DataFault(
                f"A row of {name} has {len(cells)} cells instead of {len(head)}: {cells[:1]}.",
                field=name,
                remedy="Quote texts that hold commas.",
            )
    rows = tuple(dict(zip(head, cells, strict=True)) for cells in body)
    promised = _editions()[name]["rows"]
    if len(rows) != promised:
        raise DataFault(
            f"{name} holds {len(rows)} rows instead of {promised}.",
            field=name,
            remedy="A changed table needs a new edition in EDITIONS.json.",
        )
    return rows


def reference_edition(name: str) -> str:
    """The edition of a table, named in every answer that draws on it."""
    return str(_editions()[name]["edition"])


def reference_guidance(name: str) -> str:
    """What a reader must know before relying on a table."""
    return str(_editions()[name]["guidance"])


@cache
def _editions() -> Mapping[str, Mapping[str, str | int]]:
    text = files("diagrams").joinpath("data", "reference", "EDITIONS.json").read_text(encoding="utf-8")
    editions: Mapping[str, Mapping[str, str | int]] = json.loads(text)
    return editions
