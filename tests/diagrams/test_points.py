"""Diagrams drawn through points: true to their points, past the gate, and open to a plant's own system."""

import copy
from dataclasses import replace
from types import MappingProxyType

import numpy as np
import pytest

from diagrams.errors import DataFault, OutsideData
from diagrams.files.assessments import melting_points_c
from diagrams.files.catalog import catalog
from diagrams.files.check import check_diagram
from diagrams.files.points import point_ids, points_from, read_points
from diagrams.files.store import from_text, to_text
from diagrams.from_points import diagram_from_points
from diagrams.questions.lever import equilibrium
from diagrams.questions.locate_many import locate_many
from diagrams.questions.melting import melting_curve

# Printed solidus and liquidus the diagrams were drawn through, with the accuracy their notes state. These
# rows prove that the drawing kept to its points, not that the points are right.
DRAWN_THROUGH = [
    ("ag-pd", 5.0, (970.0, 970.0), (1010.0, 1010.0), 0.01, 0.01),
    ("ag-pd", 10.0, (1002.0, 1002.0), (1065.0, 1065.0), 0.01, 0.01),
    ("sb-sn", 95.0, (235.0, 235.0), (240.0, 240.0), 0.01, 0.01),
    ("in-pb", 30.0, (160.0, 165.0), (174.0, 175.0), 5.0, 5.0),
    ("in-pb", 40.0, (173.0, 174.0), (181.0, 185.0), 5.0, 5.0),
    ("in-pb", 50.0, (180.0, 184.0), (209.0, 210.0), 5.0, 5.0),
    ("in-pb", 60.0, (195.0, 197.0), (225.0, 231.0), 5.0, 5.0),
    ("in-pb", 75.0, (226.0, 250.0), (260.0, 264.0), 15.0, 5.0),
    ("in-pb", 81.0, (260.0, 270.0), (275.0, 280.0), 15.0, 5.0),
    ("in-pb", 95.0, (300.0, 300.0), (313.0, 313.0), 5.0, 5.0),
]


@pytest.mark.parametrize("diagram_id", point_ids())
def test_a_points_file_becomes_a_diagram_that_passes_the_gate(diagram_id: str) -> None:
    diagram = diagram_from_points(read_points(diagram_id))
    check_diagram(diagram, melting_points_c())
    assert diagram.kind == "points"
    assert any("guidance" in note for note in diagram.notes)
    assert {source.how for source in diagram.sources} == {"from memory"}


@pytest.mark.parametrize(
    ("diagram_id", "wt", "solidus", "liquidus", "solidus_off", "liquidus_off"), DRAWN_THROUGH
)
def test_the_drawing_keeps_to_its_points(
    diagram_id: str,
    wt: float,
    solidus: tuple[float, float],
    liquidus: tuple[float, float],
    solidus_off: float,
    liquidus_off: float,
) -> None:
    curve = melting_curve(catalog().get(diagram_id), wt)
    assert solidus[0] - solidus_off <= curve.solidus_c <= solidus[1] + solidus_off
    assert liquidus[0] - liquidus_off <= curve.liquidus_c <= liquidus[1] + liquidus_off


@pytest.mark.parametrize("diagram_id", point_ids())
def test_melting_rises_from_none_to_all(diagram_id: str) -> None:
    """On heating at a fixed composition the liquid of these systems never freezes again."""
    diagram = catalog().get(diagram_id)
    temperatures = np.linspace(*diagram.temperature_range_c, 2001)
    low, high = diagram.composition_range_wt
    for wt in np.linspace(low + 0.06 * (high - low), high, 24):
        curve = melting_curve(diagram, float(wt))
        fractions = curve.liquid_fractions(temperatures)
        assert fractions[0] == 0.0
        assert fractions[-1] == 1.0
        assert (np.diff(fractions) >= -1e-9).all(), (diagram_id, wt)


def test_compounds_beyond_the_frame_end_the_tie_lines() -> None:
    diagram = catalog().get("sb-sn")
    west = diagram.composition_range_wt[0]
    for temperature_c, compound, wt in (
        (230.0, "SbSn", 49.37),
        (246.0, "Sn3Sb2", 59.39),
        (335.0, "SbSn", 49.37),
    ):
        state = equilibrium(diagram, 76.0, temperature_c)
        phase = next(p for p in state.phases if p.name == compound)
        assert phase.composition_wt["Sn"] == wt < west
        kept = sum(p.mass_fraction * p.composition_wt["Sn"] for p in state.phases)
        assert kept == pytest.approx(76.0, abs=1e-9)
        region = next(r for r in diagram.regions if r.name == state.field)
        assert region.polygon.bounds[0] == west
        assert region.beyond_wt[compound] == wt


def test_a_solution_beyond_the_frame_ends_the_tie_lines() -> None:
    """Solid at 1030 °C: from 10 wt% Pd at 1002 °C straight towards pure palladium at 1554.8 °C."""
    diagram = catalog().get("ag-pd")
    solid_wt = 10.0 + 90.0 * (1030.0 - 1002.0) / (1554.8 - 1002.0)
    liquid_wt = 5.0 + 5.0 * (1030.0 - 1010.0) / (1065.0 - 1010.0)
    for wt in (8.0, 9.0, 10.0):
        state = equilibrium(diagram, wt, 1030.0)
        assert state.field == "L + (Ag,Pd)"
        assert state.liquid_mass_fraction == pytest.approx((solid_wt - wt) / (solid_wt - liquid_wt), abs=1e-5)
        many = locate_many(diagram, np.array([wt]), np.array([1030.0]))
        assert many.liquid_mass_fraction[0] == pytest.approx(state.liquid_mass_fraction, abs=1e-12)


