"""The fit of a system of many elements: what it reaches is what the file says, and nothing near is better."""

import json
from dataclasses import replace
from pathlib import Path

import numpy as np
import pytest

from diagrams.fitting.systems import (
    SystemFit,
    melting_ranges_c,
    misses,
    read_system_fit,
    system_fit_ids,
    values,
    with_terms,
)
from diagrams.many import reading

IDS = system_fit_ids()


def stored(system_id: str) -> dict:
    return json.loads((Path(str(reading.FOLDER)) / f"{system_id}.json").read_text(encoding="utf-8"))


@pytest.mark.parametrize("system_id", IDS)
def test_the_file_says_what_it_was_fitted_to_and_reaches_it(system_id):
    fit, document = read_system_fit(system_id), stored(system_id)
    assert {target.name for target in fit.targets} <= set(document["fitted_to"])
    assert document["changes"] == fit.changes
    reached = {row["name"]: row["after_c"] for row in document["reached"]}
    for target, found in zip(fit.targets, melting_ranges_c(fit, document), strict=True):
        assert reached[target.name] == pytest.approx(found, abs=0.06)


@pytest.mark.parametrize("system_id", IDS)
def test_no_small_step_makes_the_fit_better(system_id):
    """The stored terms are a least-squares minimum: found by moving each, not by fitting again."""
    fit, document = read_system_fit(system_id), stored(system_id)
    held = {(tuple(t["elements"]), t["model"]): t["interaction"] for t in document["triples"]}
    here = np.array(
        [
            held[term.elements, term.model][term.corner][0]["terms"]["1"] / term.spread
            for term in fit.terms
            if term.spread
        ]
    )

    def cost(steps: np.ndarray, part: SystemFit) -> float:
        ranges = melting_ranges_c(part, with_terms(fit, document, values(fit, steps)))
        return float(np.sum(misses(part, ranges, steps) ** 2))

    free = [term for term in fit.terms if term.spread]
    for elements in {term.elements for term in free}:
        # only these alloys hold the three elements and can tell
        told = tuple(t for t in fit.targets if set(elements) <= set(t.composition_wt))
        part = replace(fit, targets=told)
        best = cost(here, part)
        for k, term in enumerate(free):
            for move in (-0.05, 0.05) if term.elements == elements else ():
                steps = here.copy()
                steps[k] += move
                assert cost(steps, part) > best - 1e-3, (term, move)
