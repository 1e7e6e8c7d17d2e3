"""How far computed melting ranges lie from printed ones: every computed filler held against its print.

Stored as a table, so that an answer can say how good its data were found to be without computing a hundred
alloys. `python -m diagrams.comparison` writes it anew, which is due after any change of the data; a test
says so. Diagrams drawn through the prints themselves are no check of them and are left out.
"""

import csv
import sys
from collections.abc import Iterable
from dataclasses import dataclass
from functools import cache
from pathlib import Path

from diagrams.alloys import alloy_from_designation
from diagrams.errors import DiagramsError
from diagrams.files.catalog import catalog
from diagrams.fillers import Filler, fillers
from diagrams.questions.melt import melter_for
from diagrams.reference import reference_edition, reference_table

TABLE = "comparison.csv"
DRAWN_THROUGH_PRINTS = frozenset({"ag-pd", "in-pb", "sb-sn"})
COMMENT = (
    "# Computed less printed solidus and liquidus, °C, of every filler that is computed; python -m "
    "diagrams.comparison writes it.\n"
    "# Our own reckoning against fillers.csv, no outside value. The edition stands in EDITIONS.json.\n"
)
COLUMNS = ("filler", "data", "solidus_off_c", "liquidus_off_c")


@dataclass(frozen=True)
class Compared:
    """One filler: computed less printed, °C; `data_id` names the diagram or system it was computed from."""

    filler: str
    data_id: str
    solidus_off_c: float
    liquidus_off_c: float


@cache
def compared() -> tuple[Compared, ...]:
    """The stored table."""
    return tuple(
        Compared(row["filler"], row["data"], float(row["solidus_off_c"]), float(row["liquidus_off_c"]))
        for row in reference_table(TABLE)
    )


def comparison_edition() -> str:
    """Edition of the stored table."""
    return reference_edition(TABLE)


def compare(chosen: Iterable[Filler]) -> list[Compared]:
    """Computed anew, rounded to 0.01 °C; fillers that no data cover are left out."""
    found = []
    for filler in chosen:
        try:
            melter = melter_for(catalog(), alloy_from_designation(filler.name)).melter
            if melter.method == "standard table" or melter.data_id in DRAWN_THROUGH_PRINTS:
                continue
            solidus_c, liquidus_c = melter.range_c
        except DiagramsError:
            continue
        off = (round(solidus_c - filler.solidus_c, 2) + 0.0, round(liquidus_c - filler.liquidus_c, 2) + 0.0)
        found.append(Compared(filler.name, melter.data_id, *off))
    return found


def main() -> None:
    """Write the table and say how many rows EDITIONS.json has to promise."""
    path = Path(__file__).parent / "data" / "reference" / TABLE
    rows = sorted(compare(fillers()), key=lambda row: (row.data_id, row.filler))
    with path.open("w", encoding="utf-8", newline="") as file:
        file.write(COMMENT)
        writer = csv.writer(file, lineterminator="\n")
        writer.writerow(COLUMNS)
        writer.writerows(
            (row.filler, row.data_id, f"{row.solidus_off_c:.2f}", f"{row.liquidus_off_c:.2f}") for row in rows
        )
    sys.stdout.write(f"{TABLE}: {len(rows)} rows\n")


if __name__ == "__main__":
    main()
