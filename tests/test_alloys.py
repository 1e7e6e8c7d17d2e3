import math
from collections.abc import Callable

import pytest
from hypothesis import given
from hypothesis import strategies as st

from diagrams.alloys import Alloy, alloy_from_at, alloy_from_designation, alloy_from_wt, parse_alloy
from diagrams.elements import MOLAR_MASS
from diagrams.errors import DiagramsError, InvalidComposition, UnknownAlloy
from diagrams.fillers import Filler, fillers
from diagrams.units import wt_to_at

ELEMENTS = sorted(MOLAR_MASS)


def sound(alloy: Alloy) -> bool:
    """Sorted, positive, summing to 100, limits in order."""
    return (
        list(alloy.composition_wt) == sorted(alloy.composition_wt)
        and all(value > 0.0 for value in alloy.composition_wt.values())
        and abs(math.fsum(alloy.composition_wt.values()) - 100.0) < 1e-11
        and all(0.0 <= low <= high <= 100.0 for low, high in alloy.limits_wt.values())
    )


@pytest.mark.parametrize(
    ("text", "composition"),
    [
        ("Ag3Cu0.5Sn", {"Ag": 3.0, "Cu": 0.5, "Sn": 96.5}),
        ("SnAg3Cu0.5", {"Ag": 3.0, "Cu": 0.5, "Sn": 96.5}),
        ("Pb37Sn63", {"Pb": 37.0, "Sn": 63.0}),
        (" Pb37 Sn63 ", {"Pb": 37.0, "Sn": 63.0}),
        ("Sn", {"Sn": 100.0}),
        ("Sn100Pb0", {"Sn": 100.0}),
        ("Pb038Sn", {"Pb": 38.0, "Sn": 62.0}),
    ],
)
def test_compositions_in_one_string(text: str, composition: dict[str, float]) -> None:
    alloy = parse_alloy(text)
    assert dict(alloy.composition_wt) == composition
    assert alloy.designation is None
    assert alloy.filler is None
    assert alloy.limits_wt == {}


@pytest.mark.parametrize(
    ("text", "name"),
    [
        ("Sn63Pb37", "Sn63Pb37"),
        ("Ag 145", "Ag 145"),
        ("sac305", "SAC305"),
        ("711", "SAC305"),
        ("Cu925", "Cu 925"),
    ],
)
def test_a_designation_wins_over_a_composition(text: str, name: str) -> None:
    alloy = parse_alloy(text)
    assert alloy.designation == name
    assert alloy.filler is not None
    assert alloy.limits_wt == alloy.filler.limits_wt


def test_a_short_name_gives_the_alloy_it_names_and_a_composition_gives_itself() -> None:
    assert parse_alloy("Bi55Pb45").composition_wt == {"Bi": 55.5, "Pb": 44.5}
    assert alloy_from_wt({"Bi": 55, "Pb": 45}).composition_wt == {"Bi": 55.0, "Pb": 45.0}


@pytest.mark.parametrize("filler", fillers(), ids=lambda filler: filler.name)
def test_every_filler_makes_an_alloy(filler: Filler) -> None:
    alloy = alloy_from_designation(filler.name)
    assert sound(alloy)
    assert alloy.filler is filler
    assert alloy.given_total_wt == pytest.approx(math.fsum(filler.composition_wt.values()), abs=1e-12)
    if filler.name != "BCuP-7":
        assert alloy.composition_wt == pytest.approx(dict(filler.composition_wt), abs=1e-12)
    assert parse_alloy(filler.name) == alloy
    assert hash(parse_alloy(filler.name)) == hash(alloy)


def test_the_remainder_takes_what_the_printed_nominals_leave() -> None:
    alloy = alloy_from_designation("BCuP-7")
    assert dict(alloy.composition_wt) == pytest.approx({"Ag": 5.0, "Cu": 88.2, "P": 6.8}, abs=1e-12)
    assert alloy.given_total_wt == pytest.approx(99.8, abs=1e-12)


@pytest.mark.parametrize(
    ("composition", "field", "told"),
    [
        ({}, "composition_wt", "empty"),
        ({"Sn": 60, "Pb": 39.8}, "composition_wt", "99.8"),
        ({"Sn": 60, "Pb": 40.11}, "composition_wt", "100.11"),
        ({"Sn": 101, "Pb": -1}, "composition_wt.Sn", "101"),
        ({"Pb": -1.0, "Sn": 101}, "composition_wt.Pb", "-1"),
        ({"Sn": math.nan}, "composition_wt.Sn", "nan"),
        ({"Sn": math.inf}, "composition_wt.Sn", "inf"),
        ({"Sn": -math.inf}, "composition_wt.Sn", "-inf"),
        ({"Sn": True, "Pb": 99}, "composition_wt.Sn", "number"),
        ({"Sn": "63", "Pb": 37}, "composition_wt.Sn", "number"),
        ({"Sn": 10**5000}, "composition_wt.Sn", "number"),
        ({"Xx": 100}, "composition_wt.Xx", "Xx"),
        ({"x" * 100_000: 100}, "composition_wt", "xxx"),
        ({"Sn": 50, "sn": 50}, "composition_wt.sn", "twice"),
        ({" Sn": 100}, "composition_wt. Sn", "a space"),
        ({"S.n": 100}, "composition_wt", "no element"),
        ({"Sn": 0, "Pb": 0}, "composition_wt", "0"),
    ],
)
def test_a_wrong_composition_is_refused_with_its_field(
    composition: dict[str, float], field: str, told: str
) -> None:
    with pytest.raises(InvalidComposition) as refused:
        alloy_from_wt(composition)
    assert refused.value.field == field
    assert told in str(refused.value)
    assert refused.value.remedy
    assert len(str(refused.value)) < 300


