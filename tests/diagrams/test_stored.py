"""Stored diagrams: equal to what is rebuilt, past the gate, and true to the minimiser everywhere."""

from concurrent.futures import ProcessPoolExecutor
from itertools import pairwise
from types import MappingProxyType

import numpy as np
import pytest
import shapely

from diagrams.borders import Border, Borders
from diagrams.diagram import Diagram, Invariant, Region
from diagrams.equilibrium import Isotherm
from diagrams.errors import DataFault, UnknownDiagram
from diagrams.files.assessments import assessment_ids, melting_points_c, read_assessment
from diagrams.files.catalog import catalog
from diagrams.files.check import check_diagram
from diagrams.files.store import from_text, stored_ids, stored_text, to_text
from diagrams.questions.locate import locate
from diagrams.rebuild import build_text, buildable_ids
from diagrams.units import second_wt_to_x, x_to_second_wt
from tests.diagrams.minimised import phases_at
from tests.diagrams.random_points import random_points

PROMISED = {
    *("pb-sn", "ag-cu", "ag-sn", "cu-sn", "bi-sn", "au-sn", "au-ge", "au-si", "al-si", "cu-p", "cu-zn"),
    *("ag-zn", "sn-zn", "in-sn", "cu-ni", "au-ni", "au-cu", "ni-p", "bi-pb", "ag-pb", "sb-sn"),
}


def test_all_promised_diagrams_are_stored() -> None:
    assert set(stored_ids()) >= PROMISED
    assert stored_ids() == buildable_ids()
    assert tuple(catalog().diagrams) == stored_ids()


def test_stored_equals_rebuilt() -> None:
    with ProcessPoolExecutor(2) as pool:
        for diagram_id, text in zip(stored_ids(), pool.map(build_text, stored_ids()), strict=True):
            assert text == stored_text(diagram_id), diagram_id


@pytest.mark.parametrize("diagram_id", stored_ids())
def test_text_survives_reading_and_writing(diagram_id: str) -> None:
    assert to_text(from_text(stored_text(diagram_id))) == stored_text(diagram_id)


@pytest.mark.parametrize("diagram_id", stored_ids())
def test_regions_tile_the_frame(diagram_id: str) -> None:
    """Independent of the gate's own arithmetic: random points lie in exactly one region or on a border."""
    diagram = catalog().get(diagram_id)
    polygons = np.array([r.polygon for r in diagram.regions])
    shapely.prepare(polygons)
    rng = np.random.default_rng(7)
    x = rng.uniform(*diagram.composition_range_wt, 4000)
    t = rng.uniform(*diagram.temperature_range_c, 4000)
    inside = sum(shapely.contains_xy(p, x, t).astype(int) for p in polygons)
    assert (inside == 1).all()
    union = shapely.coverage_union_all(polygons)
    (west, east), (south, north) = diagram.composition_range_wt, diagram.temperature_range_c
    assert shapely.normalize(union.simplify(0)).equals(shapely.box(west, south, east, north))


@pytest.mark.parametrize("diagram_id", assessment_ids())
def test_polygons_agree_with_the_minimiser(diagram_id: str) -> None:
    """2,000 random points: the same phases, tie-line ends within 0.02 wt%."""
    diagram, assessment = catalog().get(diagram_id), read_assessment(diagram_id)
    first, second = diagram.elements
    unlike = 0
    for t, compositions in random_points(diagram):
        isotherm = Isotherm(assessment.system, t + 273.15)
        for wt in compositions:
            expected = phases_at(isotherm, second_wt_to_x(wt, first, second))
            reading = locate(diagram, wt, t)
            ends = [x_to_second_wt(a.x, first, second) for a in expected]
            if len(expected) != len(reading.phases):
                unlike += 1
                border = min(
                    abs(wt - e) for tie in isotherm.ties for e in tie_wt(tie.left, tie.right, diagram)
                )
                assert border < 0.02, (wt, t, reading.field)  # only so near a border may they differ
                continue
            assert [a.phase.kind for a in expected] == [p.kind for p in reading.phases], (wt, t)
            for end, phase in zip(ends, reading.phases, strict=True):
                assert phase.second_wt == pytest.approx(end, abs=0.02), (wt, t, reading.field)
    assert unlike <= 2


def tie_wt(left: float, right: float, diagram: Diagram) -> tuple[float, float]:
    first, second = diagram.elements
    return x_to_second_wt(left, first, second), x_to_second_wt(right, first, second)


