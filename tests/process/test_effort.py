"""What would take long is refused beforehand, naming the alloy that is one too many."""

import time

import pytest

from diagrams.errors import InvalidInput
from service.process.effort import MOST_EFFORT, check_effort
from service.process.placed import placed
from service.process.window import Demands, find_window
from service.process.window_terms import EarlierJoint
from service.schemas.alloy import AlloyAsked


def solder(silver, **tolerance):
    wt = {"Sn": 60.0, "Pb": 32.0 - silver, "Ag": silver, "Bi": 8.0}
    return placed(AlloyAsked(composition_wt=wt, tolerance_wt=tolerance))


def test_wide_tolerances_of_several_alloys_are_too_much_at_once():
    alloys = [solder(1.0 + k / 10, Ag=0.1, Bi=0.4, Pb=0.5) for k in range(3)]
    assert [found.melter.effort for found in alloys] == [24, 24, 24]  # eight corners, four elements
    check_effort(zip("ab", alloys[:2], strict=True), tolerances=True)
    check_effort(zip("abab", alloys[:2] * 2, strict=True), tolerances=True)
    check_effort(zip("abc", alloys, strict=True))  # nominal compositions only
    with pytest.raises(InvalidInput) as refused:
        check_effort(zip("abc", alloys, strict=True), tolerances=True)
    assert refused.value.field == "c"
    assert str(MOST_EFFORT) in str(refused.value)


def test_one_alloy_alone_is_never_too_much_and_many_without_tolerance_are():
    five = {"Sn": 60, "Pb": 25, "Ag": 2, "Bi": 8, "Cu": 5}
    alone = placed(AlloyAsked(composition_wt=five, tolerance_wt={"Ag": 0.1, "Bi": 0.4, "Pb": 0.5, "Cu": 0.1}))
    assert alone.melter.effort > MOST_EFFORT
    check_effort([("alloy", alone), ("earlier_joints.0.alloy", None)], tolerances=True)
    many = [solder(1.0 + k / 10) for k in range(7)]
    check_effort((str(k), each) for k, each in enumerate(many[:6]))
    with pytest.raises(InvalidInput) as refused:
        check_effort((str(k), each) for k, each in enumerate(many))
    assert refused.value.field == "6"


def test_alloys_read_off_diagrams_and_tables_count_for_nothing():
    read = [placed(AlloyAsked(designation=name)) for name in ("Sn63Pb37", "BAg-8", "BNi-2")]
    assert [found.melter.effort for found in read] == [0, 0, 0]
    check_effort(((str(k), read[k % 3]) for k in range(60)), tolerances=True)


def test_the_largest_window_of_binaries_is_quick():
    """Thirty earlier joints, each with nearly all of a diagram as its tolerance and a fraction of its own."""
    filler = placed(AlloyAsked(designation="Sn63Pb37"))
    joints = tuple(
        EarlierJoint(
            f"joint {k}",
            placed(
                AlloyAsked(
                    composition_wt={"Au": 50 + 0.01 * k, "Sn": 50 - 0.01 * k},
                    tolerance_wt={"Sn": 49 - 0.01 * k},
                )
            ),
            0.01 + 0.03 * k,
        )
        for k in range(30)
    )
    started = time.process_time()
    found = find_window(filler, Demands(target_liquid_fraction=1.0, earlier_joints=joints))
    assert time.process_time() - started < 2.0
    assert len(found.upper_terms) == 30
