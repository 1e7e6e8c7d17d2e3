"""Columns of phases: changes against bisecting the minimiser, nothing missed between, melting only melts."""

from itertools import pairwise

import numpy as np
import pytest

from diagrams.alloys import parse_alloy
from diagrams.many.change import again, change_between, holds
from diagrams.many.column import Column, column
from diagrams.many.equilibrium import stable
from diagrams.many.stretch import STRAIGHT, liquid_fraction, smoothed
from diagrams.questions.many_place import place_many
from diagrams.questions.many_state import StateFinder

ALLOYS = ["SAC305", "Sn62Pb36Ag2", "Sn42Bi57Ag1", "Sn90Ag3Cu0.5Pb6.5", "Ag 212", "BAg-35", "BCuP-5"]


def made(name: str) -> tuple[StateFinder, Column]:
    alloy = parse_alloy(name)
    finder = StateFinder(place_many(alloy), alloy.composition_wt)
    low, high = (c + 273.15 for c in finder.place.temperature_range_c)
    return finder, column(finder.place.sample, finder.overall, low, high)


@pytest.fixture(scope="module", params=ALLOYS)
def case(request: pytest.FixtureRequest) -> tuple[StateFinder, Column]:
    return made(request.param)


def test_it_covers_the_range_without_a_gap(case: tuple[StateFinder, Column]) -> None:
    finder, found = case
    low, high = finder.place.temperature_range_c
    assert found.complete
    assert found.stretches[0].low_k == pytest.approx(low + 273.15)
    assert found.stretches[-1].high_k == pytest.approx(high + 273.15)
    for below, above in pairwise(found.stretches):
        assert below.high_k == pytest.approx(above.low_k, abs=2e-4)
        assert below.sets != above.sets


def test_changes_are_where_bisecting_the_minimiser_finds_them(case: tuple[StateFinder, Column]) -> None:
    finder, found = case
    for below, above in pairwise(found.stretches):
        low, high = max(below.low_k, above.low_k - 0.3), min(above.high_k, above.low_k + 0.3)
        while high - low > 1e-4:
            middle = 0.5 * (low + high)
            if tuple(sorted(stable(finder.place.sample, finder.overall, middle).sets)) == above.sets:
                high = middle
            else:
                low = middle
        assert above.low_k == pytest.approx(high, abs=5e-4), (below.names, above.names)


def test_between_changes_the_global_search_finds_the_same(case: tuple[StateFinder, Column]) -> None:
    """Cold starts at random temperatures, so that nothing a neighbour knows can hide a phase."""
    finder, found = case
    sample = finder.place.sample
    random = np.random.default_rng(7)
    low, high = found.stretches[0].low_k, found.stretches[-1].high_k
    for t in random.uniform(low, high, 12).tolist():
        stretch = next(s for s in found.stretches if s.low_k <= t <= s.high_k)
        cold = stable(sample, finder.overall, t)
        assert tuple(sorted(cold.sets)) == stretch.sets
        smooth = smoothed(sample, finder.overall, stretch)
        read = float(np.interp(t, smooth.states.temperatures_k, smooth.liquid))
        assert read == pytest.approx(liquid_fraction(sample, cold)[0], abs=2 * STRAIGHT)


def test_heating_only_melts(case: tuple[StateFinder, Column]) -> None:
    _, found = case
    liquid = np.concatenate([s.liquid for s in found.stretches])
    assert np.diff(liquid).min() > -1e-9
    assert liquid[0] == 0.0
    assert liquid[-1] == 1.0


def test_changes_are_found_again_at_neighbours() -> None:
    """For many compositions at once, as a column of each has them."""
    finder, found = made("SAC305")
    sample = finder.place.sample
    shifts = np.array([[0.002, 0.0, -0.002], [-0.002, 0.0005, 0.0015], [0.0, -0.0005, 0.0005]])
    there = finder.overall + shifts
    below, above = found.stretches[-2:]
    change = change_between(below, above)
    assert change is not None
    moved = again(sample, there, change)
    assert holds(sample, moved).all()
    for k, overall in enumerate(there):
        own = column(sample, overall, 450.0, 560.0)
        assert moved.temperatures_k[k] == pytest.approx(own.stretches[-1].low_k, abs=1e-6)
