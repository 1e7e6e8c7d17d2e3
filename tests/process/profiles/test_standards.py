"""Profiles of standards by name: every bound as printed, and nothing more."""

import numpy as np
import pytest

from diagrams.errors import InvalidInput
from service.process.profiles.demands import Levels
from service.process.profiles.standards import standard_profile, standard_profiles
from service.process.profiles.trace import Trace
from tests.truth import truth

LEVELS = Levels(183.0, 183.0, 183.0)
RUN = Trace("pad", np.array([0.0, 300.0, 400.0]), np.array([25.0, 255.0, 25.0]))
CLASSIFICATION_C = {"J-STD-020D SnPb eutectic assembly": 235.0, "J-STD-020D Pb-free assembly": 260.0}


@pytest.mark.parametrize("key", CLASSIFICATION_C)
def test_bounds_are_those_printed(key: str) -> None:
    demands = standard_profile(key, 5.0).with_classification(CLASSIFICATION_C[key])
    found = {
        (c.limit.removeprefix(f"{key}: "), c.side, c.bound, c.unit)
        for d in demands
        for c in d.check(RUN, LEVELS)
    }
    rows = [row for row in truth("standard_profiles") if row["profile"] == key]
    assert found == {(r["limit"], r["side"], float(r["bound"]), r["unit"]) for r in rows}


def test_without_a_classification_nothing_refers_to_it() -> None:
    for profile in standard_profiles(5.0).values():
        assert len(profile.demands) == 5
        assert profile.with_classification(None) == profile.demands
        assert profile.source.text == "J-STD-020D Table 5-2"
        assert profile.note


def test_names() -> None:
    assert standard_profile("j-std-020d pb-free ASSEMBLY", 5.0).key == "J-STD-020D Pb-free assembly"
    with pytest.raises(InvalidInput) as unknown:
        standard_profile("J-STD-020Z", 5.0)
    assert "J-STD-020D SnPb eutectic assembly" in unknown.value.remedy