@pytest.mark.parametrize("diagram_id", assessment_ids())
def test_invariants_are_exact(diagram_id: str) -> None:
    """0.01 °C either side of an invariant the tie lines differ, and nowhere between invariants."""
    diagram, assessment = catalog().get(diagram_id), read_assessment(diagram_id)
    temperatures = [i.temperature_c for i in diagram.invariants]
    assert temperatures == sorted(temperatures)

    def pairs(t: float) -> list[tuple[str, str]]:
        return [tie.pair for tie in Isotherm(assessment.system, t + 273.15).ties]

    for k, t in enumerate(temperatures):
        if diagram.invariants[k].kind in ("critical point", "congruent minimum", "congruent maximum"):
            continue  # the field closes to nothing there: tested by its vertices below
        assert pairs(t - 0.01) != pairs(t + 0.01), diagram.invariants[k]
    low, high = diagram.temperature_range_c
    marks = [low, *temperatures, high]
    for a, b in pairwise(marks):
        if b - a > 0.2:
            inner = [pairs(t) for t in np.linspace(a + 0.1, b - 0.1, 5)]
            assert all(p == inner[0] for p in inner), (a, b)


@pytest.mark.parametrize("diagram_id", assessment_ids())
def test_borders_between_vertices(diagram_id: str) -> None:
    """Midway between vertices a border is within 0.02 wt%, or within 0.02 °C where it runs flat."""
    diagram, assessment = catalog().get(diagram_id), read_assessment(diagram_id)
    first, second = diagram.elements
    for strip in Borders(diagram).strips:
        for side, border in ((0, strip.left), (1, strip.right)):
            for k in range(0, len(border.t) - 1, 3):
                t = 0.5 * (border.t[k] + border.t[k + 1])
                if border.t[k + 1] - border.t[k] < 0.02:
                    continue
                ties = [
                    tie
                    for tie in Isotherm(assessment.system, t + 273.15).ties
                    if tie.pair == strip.region.models
                ]
                exact = [x_to_second_wt((tie.left, tie.right)[side], first, second) for tie in ties]
                assert min(abs(border.at(t) - e) for e in exact) < 0.02, (strip.region.name, t)


def test_dilute_solubility_is_kept() -> None:
    """Copper in solid tin, 0.006 wt% at the eutectic (handbook 0.006–0.01): not lost in the drawing."""
    diagram = catalog().get("cu-sn")
    eutectic = next(i for i in diagram.invariants if i.kind == "eutectic")
    dissolved = 100.0 - eutectic.compositions_wt["(Sn)"]
    assert 0.001 < dissolved < 0.02
    reading = locate(diagram, 100.0 - 0.5 * dissolved, eutectic.temperature_c - 0.5)
    assert reading.field == "(Sn)"


def test_gate_refuses_each_fault() -> None:
    good = catalog().get("pb-sn")
    melting = melting_points_c()
    check_diagram(good, melting)
    regions = list(good.regions)
    moved = shapely.transform(regions[0].polygon, lambda c: c + np.array([0.0, 0.001]))
    faults = {
        "overlap": [with_polygon(regions[0], moved), *regions[1:]],
        "gap": regions[1:],
        "differ by more than one": [
            Region(("X", "Y"), ("solid", "solid"), ("x", "y"), r.polygon) if len(r.phases) == 2 else r
            for r in regions
        ],
    }
    for name, changed in faults.items():
        with pytest.raises(DataFault):
            check_diagram(with_regions(good, changed), melting)
        assert name
    with pytest.raises(DataFault, match="does not melt"):
        check_diagram(good, {**melting, "Pb": 330.0})
    with pytest.raises(DataFault, match="no source"):
        check_diagram(replaced(good, sources=()), melting)
    with pytest.raises(DataFault, match="alphabetical"):
        check_diagram(replaced(good, id="sn-pb"), melting)


def with_polygon(region: Region, polygon: shapely.Polygon) -> Region:
    return Region(region.phases, region.kinds, region.models, polygon)


def with_regions(diagram: Diagram, regions: list[Region]) -> Diagram:
    return replaced(diagram, regions=tuple(regions))


def replaced(diagram: Diagram, **changes: object) -> Diagram:
    fields = {name: getattr(diagram, name) for name in Diagram.__dataclass_fields__}
    return Diagram(**{**fields, **changes})  # type: ignore[arg-type]  # any field may be exchanged here


def test_unknown_diagram_names_what_there_is() -> None:
    with pytest.raises(UnknownDiagram) as caught:
        catalog().get("pb-sn2")
    assert "pb-sn" in caught.value.remedy


def test_unreadable_text_is_a_data_fault() -> None:
    for text in ("", "{}", '{"format": 99}', stored_text("pb-sn").replace('"regions"', '"fields"')):
        with pytest.raises(DataFault):
            from_text(text)


def test_invariant_is_frozen() -> None:
    invariant = catalog().get("pb-sn").invariants[0]
    assert isinstance(invariant, Invariant)
    assert isinstance(invariant.compositions_wt, MappingProxyType)


def test_border_is_straight_between_vertices() -> None:
    border = Border([(10.0, 100.0), (20.0, 200.0), (20.0, 300.0)])
    assert border.at(150.0) == 15.0
    assert border.at(250.0) == 20.0
    assert border.at(0.0) == 10.0
    assert border.at_many(np.array([150.0, 250.0, 900.0])).tolist() == [15.0, 20.0, 20.0]