def test_nothing_is_answered_beyond_the_points() -> None:
    for diagram_id, wt, temperature_c in (
        ("ag-pd", 10.1, 1030.0),
        ("sb-sn", 70.0, 250.0),
        ("sb-sn", 95.0, 25.0),
    ):
        with pytest.raises(OutsideData):
            equilibrium(catalog().get(diagram_id), wt, temperature_c)


def test_the_gate_refuses_tie_lines_that_end_nowhere() -> None:
    diagram = catalog().get("ag-pd")
    cut = [replace(r, beyond_line=MappingProxyType({})) for r in diagram.regions]
    with pytest.raises(DataFault, match=r"nothing says where \(Ag,Pd\) lies"):
        check_diagram(replace(diagram, regions=tuple(cut)), melting_points_c())


# A system of one's own: an eutectic of the invented Ketterbeck works, simple enough to check by hand.
OWN = {
    "id": "al-ge",
    "elements": ["Al", "Ge"],
    "edition": "invented 1",
    "served": {"temperature_c": [300, 1000], "second_wt": [0, 100]},
    "sources": [
        {"text": "Ketterbeck works, an invented alloy system", "how": "invented", "confidence": "low"}
    ],
    "notes": ["Invented for a demonstration: no such alloy exists."],
    "phases": {"L": "liquid", "(Al)": "solid", "(Ge)": "solid"},
    "compounds_wt": {"(Ge)": 100},
    "fields": [
        {"phases": ["(Al)", "(Ge)"], "rows": [[300, 3, 100], [400, 5, 100]]},
        {"phases": ["(Al)", "L"], "rows": [[400, 5, 50], [660.32, 0, 0]]},
        {"phases": ["L", "(Ge)"], "rows": [[400, 50, 100], [938.25, 100, 100]]},
    ],
    "invariants": [
        {
            "kind": "eutectic",
            "reaction": "L -> (Al) + (Ge)",
            "temperature_c": 400,
            "compositions_wt": {"(Al)": 5, "L": 50, "(Ge)": 100},
        },
        {
            "kind": "melting point",
            "reaction": "L -> (Al)",
            "temperature_c": 660.32,
            "compositions_wt": {"L": 0, "(Al)": 0},
        },
        {
            "kind": "melting point",
            "reaction": "L -> (Ge)",
            "temperature_c": 938.25,
            "compositions_wt": {"L": 100, "(Ge)": 100},
        },
    ],
}


def test_a_plants_own_system_is_built_stored_and_answers() -> None:
    built = diagram_from_points(points_from(OWN))
    check_diagram(built, melting_points_c())
    stored = from_text(to_text(built))
    check_diagram(stored, melting_points_c())
    assert to_text(stored) == to_text(built)
    assert sorted(r.name for r in stored.regions) == ["(Al)", "(Al) + (Ge)", "L", "L + (Al)", "L + (Ge)"]
    halfway = 0.5 * (400.0 + 660.32)  # there the solid holds 2.5 and the liquid 25 wt% Ge
    assert equilibrium(stored, 10.0, halfway).liquid_mass_fraction == pytest.approx(7.5 / 22.5, abs=1e-6)
    upper = 0.5 * (400.0 + 938.25)  # there the liquid holds 75 wt% Ge
    assert equilibrium(stored, 90.0, upper).liquid_mass_fraction == pytest.approx(10.0 / 25.0, abs=1e-6)
    assert equilibrium(stored, 50.0, 350.0).field == "(Al) + (Ge)"
    curve = melting_curve(stored, 30.0)
    assert curve.solidus_c == pytest.approx(400.0, abs=1e-6)
    assert curve.liquidus_c == pytest.approx(660.32 - 260.32 * 30.0 / 50.0, abs=1e-4)


@pytest.mark.parametrize(
    ("place", "value", "told"),
    [
        (("fields", 1, "rows"), [[660.32, 0, 0], [400, 5, 50]], "order the rows upwards"),
        (("fields", 1, "rows"), [[400, 5, 50], [400, 4, 50], [660.32, 0, 0]], "each temperature once"),
        (("fields", 1, "rows"), [[400, 5, 50]], "at least two rows"),
        (("fields", 1, "rows"), [[400, 5, 50], [1100, 0, 0]], "keep rows within 300 to 1000"),
        (("fields", 1, "rows"), [[400, 50, 5], [660.32, 0, 0]], "from left to right"),
        (("fields", 1, "phases"), ["(Al)", "melt"], "name every phase"),
        (("compounds_wt",), {"(Ge)": 99}, "compound the composition"),
        (("invariants",), OWN["invariants"][:1], "pure Al does not melt at 660.32"),
        (("invariants",), OWN["invariants"][1:], "differ by more than one phase"),
        (("fields",), [], "no field of al-ge borders"),
        (("sources",), [], "no source is named"),
        (("elements",), ["Ge", "Al"], "alphabetical order"),
    ],
)
def test_faults_are_named(place: tuple[str | int, ...], value: object, told: str) -> None:
    document = copy.deepcopy(OWN)
    target = document
    for step in place[:-1]:
        target = target[step]  # type: ignore[index]  # a path into parsed JSON
    target[place[-1]] = value  # type: ignore[index]  # likewise
    with pytest.raises(DataFault) as caught:
        check_diagram(diagram_from_points(points_from(document)), melting_points_c())
    assert told in str(caught.value)


@pytest.mark.parametrize("key", sorted(set(OWN) - {"id"}))
def test_a_missing_part_is_named(key: str) -> None:
    with pytest.raises(DataFault, match=f"al-ge is not complete: KeyError\\('{key}'"):
        points_from({k: v for k, v in OWN.items() if k != key})
