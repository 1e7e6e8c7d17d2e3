"""Writes the comparison of computed with printed melting ranges anew: `python -m diagrams.fitting.compare`.

Diagrams drawn through the prints themselves are no check of them and are left out; rows that went into a
fit are marked.
"""

import csv
import re
import sys
from collections.abc import Iterable
from importlib.resources import files
from pathlib import Path

from diagrams.alloys import alloy_from_designation
from diagrams.comparison import COLUMNS, DRAWN_THROUGH_PRINTS, TABLE, Compared
from diagrams.errors import DiagramsError, UnknownAlloy
from diagrams.files.catalog import catalog
from diagrams.fillers import Filler, fillers, find_filler
from diagrams.fitting.fit import fitted_facts
from diagrams.fitting.systems import read_system_fit, system_fit_ids
from diagrams.many.reading import read_system, system_ids
from diagrams.questions.melt import melter_for

COMMENT = (
    "# Computed less printed solidus and liquidus, °C, of every filler that is computed; python -m "
    "diagrams.fitting.compare writes it.\n"
    "# Our own reckoning against fillers.csv, no outside value. The edition stands in EDITIONS.json.\n"
)
_MELTING_OF = re.compile(r"melting range of (.+?) \(")


def compare(chosen: Iterable[Filler]) -> list[Compared]:
    """Computed anew, rounded to 0.01 °C; fillers that no data cover are left out."""
    used = used_in_fits()
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
        found.append(Compared(filler.name, melter.data_id, *off, used_in_fit=filler.name in used))
    return found


def used_in_fits() -> frozenset[str]:
    """The fillers whose printed melting range was an aim of a fit."""
    used = {name for fact in fitted_facts() for name in fact.fillers}
    used |= {t.filler for k in system_fit_ids() for t in read_system_fit(k).targets if t.filler}
    for fact in (fact for k in system_ids() for fact in read_system(k).fitted_to):
        if match := _MELTING_OF.match(fact):
            try:
                used.add(find_filler(match[1]).name)
            except UnknownAlloy:
                continue  # a print that the table does not hold
    return frozenset(used)


def main() -> None:
    """Write the table and say how many rows EDITIONS.json has to promise."""
    path = Path(str(files("diagrams").joinpath("data", "reference", TABLE)))
    rows = sorted(compare(fillers()), key=lambda row: (row.data_id, row.filler))
    with path.open("w", encoding="utf-8", newline="") as file:
        file.write(COMMENT)
        writer = csv.writer(file, lineterminator="\n")
        writer.writerow(COLUMNS)
        for row in rows:
            used = "yes" if row.used_in_fit else "no"
            off = (f"{row.solidus_off_c:.2f}", f"{row.liquidus_off_c:.2f}")
            writer.writerow((row.filler, row.data_id, *off, used))
    sys.stdout.write(f"{TABLE}: {len(rows)} rows\n")


if __name__ == "__main__":
    main()