@pytest.mark.parametrize("total", [99.9, 99.95, 100.0, 100.1])
def test_sums_within_a_tenth_are_normalised_and_told(total: float) -> None:
    alloy = alloy_from_wt({"Sn": total - 37.0, "Pb": 37.0})
    assert sound(alloy)
    assert alloy.given_total_wt == pytest.approx(total, abs=1e-12)
    assert alloy.composition_wt["Pb"] == pytest.approx(3700.0 / total, abs=1e-12)


def test_one_element_alone_may_miss_100_by_a_tenth() -> None:
    alloy = alloy_from_wt({"Sn": 100.05})
    assert dict(alloy.composition_wt) == {"Sn": 100.0}
    assert alloy.given_total_wt == 100.05


@pytest.mark.parametrize("total", [99.8999, 100.1001])
def test_sums_beyond_a_tenth_are_refused(total: float) -> None:
    with pytest.raises(InvalidComposition):
        alloy_from_wt({"Sn": total - 37.0, "Pb": 37.0})


@pytest.mark.parametrize(
    ("text", "error", "told"),
    [
        ("", UnknownAlloy, "no designation"),
        ("SAC304", UnknownAlloy, "no designation"),
        ("60Sn40Pb", UnknownAlloy, "numbers before the elements"),
        ("ag3cu0.5sn", UnknownAlloy, "spell the symbols"),
        ("Sn63,Pb37", UnknownAlloy, "holds “,”"),
        ("Sn6e1Pb40", UnknownAlloy, "no designation"),
        ("Sn٦٣Pb", UnknownAlloy, "no designation"),
        ("Sn-3.0Ag-0.5Cu", InvalidComposition, "ambiguous"),
        ("Sn 3.0Ag 0.5Cu", InvalidComposition, "ambiguous"),
        ("SnPb", InvalidComposition, "Sn and Pb open"),
        ("Sn50Sn50", InvalidComposition, "twice"),
        ("Sn50Sn", InvalidComposition, "twice"),
        ("Ag60Cu40Sn", InvalidComposition, "nothing for Sn"),
        ("Ag33.3Cu33.3Zn33.4Sn", InvalidComposition, "nothing for Sn"),
        ("Sn50Pb60", InvalidComposition, "110"),
        ("Sn999Pb", InvalidComposition, "nothing for Pb"),
        ("Xx5Sn", UnknownAlloy, "Xx is no element"),
        ("Ti50Ni", UnknownAlloy, "no data here hold Ti"),
        ("Sn63Pb37" * 10_000, UnknownAlloy, "too long"),
    ],
)
def test_a_wrong_string_is_refused_with_a_reason(text: str, error: type[DiagramsError], told: str) -> None:
    with pytest.raises(error) as refused:
        parse_alloy(text)
    assert told in str(refused.value)
    assert refused.value.field == "alloy"
    assert refused.value.remedy
    assert len(str(refused.value)) < 300


def test_errors_name_the_field_they_were_asked_under() -> None:
    with pytest.raises(UnknownAlloy) as refused:
        parse_alloy("SAC304", field="from_alloy")
    assert refused.value.field == "from_alloy"


def test_a_tolerance_is_plus_minus_about_the_nominal() -> None:
    alloy = alloy_from_wt({"Sn": 63, "Pb": 37}, {"Sn": 0.5})
    assert alloy.limits_wt == {"Sn": (62.5, 63.5)}


def test_a_tolerance_ends_at_the_physical_ends() -> None:
    alloy = alloy_from_wt({"Sn": 99.9, "Cu": 0.1}, {"Sn": 0.5, "Cu": 0.2})
    assert alloy.limits_wt["Cu"][0] == 0.0
    assert alloy.limits_wt["Cu"][1] == pytest.approx(0.3)
    assert alloy.limits_wt["Sn"][1] == 100.0


def test_a_tolerance_of_the_request_replaces_that_of_the_standard() -> None:
    assert alloy_from_designation("SAC305").limits_wt == {"Ag": (2.8, 3.2), "Cu": (0.3, 0.7)}
    assert alloy_from_designation("SAC305", {"Ag": 0.1}).limits_wt == {"Ag": (2.9, 3.1)}
    assert alloy_from_designation("SAC305", {}).limits_wt == {}
    assert parse_alloy("SAC305", {"Ag": 0.0}).limits_wt == {"Ag": (3.0, 3.0)}


