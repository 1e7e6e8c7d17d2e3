import csv
import json
import re
from importlib.resources import files
from pathlib import Path

import pytest

from diagrams.elements import symbol
from diagrams.reference import reference_edition, reference_guidance, reference_table
from diagrams.sources import HOW, Source
from diagrams.units import at_to_wt
from tests.truth import truth

TABLES = {
    "densities.csv": 23,
    "fillers.csv": 167,
    "process_limits.csv": 196,
    "sensor_tolerances.csv": 28,
    "safety_facts.csv": 66,
    "suitability.csv": 25,
}
TRUTHS = {"invariants_assessed": 65, "invariants_handbook": 138, "lever_rule": 8, "practice_invariants": 8}


@pytest.mark.parametrize(("name", "rows"), TABLES.items())
def test_a_table_is_whole_and_every_row_has_its_source(name: str, rows: int) -> None:
    table = reference_table(name)
    assert len(table) == rows
    assert len({tuple(row.items()) for row in table}) == rows
    assert reference_edition(name)
    assert reference_guidance(name)
    for row in table:
        Source(row["source"], row["how"], row["confidence"])


@pytest.mark.parametrize(("name", "rows"), TRUTHS.items())
def test_a_truth_table_is_whole_and_every_row_has_its_source(name: str, rows: int) -> None:
    path = Path(__file__).parent / "truth" / f"{name}.csv"
    assert re.match(r"# .*Edition \d{4}-\d\d-\d\d\.\n", path.read_text(encoding="utf-8"))
    table = truth(name)
    assert len(table) == rows
    for row in table:
        assert None not in row
        assert None not in row.values()
        Source(row["source"], row["how"], row["confidence"])


def test_every_file_of_outside_values_is_named_here() -> None:
    shipped = {path.name for path in files("diagrams").joinpath("data", "reference").iterdir()}
    assert shipped == {*TABLES, "EDITIONS.json", "comparison.csv"}  # the last is our own reckoning
    assert {path.stem for path in (Path(__file__).parent / "truth").glob("*.csv")} >= set(TRUTHS)


def test_ranges_run_upwards() -> None:
    for row in reference_table("process_limits.csv"):
        if row["min"] and row["max"]:
            assert float(row["min"]) <= float(row["max"]), row
    for row in reference_table("sensor_tolerances.csv"):
        assert float(row["from_c"]) < float(row["to_c"])
        assert row["fixed_c"] or row["fraction_of_t"]
        assert all(float(row[name] or 0) >= 0.0 for name in ("fixed_c", "fraction_of_t", "slope_per_c"))


def test_no_cell_breaks_off() -> None:
    folders = (files("diagrams").joinpath("data", "reference"), Path(__file__).parent / "truth")
    texts = [path for folder in folders for path in folder.iterdir() if path.name.endswith(".csv")]
    assert len(texts) >= len(TABLES) + len(TRUTHS)
    for path in texts:
        lines = [line for line in path.read_text(encoding="utf-8").splitlines() if not line.startswith("#")]
        for cells in csv.reader(lines, strict=True):
            for cell in cells:
                assert cell == cell.strip()
                assert cell.count("(") == cell.count(")"), cell
                assert not re.search(r"\b(?:on|also|the|and) *[,;]|\b(?:on|also|the|and)$|\( ", cell), cell


def test_compounds_of_the_handbook_have_the_composition_of_their_formula() -> None:
    rows = [row for row in truth("invariants_handbook") if row["basis"] == "stoichiometry"]
    assert len(rows) == 13
    for row in rows:
        formula = {el: float(n or 1) for el, n in re.findall(r"([A-Z][a-z]?)(\d*)", row["phase"])}
        assert at_to_wt(formula)[row["element"]] == pytest.approx(float(row["wt_percent"]), abs=0.006), row


def test_phases_of_an_assessed_invariant_sum_to_100() -> None:
    sums: dict[tuple[str, str, str, str, str], float] = {}
    for row in truth("invariants_assessed"):
        assert symbol(row["element"]).lower() in row["system"].split("-")
        key = (row["system"], row["reaction"], row["basis"], row["source"], row["phase"])
        sums[key] = sums.get(key, 0.0) + float(row["wt_percent"])
    assert len(sums) == 29
    for key, total in sums.items():
        assert total == pytest.approx(100.0, abs=0.011), key


def test_published_lever_results_follow_from_their_own_readings() -> None:
    rows = [row for row in truth("lever_rule") if row["question"] == "amounts of two phases"]
    assert len(rows) == 7
    for row in rows:
        whole, first, second = (float(row[f"{name}_wt_percent"]) for name in ("alloy", "phase_1", "phase_2"))
        printed = row["phase_1_mass_fraction"]
        half_digit = 0.51 * 10.0 ** -len(printed.split(".")[1])
        assert (second - whole) / (second - first) == pytest.approx(float(printed), abs=half_digit), row
        assert float(printed) + float(row["phase_2_mass_fraction"]) == pytest.approx(1.0)


def test_safety_notes_say_only_what_the_facts_hold() -> None:
    stored = json.loads(files("service").joinpath("data/safety_notes.json").read_text(encoding="utf-8"))
    facts = {
        f"{row['subject']}: {row['fact']} [{row['source']}]": row
        for row in reference_table("safety_facts.csv")
    }
    assert stored["edition"]
    for note in stored["notes"]:
        assert note["sources"], note["topic"]
        held = " ".join(" ".join(facts[source].values()) for source in note["sources"])
        for number in re.findall(r"\d+(?:\.\d+)?(?:-\d+)?", note["text"]):
            assert re.search(rf"(?<![\d.]){re.escape(number)}(?!\d|\.\d)", held), (note["topic"], number)


def test_safety_notes_cover_the_hazards_of_the_trade() -> None:
    stored = json.loads(files("service").joinpath("data/safety_notes.json").read_text(encoding="utf-8"))
    always = {note["topic"] for note in stored["notes"] if note["when"] == {"always": True}}
    assert always == {"scope", "fume", "burns and hot work", "molten-bath eruption"}
    covered = {el for note in stored["notes"] for el in note["when"].get("elements", ())}
    assert covered >= {"Pb", "Cd", "Zn", "Cu", "Ag", "Ni", "Sb", "P", "Mn", "Cr", "In"}
    assert [rule["region"] for rule in stored["regulations"]] == ["US", "EU", "UK", "elsewhere"]
    assert "licensed practice" in stored["reminder"]


def test_a_source_says_how_its_value_came() -> None:
    assert {row["how"] for name in TABLES for row in reference_table(name)} <= set(HOW)
