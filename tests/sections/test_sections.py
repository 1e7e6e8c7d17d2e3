"""Sections: equal to what is rebuilt, past the gate, true to the minimiser, equal to stored diagrams."""

from dataclasses import replace

import numpy as np
import pytest
import shapely

from diagrams.errors import DataFault, InvalidInput, OutsideData
from diagrams.files.catalog import catalog
from diagrams.questions.locate import locate
from diagrams.questions.many_state import StateFinder
from diagrams.sections.build import build_section
from diagrams.sections.check import check_section
from diagrams.sections.line import line_between
from diagrams.sections.section import Section
from diagrams.sections.shelf import build, line_of, lines, stored_sections
from diagrams.sections.store import from_text, stored_names, stored_text, to_text

SHORT = "bag-5-to-cu"
PROMISED = {
    *("sac305-to-cu", "sac305-to-sn63pb37", "sn42bi58-to-sn63pb37", "sn63pb37-to-ag"),
    *("sn96.5ag3.5-to-sn42bi58", "bag-5-to-cu", "bag-10-to-bag-20"),
}
AWAY = 0.003  # of the frame: points nearer to a border than this tell nothing
LIQUID = 0.005


def called(name: str) -> Section:
    """A stored section by name."""
    return next(s for s in stored_sections().values() if s.name == name)


def scaled(section: Section) -> shapely.Geometry:
    """All borders, both axes counted in lengths of the frame."""
    low, high = section.temperature_range_c
    rings = shapely.MultiLineString([list(r.polygon.exterior.coords) for r in section.regions])
    return shapely.transform(rings, lambda p: (p - (0.0, low)) / (section.to_share_max, high - low))


def test_all_promised_sections_are_stored_and_past_the_gate() -> None:
    assert set(stored_names()) == set(lines()) == PROMISED
    assert {section.name for section in stored_sections().values()} == PROMISED


@pytest.mark.parametrize("name", sorted(PROMISED))
def test_text_survives_reading_and_writing(name: str) -> None:
    assert to_text(from_text(stored_text(name))) == stored_text(name)


def test_stored_equals_rebuilt() -> None:
    new, old = build(SHORT), called(SHORT)
    assert new.id == old.id
    assert [r.name for r in new.regions] == [r.name for r in old.regions]
    assert shapely.hausdorff_distance(scaled(new), scaled(old)) < 2e-4


@pytest.mark.parametrize("name", sorted(PROMISED))
def test_sections_agree_with_the_minimiser(name: str) -> None:
    """At random points: the liquid share everywhere, the phases away from borders."""
    section, (line, _, _) = called(name), line_of(name)
    borders = scaled(section)
    low, high = section.temperature_range_c
    rng = np.random.default_rng(11)
    told = 0
    for across, up in rng.uniform(0.0005, 0.9995, (25, 2)).tolist():
        share, t = across * section.to_share_max, low + up * (high - low)
        wt = dict(zip(line.elements, (100.0 * line.shares(np.array([share]))[0]).tolist(), strict=True))
        state = StateFinder(line.place, wt).at(t)
        field, liquid = section.state(share, t)
        assert liquid == pytest.approx(state.liquid, abs=LIQUID), (share, t)
        if shapely.distance(borders, shapely.Point(across, up)) < AWAY:
            continue
        system = line.sample.system
        models = sorted(system.phase(s).model for s in state.states.sets)
        region = next(r for r in section.regions if r.polygon.intersects(shapely.Point(share, t)))
        assert sorted(region.models) == models, (share, t)
        assert region.name == field
        told += 1
    assert told > 15


def test_the_low_eutectic_of_bismuth_lead_and_tin_shows() -> None:
    section = called("sn42bi58-to-sn63pb37")
    melting = [
        i for i in section.invariants if "L" in i.over.split(" + ") and "L" not in i.under.split(" + ")
    ]
    lowest = min(melting, key=lambda i: i.temperature_c)
    assert 95.0 <= lowest.temperature_c <= 98.0  # common practice
    assert lowest.to_share - lowest.from_share > 20.0  # it shows over a good part of the mix
    middle = 0.5 * (lowest.from_share + lowest.to_share)
    assert section.state(middle, lowest.temperature_c - 0.5)[1] == 0.0
    assert section.state(middle, lowest.temperature_c + 0.5)[1] > 0.0


def test_a_section_of_two_metals_is_their_stored_diagram() -> None:
    section = build_section(line_between({"Pb": 100.0}, {"Sn": 100.0}, 100.0, (25.0, 400.0)), "x", "Pb", "Sn")
    check_section(section)
    diagram = catalog().get("pb-sn")
    rng = np.random.default_rng(5)
    borders = shapely.MultiLineString([list(r.polygon.exterior.coords) for r in section.regions])
    told = 0
    for share, t in rng.uniform((0.01, 26.0), (99.99, 320.0), (400, 2)).tolist():
        if shapely.distance(borders, shapely.Point(share, t)) > 0.05:
            assert section.state(share, t)[0] == locate(diagram, share, t).field
            told += 1
    assert told > 350
    eutectic = next(i for i in diagram.invariants if i.kind == "eutectic")
    assert {round(i.temperature_c, 1) for i in section.invariants} == {round(eutectic.temperature_c, 1)}
    solids = next(r for r in section.regions if r.name == "(Pb) + (Sn)")
    assert solids.polygon.bounds[3] == pytest.approx(eutectic.temperature_c, abs=0.03)


def test_gate_refuses_each_fault() -> None:
    good = called(SHORT)
    regions = list(good.regions)
    moved = replace(
        regions[0], polygon=shapely.transform(regions[0].polygon, lambda p: p + np.array([0.0, 0.01]))
    )
    foreign = replace(regions[0], models=("x", *regions[0].models[1:]))
    run = good.runs[0]
    shifted = replace(run, fields=(run.fields[-1], *run.fields[1:]))
    faults = {
        "share their vertices": replace(good, regions=(moved, *regions[1:])),
        "gap": replace(good, regions=tuple(regions[1:])),
        "more than one phase": replace(good, regions=(foreign, *regions[1:])),
        "source": replace(good, sources=()),
        "the columns have": replace(good, runs=(shifted, *good.runs[1:])),
        "do not span": replace(good, runs=good.runs[1:]),
    }
    for words, bad in faults.items():
        with pytest.raises(DataFault, match=words):
            check_section(bad)
    with pytest.raises(DataFault):
        from_text("{}")


def test_contours_have_the_liquid_they_say() -> None:
    section, (line, _, _) = called(SHORT), line_of(SHORT)
    told = 0
    for contour in section.contours:
        for points in contour.lines:
            for share, t in points[1:-1:5]:
                wt = dict(
                    zip(line.elements, (100.0 * line.shares(np.array([share]))[0]).tolist(), strict=True)
                )
                finder = StateFinder(line.place, wt)
                under, over = (finder.at(t + d).liquid for d in (-0.1, 0.1))
                assert under - LIQUID <= contour.liquid_mass_fraction <= over + LIQUID
                told += 1
    assert told > 20


def test_what_makes_no_line_is_refused() -> None:
    tin = {"Sn": 100.0}
    with pytest.raises(InvalidInput) as same:
        line_between(tin, tin)
    assert same.value.field == "to_alloy"
    with pytest.raises(OutsideData) as hot:
        line_between({"Pb": 100.0}, tin, 100.0, (25.0, 5000.0))
    assert hot.value.field == "temperature_range_c"
    with pytest.raises(OutsideData) as zinc:
        line_between({"Ag": 72.0, "Cu": 28.0}, {"Zn": 100.0})
    assert zinc.value.field == "to_alloy"