@pytest.mark.parametrize(
    ("tolerance", "field"),
    [
        ({"Ag": 0.5}, "tolerance_wt.Ag"),
        ({"Xx": 0.5}, "tolerance_wt.Xx"),
        ({"Sn": 0.5, "sn": 0.5}, "tolerance_wt.sn"),
        ({"Sn": -0.5}, "tolerance_wt.Sn"),
        ({"Sn": math.nan}, "tolerance_wt.Sn"),
        ({"Sn": math.inf}, "tolerance_wt.Sn"),
        ({"Sn": 100.5}, "tolerance_wt.Sn"),
        ({"Sn": True}, "tolerance_wt.Sn"),
    ],
)
def test_a_senseless_tolerance_is_refused(tolerance: dict[str, float], field: str) -> None:
    with pytest.raises(InvalidComposition) as refused:
        alloy_from_wt({"Sn": 63, "Pb": 37}, tolerance)
    assert refused.value.field == field
    assert refused.value.remedy


def test_atomic_percent_of_the_compound_is_its_formula() -> None:
    # 3 Ag : 1 Sn is 73.16 wt% Ag (Karakaya and Thompson 1987, by stoichiometry).
    alloy = alloy_from_at({"Ag": 75, "Sn": 25})
    assert alloy.composition_wt["Ag"] == pytest.approx(73.16, abs=0.005)
    with pytest.raises(InvalidComposition) as refused:
        alloy_from_at({"Ag": 75, "Sn": 24})
    assert refused.value.field == "composition_at"


normal_compositions = st.dictionaries(
    st.sampled_from(ELEMENTS), st.floats(0.001, 1.0), min_size=1, max_size=8
).map(lambda parts: {el: 100.0 * value / math.fsum(parts.values()) for el, value in parts.items()})


@given(normal_compositions)
def test_mass_and_atomic_percent_make_the_same_alloy(composition: dict[str, float]) -> None:
    by_mass = alloy_from_wt(composition)
    by_atoms = alloy_from_at(wt_to_at(composition))
    assert sound(by_mass)
    assert sound(by_atoms)
    assert dict(by_atoms.composition_wt) == pytest.approx(dict(by_mass.composition_wt), abs=1e-9)


@given(st.dictionaries(st.sampled_from(ELEMENTS), st.integers(1, 99_999), min_size=1, max_size=6), st.data())
def test_what_is_written_is_read_back(thousandths: dict[str, int], data: st.DataObject) -> None:
    """A composition with one balance, in any order: the numbers written are the numbers read."""
    numbers = {el: value / 1000.0 for el, value in thousandths.items()}
    balance = data.draw(st.sampled_from(ELEMENTS).filter(lambda el: el not in numbers))
    parts = data.draw(st.permutations([balance, *(f"{el}{value:.3f}" for el, value in numbers.items())]))
    left = 100.0 - math.fsum(numbers.values())
    if left < 0.0005:
        with pytest.raises(InvalidComposition):
            parse_alloy("".join(parts))
    else:
        alloy = parse_alloy("".join(parts))
        assert dict(alloy.composition_wt) == pytest.approx({**numbers, balance: left}, abs=1e-9)


pieces = st.sampled_from(
    [*ELEMENTS, "Xx", "3", "0.5", "63", "100", "-", " ", ".", "e", "BAg", "SAC305", "∞", "٣"]
)


def answer(make: Callable[[], Alloy]) -> Alloy | DiagramsError:
    """The alloy, or the error raised on purpose; any other error is a fault and goes through."""
    try:
        return make()
    except DiagramsError as error:
        return error


def helpful(answered: Alloy | DiagramsError) -> bool:
    if isinstance(answered, Alloy):
        return sound(answered)
    return bool(answered.field and answered.remedy and str(answered))


@given(st.one_of(st.text(max_size=300), st.lists(pieces, max_size=12).map("".join)))
def test_any_text_gives_an_alloy_or_a_helpful_refusal(text: str) -> None:
    assert helpful(answer(lambda: parse_alloy(text)))


@given(
    st.dictionaries(st.text(max_size=3) | st.sampled_from(ELEMENTS), st.floats() | st.integers(), max_size=5)
)
def test_any_numbers_give_an_alloy_or_a_helpful_refusal(composition: dict[str, float]) -> None:
    assert helpful(answer(lambda: alloy_from_wt(composition, composition)))
    assert helpful(answer(lambda: alloy_from_at(composition, composition)))


@pytest.mark.parametrize("make", [alloy_from_wt, alloy_from_at])
@pytest.mark.parametrize("element", ["Sn", "Pb", "Ag", "Cu", "Au", "Al"])
def test_a_pure_metal_is_exactly_100(make, element: str) -> None:
    for percent in (99.9, 99.97, 100, 100.03, 100.05, 100.1):
        assert dict(make({element: percent, "Zn": 0}).composition_wt) == {element: 100.0}
