"""The uncertainty budget: its sizes, how they add up, and that all rules count it alike."""

import math
import statistics

import pytest
from hypothesis import given
from hypothesis import strategies as st

from diagrams.comparison import compared
from diagrams.errors import OutsideData
from diagrams.fillers import fillers
from diagrams.fitting.compare import compare
from service.process.budget import Budget
from service.process.data_uncertainty import data_uncertainty
from service.process.placed import placed
from service.process.sensors import Stated, hottest_true_c, sensor_class, sensor_classes
from service.process.window import Demands, find_window
from service.process.window_terms import EarlierJoint, UpperLimit
from service.schemas.alloy import AlloyAsked
from service.schemas.uncertainty_words import ROOT_SUM_SQUARE, WORST_CASE

SOFT = AlloyAsked(composition_wt={"Pb": 75, "Sn": 25}, tolerance_wt={"Sn": 1.5})
TIN_LEAD = AlloyAsked(designation="Sn63Pb37")
sizes = st.floats(0.0, 12.0)


def window(budget, *, spread_c=0.0, alloy=TIN_LEAD, superheat_c=10.0):
    joints = (EarlierJoint("lug", placed(SOFT), 0.2, 3.0),)
    limits = (UpperLimit("relay", 245.0, 2.0),)
    demands = Demands(
        target_liquid_fraction=1.0,
        superheat_c=superheat_c,
        spread_c=spread_c,
        upper_limits=limits,
        earlier_joints=joints,
        budget=budget,
    )
    return find_window(placed(alloy), demands)


@given(sensor_c=sizes, data_c=sizes, spread_c=sizes)
def test_root_sum_square_never_takes_more_than_the_worst_case(sensor_c, data_c, spread_c):
    worst = window(Budget(Stated(sensor_c), data_c, WORST_CASE), spread_c=spread_c)
    root = window(Budget(Stated(sensor_c), data_c, ROOT_SUM_SQUARE), spread_c=spread_c)
    assert root.minimum_peak_c <= worst.minimum_peak_c + 1e-9
    assert root.maximum_peak_c >= worst.maximum_peak_c - 1e-9
    assert root.width_c >= worst.width_c - 1e-9
    for found in (worst, root):  # both are told, whichever was chosen
        assert found.combined[WORST_CASE].width_c == worst.width_c
        assert found.combined[ROOT_SUM_SQUARE].width_c == root.width_c


@given(sensor_c=sizes, data_c=sizes)
def test_both_combinations_are_reckoned_anew_from_the_sizes(sensor_c, data_c):
    filler, lug = placed(TIN_LEAD).melter, placed(SOFT).melter
    found = window(Budget(Stated(sensor_c), data_c))
    needed, kept = filler.needed(1.0), lug.kept(0.2)
    for term, start_c, alloy_c, sign in (
        (found.lower_terms[0], needed.nominal + 10.0, needed.highest - needed.nominal, 1),
        (found.upper_terms[-1], kept.nominal - 3.0, kept.nominal - kept.lowest, -1),
    ):
        assert alloy_c > 0.3
        assert term.value_c == pytest.approx(start_c + sign * (alloy_c + data_c + sensor_c), abs=1e-9)
        root_c = math.sqrt(alloy_c**2 + data_c**2 + sensor_c**2)
        assert term.by(ROOT_SUM_SQUARE).value_c == pytest.approx(start_c + sign * root_c, abs=1e-9)
        assert (
            sum(part.value_c for part in term.by(ROOT_SUM_SQUARE).parts) == term.by(ROOT_SUM_SQUARE).value_c
        )


@pytest.mark.parametrize("by", [WORST_CASE, ROOT_SUM_SQUARE])
def test_the_spread_enters_whole(by):
    budget = Budget(Stated(3.0), 2.0, by)
    assert window(budget, spread_c=7.0).width_c == pytest.approx(window(budget).width_c - 7.0, abs=1e-9)


def test_a_limit_has_only_the_sensor_to_doubt():
    limit = window(Budget(Stated(3.0), 2.0)).upper_terms[0]
    assert [(part.name, part.value_c) for part in limit.uncertain] == [("sensor tolerance", 3.0)]
    assert limit.value_c == limit.by(ROOT_SUM_SQUARE).value_c == 240.0


def test_a_sensor_class_is_read_at_the_temperature_of_each_bound():
    """IEC 60584 type K class 2: 2.5 °C, or 0.0075 of the temperature if that is more."""
    found = window(Budget(sensor_class("IEC 60584 type K class 2")), alloy=AlloyAsked(designation="Sn5Pb95"))
    lower = found.lower_terms[0]
    hot_c = lower.value_c - lower.uncertain[-1].value_c
    assert hot_c > 310
    assert lower.uncertain[-1].value_c == pytest.approx(max(2.5, 0.0075 * hot_c), abs=1e-12)
    assert found.upper_terms[0].uncertain[-1].value_c == 2.5
    assert "IEC 60584-1:2013" in lower.uncertain[-1].reason


