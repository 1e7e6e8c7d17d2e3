"""Orders of heatings, against trying every one."""

from itertools import pairwise, permutations

import numpy as np
import pytest

from service.process.step_order import Heating, clashes, order_of, passes


def works(order: tuple[Heating, ...] | list[Heating]) -> bool:
    return all(passes(order[i], order[j]) <= 0.0 for j in range(len(order)) for i in range(j))


@pytest.mark.parametrize("seed", range(300))
def test_against_trying_every_order(seed: int) -> None:
    random = np.random.default_rng(seed)
    count = int(random.integers(1, 6))
    needs = random.uniform(150.0, 400.0, count)
    heatings = [
        Heating(
            f"joint {k}", float(c), None if random.random() < 0.1 else float(c + random.normal(-15.0, 25.0))
        )
        for k, c in enumerate(needs)
    ]
    found = order_of(heatings)
    possible = any(works(order) for order in permutations(heatings))
    assert (found is not None) is possible
    assert bool(clashes(heatings)) is not possible
    if found is not None:
        assert works(found)
        assert sorted(h.name for h in found) == sorted(h.name for h in heatings)


def test_hottest_first() -> None:
    chain = [
        Heating("tin-lead", 203.0, 183.0),
        Heating("gold-tin", 300.0, 278.0),
        Heating("tin-antimony", 255.0, 240.0),
    ]
    found = order_of(chain)
    assert found is not None
    assert [h.name for h in found] == ["gold-tin", "tin-antimony", "tin-lead"]
    free = [Heating(name, c, None) for name, c in (("a", 200.0), ("b", 300.0), ("c", 300.0))]
    unbound = order_of(free)
    assert unbound is not None
    assert [h.name for h in unbound] == ["b", "c", "a"]
    assert all(x.needs_c >= y.needs_c for x, y in pairwise(unbound))


def test_the_pair_that_collides_and_by_how_much() -> None:
    twins = [Heating("left", 203.0, 183.0), Heating("right", 210.0, 183.0), Heating("lug", 300.0, 280.0)]
    assert order_of(twins) is None
    (clash,) = clashes(twins)
    assert (clash.one, clash.other) == ("left", "right")
    assert clash.one_passes_other_c == pytest.approx(20.0)
    assert clash.other_passes_one_c == pytest.approx(27.0)
    assert clash.least_c == pytest.approx(20.0)


def test_on_the_bound_is_allowed() -> None:
    pair = [Heating("first", 240.0, 210.0), Heating("second", 210.0, 180.0)]
    found = order_of(pair)
    assert found is not None
    assert [h.name for h in found] == ["first", "second"]
