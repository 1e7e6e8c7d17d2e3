import math
import re

import pytest
from hypothesis import given
from hypothesis import strategies as st

from diagrams.elements import MOLAR_MASS
from diagrams.errors import DiagramsError, UnknownAlloy
from diagrams.fillers import FILLERS_EDITION, FILLERS_GUIDANCE, Filler, designation_key, fillers, find_filler
from diagrams.units import celsius_to_fahrenheit

each_filler = pytest.mark.parametrize("filler", fillers(), ids=lambda filler: filler.name)


def test_the_whole_table_is_there() -> None:
    table = fillers()
    assert len(table) == 167
    assert sum(filler.class_ == "solder" for filler in table) == 78
    assert sum(filler.class_ == "braze" for filler in table) == 89
    assert sum(filler.how == "looked up" for filler in table) == 54
    assert sum(filler.lead_bearing for filler in table) == 37
    assert sum(filler.cadmium_bearing for filler in table) == 12
    assert sum(filler.single_melting_value for filler in table) == 34
    assert len({filler.name for filler in table}) == 167
    assert "2026" in FILLERS_EDITION
    assert "standard in force" in FILLERS_GUIDANCE


@each_filler
def test_every_name_finds_its_own_row(filler: Filler) -> None:
    assert find_filler(filler.name) is filler
    if filler.also_named:
        assert find_filler(filler.also_named) is filler
        assert find_filler(f"{filler.name} ({filler.also_named})") is filler


@each_filler
def test_every_designation_finds_a_row_that_carries_it(filler: Filler) -> None:
    for standard, designation in filler.designations.items():
        found = find_filler(designation)
        shared = designation in ("Ag 140", "Ag 145", "Ag 156")
        assert found is (find_filler(designation.lower()) if shared else filler), standard
        assert designation in found.designations.values()
        assert not shared or found.name == designation


@each_filler
def test_spelling_does_not_matter(filler: Filler) -> None:
    for way in (str.lower, str.upper, lambda text: text.replace(" ", ""), "\u2011".join):
        assert find_filler(way(filler.name)) is filler


@pytest.mark.parametrize(
    ("text", "name"),
    [
        ("101", "Sn63Pb37"),
        ("sn-63 pb-37", "Sn63Pb37"),
        ("SAC305", "SAC305"),
        ("sac 305", "SAC305"),
        ("Sn96.5Ag3Cu0.5", "SAC305"),
        ("711", "SAC305"),
        ("Ag145", "Ag 145"),
        ("ag 272", "BAg-8"),
        ("bag_8", "BAg-8"),
        ("BAg-8A", "BAg-8a"),
        ("cup179", "CuP 179"),
        ("Bi55Pb45", "Bi55.5Pb44.5"),
    ],
)
def test_designations_of_the_trade(text: str, name: str) -> None:
    assert find_filler(text).name == name


def test_an_unknown_designation_names_its_neighbours() -> None:
    with pytest.raises(UnknownAlloy) as refused:
        find_filler("SAC304")
    assert refused.value.field == "designation"
    assert "SAC305" in refused.value.remedy


def test_an_endless_designation_is_refused_briefly() -> None:
    with pytest.raises(UnknownAlloy) as refused:
        find_filler("Sn" * 100_000)
    assert len(str(refused.value)) < 200


@given(st.text(max_size=150))
def test_looking_up_anything_answers_or_refuses(text: str) -> None:
    try:
        found = find_filler(text)
    except DiagramsError as error:
        refused = error
    else:
        names = (found.name, found.also_named or "", *found.designations.values())
        full = f"{found.name} ({found.also_named})"
        assert designation_key(text) in {designation_key(name) for name in (*names, full)}
        return
    assert refused.remedy


@each_filler
def test_every_row_is_sound(filler: Filler) -> None:
    total = math.fsum(filler.composition_wt.values())
    assert total == pytest.approx(99.8 if filler.name == "BCuP-7" else 100.0, abs=1e-9)
    assert set(filler.composition_wt) | set(filler.limits_wt) <= set(MOLAR_MASS)
    assert list(filler.composition_wt) == sorted(filler.composition_wt)
    assert filler.solidus_c <= filler.liquidus_c
    assert filler.single_melting_value == (filler.solidus_c == filler.liquidus_c)
    assert filler.lead_bearing == ("Pb" in filler.composition_wt)
    assert filler.cadmium_bearing == ("Cd" in filler.composition_wt)
    # Soft solders melt below 450 °C; two of the trade’s solders are liquid only above.
    assert (filler.liquidus_c < 450.0) == (
        filler.class_ == "solder" and filler.name not in ("Au82In18", "Zn78Al22")
    )
    if filler.brazing_range_c:
        assert filler.class_ == "braze"
        assert filler.solidus_c <= filler.brazing_range_c[0] < filler.brazing_range_c[1]
    assert bool(filler.limits_wt) == bool(filler.limits_source)
    assert filler.remainder is None or filler.limits_wt
    assert filler.remainder not in filler.limits_wt
    assert filler.reference.how == filler.how


def test_printed_nominals_outside_the_limits_are_these_and_say_so() -> None:
    outside = {
        (filler.name, el)
        for filler in fillers()
        for el, (lowest, highest) in filler.limits_wt.items()
        if not lowest <= filler.composition_wt.get(el, 0.0) <= highest
    }
    assert outside == {("BAg-8a", "Li"), ("BNi-3", "Fe"), ("RBCuZn-A", "Sn")}
    for name, _ in outside:
        assert "nominal" in find_filler(name).notes


@each_filler
def test_limits_leave_room_for_an_alloy(filler: Filler) -> None:
    lowest = math.fsum(low for low, _ in filler.limits_wt.values())
    assert lowest < 100.0
    if filler.remainder is None and filler.limits_wt and set(filler.composition_wt) <= set(filler.limits_wt):
        assert math.fsum(high for _, high in filler.limits_wt.values()) > 100.0 - 1e-9


@each_filler
def test_solder_names_say_the_composition(filler: Filler) -> None:
    if filler.class_ == "solder":
        parts = re.findall(r"([A-Z][a-z]?)([0-9.]+)", filler.also_named or filler.name)
        assert {el: float(value) for el, value in parts} == dict(filler.composition_wt)


def test_celsius_values_agree_with_the_fahrenheit_printed() -> None:
    checked = 0
    for filler in fillers():
        printed = re.match(r"(\d+)/(\d+) °F(?:, brazing (\d+)-(\d+) °F)?", filler.notes)
        if printed:
            values = (filler.solidus_c, filler.liquidus_c, *(filler.brazing_range_c or ()))
            for fahrenheit, celsius in zip(printed.groups(), values, strict=False):
                if fahrenheit:
                    assert celsius_to_fahrenheit(celsius) == pytest.approx(float(fahrenheit), abs=0.95), (
                        filler.name
                    )
                    checked += 1
    assert checked == 214


def test_notes_are_whole_sentences() -> None:
    for filler in fillers():
        assert not re.search(r"\b(on|and|or|also|the)$|\(\s|\(also|\?", filler.notes), filler.notes
        assert filler.notes.count("(") == filler.notes.count(")")


def test_fillers_can_be_kept_in_sets() -> None:
    assert len(set(fillers())) == 167