@given(name=st.sampled_from(sorted(sensor_classes())), share=st.floats(0.0, 1.0))
def test_the_hottest_true_temperature_undoes_the_tolerance(name, share):
    sensor = sensor_classes()[name]
    low, high = sensor.ranges[0].from_c, sensor.ranges[-1].to_c
    true_c = max(0.0, low) + share * (high - max(0.0, low))
    reading_c = true_c - sensor.tolerance_c(true_c)
    if reading_c >= low:
        assert hottest_true_c(sensor, reading_c) == pytest.approx(true_c, abs=1e-9)


def test_an_upper_bound_beyond_the_class_is_where_the_class_ends():
    """Hotter than that no reading tells anything; 370 °C is the end of ASTM E230 type T."""
    sensor = sensor_class("ASTM E230 type T special")
    limits = (UpperLimit("pipe", 1083.0), UpperLimit("tape", 360.0))
    demands = Demands(target_liquid_fraction=1.0, upper_limits=limits, budget=Budget(sensor))
    pipe, tape = find_window(placed(TIN_LEAD), demands).upper_terms
    assert pipe.value_c == pytest.approx(370 - 0.004 * 370)
    assert tape.value_c == pytest.approx(360 - 0.004 * 360)
    assert [part.name for part in pipe.parts][-1] == "end of the sensor class"
    assert pipe.uncertain[0].value_c == pytest.approx(0.004 * 370)
    assert sum(part.value_c for part in pipe.parts) == pipe.value_c


@pytest.mark.parametrize("by", [WORST_CASE, ROOT_SUM_SQUARE])
def test_no_combination_reads_beyond_the_class(by):
    """An earlier joint of silver braze under a sensor that ends at 350 °C: its doubts do not count twice."""
    sensor = sensor_class("IEC 60584 type T class 2")
    joints = (EarlierJoint("braze", placed(AlloyAsked(designation="BAg-8"))),)
    demands = Demands(target_liquid_fraction=1.0, earlier_joints=joints, budget=Budget(sensor, None, by))
    assert find_window(placed(TIN_LEAD), demands).maximum_peak_c == pytest.approx(350 - 0.0075 * 350)


def test_a_bound_beyond_the_class_is_refused():
    with pytest.raises(OutsideData) as refused:
        window(Budget(sensor_class("IEC 60584 type B class 2")))
    assert refused.value.field == "sensor_class"


def test_the_stored_comparison_is_what_the_data_give():
    """Two-element fillers here; the others in tests/many, which computes them anyway."""
    pairs = [f for f in fillers() if len(f.composition_wt) <= 2]
    names = {f.name for f in pairs}
    assert sorted(compare(pairs), key=str) == sorted((r for r in compared() if r.filler in names), key=str)
    assert len(compared()) > 90


def test_data_are_judged_by_their_own_row_then_by_their_system():
    rows = {row.filler: row for row in compared()}
    system = [abs(row.liquidus_off_c) for row in compared() if row.data_id == "pb-sn"]
    own = data_uncertainty(placed(AlloyAsked(designation="Sn5Pb95")).melter, 1.0)
    expected = max(abs(rows["Sn5Pb95"].liquidus_off_c), statistics.median(system), 0.5)
    assert own.value_c == pytest.approx(expected)
    other = data_uncertainty(placed(SOFT).melter, 1.0)
    assert other.value_c == pytest.approx(statistics.quantiles(system, n=10, method="inclusive")[-1])
    none_c = data_uncertainty(placed(AlloyAsked(composition_wt={"Cu": 70, "Ni": 30})).melter, 0.0).value_c
    pairs = [abs(row.solidus_off_c) for row in compared() if row.data_id.count("-") == 1]
    assert none_c == pytest.approx(statistics.quantiles(pairs, n=10, method="inclusive")[-1])
    printed = data_uncertainty(placed(AlloyAsked(designation="BAg-1")).melter, 1.0)
    assert (printed.value_c, printed.known) == (0.0, False)
    through = data_uncertainty(placed(AlloyAsked(designation="Sn95Sb5")).melter, 1.0)  # drawn through prints
    assert (through.value_c, through.known) == (0.0, False)


def test_few_rows_make_no_nine_tenths():
    """Gold–tin has one row, off by 2.79 °C: it counts whole, and at least the median of all."""
    melter = placed(AlloyAsked(composition_wt={"Au": 79, "Sn": 21})).melter
    pairs = [abs(row.liquidus_off_c) for row in compared() if row.data_id.count("-") == 1]
    own = [abs(row.liquidus_off_c) for row in compared() if row.data_id == "au-sn"]
    found = data_uncertainty(melter, 1.0)
    assert found.value_c == pytest.approx(max(*own, statistics.median(pairs)))
    assert "the worst of 1 filler" in found.reason
    system = data_uncertainty(placed(SOFT).melter, 1.0).reason
    assert "used in fits" in system


def test_between_solidus_and_liquidus_the_worse_end_counts():
    melter = placed(TIN_LEAD).melter
    ends = [data_uncertainty(melter, f).value_c for f in (0.0, 1.0)]
    assert data_uncertainty(melter, 0.5).value_c == max(ends)
