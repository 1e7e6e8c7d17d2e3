"""Searches the spans of all standard fillers that are minimised: `python -m diagrams.fitting.spans`."""

import csv
import sys
from collections.abc import Iterable, Mapping
from importlib.resources import files
from pathlib import Path

from diagrams.alloys import alloy_from_designation
from diagrams.errors import DiagramsError
from diagrams.fillers import Filler, fillers
from diagrams.questions.by_minimisation import ByMinimisation
from diagrams.questions.melter import Span
from diagrams.questions.stored_spans import COLUMNS, PATH

COMMENT = (
    "# Solidus and liquidus of fillers over their tolerance, °C, as minimisation finds them; python -m "
    "diagrams.fitting.spans writes it.\n"
    "# Our own reckoning, kept to the last digit; lowest_at_wt and highest_at_wt are the compositions it was "
    "found at.\n"
)


def searched(filler: Filler) -> tuple[ByMinimisation, Span, Span] | None:
    """A filler with its solidus and liquidus, searched anew; None where it is not minimised."""
    try:
        melter = ByMinimisation(alloy_from_designation(filler.name), keeping=False)
        return melter, melter.kept(0.0), melter.needed(1.0)
    except DiagramsError:
        return None


def rows_of(chosen: Iterable[Filler]) -> list[tuple[str, ...]]:
    """The rows of the file for some fillers of three and more elements."""
    rows = []
    for filler in chosen:
        found = searched(filler) if len(filler.composition_wt) > 2 else None
        if found is None:
            continue
        melter, solidus, liquidus = found
        for end, span in (("solidus", solidus), ("liquidus", liquidus)):
            numbers = (span.nominal, span.safe_low, span.safe_high)
            at = (_cell(span.lowest_at or {}), _cell(span.highest_at or {}))
            named = (filler.name, melter.data_id, melter.edition, end)
            rows.append((*named, *(repr(float(n)) for n in numbers), *at, str(span.tried)))
    return rows


def _cell(composition_wt: Mapping[str, float]) -> str:
    return " ".join(f"{el}={float(wt)!r}" for el, wt in composition_wt.items())


def main() -> None:
    """Write the file; takes about a minute."""
    path = Path(str(files("diagrams").joinpath(*PATH)))
    rows = sorted(rows_of(fillers()))
    with path.open("w", encoding="utf-8", newline="") as file:
        file.write(COMMENT)
        csv.writer(file, lineterminator="\n").writerows([COLUMNS, *rows])
    sys.stdout.write(f"{path.name}: {len(rows)} rows\n")


if __name__ == "__main__":
    main()
