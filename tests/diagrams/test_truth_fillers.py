"""Computed against tabulated melting ranges: every two-element filler of the table whose system is stored."""

from dataclasses import dataclass

import numpy as np
import pytest

from diagrams.alloys import alloy_from_designation
from diagrams.errors import NotCovered, OutsideData
from diagrams.files.catalog import catalog
from diagrams.fillers import fillers
from diagrams.fitting.fit import fitted_facts
from diagrams.questions.melting import melting_curve
from diagrams.questions.place import place
from tests.truth import truth

MOST_C = 6.1  # further away than this, a row needs its reason in known_differences.csv
KNOWN = {r["wt_percent"]: r for r in truth("known_differences") if r["table"] == "fillers"}
POINT_DIAGRAMS = {"ag-pd", "in-pb", "sb-sn"}  # drawn through these very rows: no check of themselves


@dataclass(frozen=True)
class Compared:
    name: str
    diagram: str
    solidus_c: float
    liquidus_c: float


def compared() -> list[Compared]:
    rows = []
    for filler in fillers():
        if len(filler.composition_wt) != 2:
            continue
        try:
            where = place(catalog(), alloy_from_designation(filler.name))
            curve = melting_curve(where.diagram, where.second_wt)
        except (NotCovered, OutsideData):
            continue
        if where.diagram.id not in POINT_DIAGRAMS:
            rows.append(
                Compared(
                    filler.name,
                    where.diagram.id,
                    curve.solidus_c - filler.solidus_c,
                    curve.liquidus_c - filler.liquidus_c,
                )
            )
    return rows


ROWS = compared()


@pytest.mark.parametrize("row", ROWS, ids=[r.name for r in ROWS])
def test_row(row: Compared) -> None:
    agrees = abs(row.solidus_c) <= MOST_C and abs(row.liquidus_c) <= MOST_C
    if row.name in KNOWN:
        assert not agrees, f"agrees now: take {row.name} out of known_differences.csv"
        assert KNOWN[row.name]["reason"]
    else:
        assert agrees, row


def test_rows_refused_are_known() -> None:
    """A filler on a stored system that gets no answer is refused for a reason on record."""
    answered = {r.name for r in ROWS}
    for filler in fillers():
        pair = "-".join(sorted(filler.composition_wt)).lower()
        if len(filler.composition_wt) == 2 and pair in catalog().diagrams and pair not in POINT_DIAGRAMS:
            assert filler.name in answered or KNOWN[filler.name]["what"] == "not covered"


def test_distribution() -> None:
    """All rows, and those that no fit used (held out of the least squares, though not blind).

    The earlier parameters gave medians of 0.4 and 4.1 °C, nine tenths within 8.5 and 17.8 °C.
    """
    used = {name for fact in fitted_facts() for name in fact.fillers}
    for rows, median_l, tenth_l in (
        (ROWS, 2.5, 18.0),
        ([r for r in ROWS if r.name not in used], 3.2, 22.5),
    ):
        solidus = np.abs([r.solidus_c for r in rows])
        liquidus = np.abs([r.liquidus_c for r in rows])
        assert np.median(solidus) <= 0.6
        assert np.percentile(solidus, 90) <= 6.1
        assert np.median(liquidus) <= median_l
        assert np.percentile(liquidus, 90) <= tenth_l
    assert len(ROWS) >= 50
