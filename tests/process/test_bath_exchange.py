"""Drawing off and replacing, checked by mixing the masses."""

import numpy as np
import pytest

from service.process.bath_exchange import exchange
from service.process.bounds import Bounds

FEED = {"Sn": 63.0, "Pb": 37.0}


def test_copper_back_to_half_its_limit() -> None:
    """100 kg with 0.30 % copper: to reach 0.15 %, half of it is drawn off."""
    bath = {"Sn": 62.8, "Pb": 36.9, "Cu": 0.30}
    found = exchange(bath, FEED, {"Cu": Bounds(high=0.15)})
    assert found.share == pytest.approx(0.5)
    assert found.element == "Cu"
    assert found.after_wt["Cu"] == pytest.approx(0.15)
    assert sum(found.after_wt.values()) == pytest.approx(sum(bath.values()) / 2 + 50.0)


def test_tin_back_up() -> None:
    bath = {"Sn": 60.0, "Pb": 40.0}
    found = exchange(bath, {"Sn": 100.0}, {"Sn": Bounds(low=62.0, high=64.0)})
    assert found.share == pytest.approx(2.0 / 40.0)
    assert found.after_wt == pytest.approx({"Sn": 62.0, "Pb": 38.0})


@pytest.mark.parametrize("seed", range(50))
def test_the_least_share_by_scanning(seed: int) -> None:
    random = np.random.default_rng(seed)
    bath = {el: float(random.uniform(0.0, 1.0)) for el in ("Cu", "Au", "Ag")}
    feed = {el: float(random.uniform(0.0, 0.6)) for el in ("Cu", "Au", "Ag")}
    targets = {el: Bounds(high=float(random.uniform(0.2, 0.8))) for el in ("Cu", "Au", "Ag")}

    def within(share: float) -> bool:
        return all(bath[e] * (1 - share) + feed[e] * share <= (targets[e].high or 0.0) + 1e-9 for e in bath)

    found = exchange(bath, feed, targets)
    scanned = [s for s in np.linspace(0.0, 1.0, 20001).tolist() if within(s)]
    if found.share is None:
        assert not scanned
    else:
        assert scanned[0] == pytest.approx(found.share, abs=1e-4)


def test_nothing_to_do_and_nothing_that_helps() -> None:
    nothing = exchange({"Sn": 63.0, "Pb": 37.0}, FEED, {"Cu": Bounds(high=0.3)})
    assert (nothing.share, nothing.element) == (0.0, None)
    worse = exchange({"Cu": 0.5}, {"Cu": 0.4}, {"Cu": Bounds(high=0.3)})
    assert (worse.share, worse.element) == (None, "Cu")
    past = exchange(
        {"Cu": 0.5, "Ag": 3.0}, {"Cu": 0.0, "Ag": 9.0}, {"Cu": Bounds(high=0.3), "Ag": Bounds(2.8, 3.5)}
    )
    assert (past.share, past.element) == (None, "Ag")
