"""Melting ranges that are kept: what is stored is what a search finds, and no other alloy gets it."""

import csv
from importlib.resources import files

import pytest

from diagrams.alloys import alloy_from_designation, parse_alloy
from diagrams.comparison import compared
from diagrams.fillers import fillers, find_filler
from diagrams.fitting.spans import rows_of
from diagrams.questions.by_minimisation import ByMinimisation
from diagrams.questions.stored_spans import COLUMNS, PATH

TEXT = files("diagrams").joinpath(*PATH).read_text(encoding="utf-8")
ROWS = [tuple(row) for row in csv.reader(line for line in TEXT.splitlines() if not line.startswith("#"))][1:]
# without a tolerance to search, and of those with one a few: all of them take half a minute
AGAIN = {row[0] for row in ROWS if row[9] == "1"} | {"SAC305", "BAg-5", "BCuP-5", "Ag 244", "Sn62Pb36Ag2"}


def elements(row: tuple[str, ...]) -> list[list[str]]:
    return [[part.partition("=")[0] for part in cell.split()] for cell in row[7:9]]


def test_stored_is_searched() -> None:
    again = rows_of(filler for filler in fillers() if filler.name in AGAIN)
    assert len(AGAIN) >= 20
    stored = [row for row in ROWS if row[0] in AGAIN]
    for one, other in zip(sorted(again), stored, strict=True):
        assert one[:4] == other[:4]
        found, kept = ([float(cell) for cell in row[4:7]] for row in (one, other))
        assert found == pytest.approx(kept, abs=2e-3)  # processors differ in the last digits
        assert elements(one) == elements(other)


def test_every_minimised_filler_is_stored_and_agrees_with_the_comparison() -> None:
    many = {row.filler: row for row in compared() if row.data_id.count("-") > 1}
    assert {row[0] for row in ROWS} == set(many)
    for row in ROWS:
        named = dict(zip(COLUMNS, row, strict=True))
        filler, nominal_c = find_filler(named["filler"]), float(named["nominal_c"])
        printed_c = filler.solidus_c if named["end"] == "solidus" else filler.liquidus_c
        row_of = many[filler.name]
        off_c = row_of.solidus_off_c if named["end"] == "solidus" else row_of.liquidus_off_c
        assert nominal_c - printed_c == pytest.approx(off_c, abs=0.006)
        assert float(named["lowest_c"]) <= nominal_c <= float(named["highest_c"])


def test_no_other_alloy_gets_it() -> None:
    for alloy in (parse_alloy("Ag3Cu0.5Sn"), alloy_from_designation("SAC305", {"Ag": 0.1})):
        assert not ByMinimisation(alloy)._stored
    assert len(ByMinimisation(alloy_from_designation("SAC305"))._stored) == 2
