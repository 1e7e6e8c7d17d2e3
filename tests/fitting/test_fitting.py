import json
from pathlib import Path

import pytest

from diagrams.equilibrium import Isotherm
from diagrams.files import assessments
from diagrams.files.assessments import assessment_ids, read_assessment
from diagrams.fillers import find_filler
from diagrams.fitting.fit import fit_ids, fitted_document, fitted_facts, read_fit, run_fit
from diagrams.fitting.layout import parameter_text
from diagrams.fitting.targets import solve_target
from diagrams.units import celsius_to_kelvin, x_to_second_wt


def stored_text(diagram_id: str) -> str:
    return (Path(str(assessments.FOLDER)) / f"{diagram_id}.json").read_text(encoding="utf-8")


def test_refitting_gives_the_stored_file_byte_for_byte():
    stored = stored_text("in-sn")
    document = json.loads(stored)
    fit = read_fit("in-sn")
    assert parameter_text(fitted_document(fit, document, run_fit(fit, document))) == stored


def test_a_fit_does_not_depend_on_the_coefficients_it_finds_in_the_file():
    document = json.loads(stored_text("in-sn"))
    stored = json.loads(stored_text("in-sn"))
    document["phases"][1]["interaction"][0][0]["terms"]["1"] = 12345.0
    fit = read_fit("in-sn")
    assert fitted_document(fit, document, run_fit(fit, document)) == stored


@pytest.mark.parametrize("diagram_id", fit_ids())
def test_stored_file_says_what_it_was_fitted_to_and_reaches_it(diagram_id):
    fit = read_fit(diagram_id)
    document = json.loads(stored_text(diagram_id))
    system = read_assessment(diagram_id).system
    assert document["fitted_to"] == [target.name for target in fit.targets]
    assert document["changes"] == fit.changes
    for target, reached in zip(fit.targets, document["reached"], strict=True):
        point = solve_target(target, system)
        assert reached["name"] == target.name
        assert reached["temperature_c"] == pytest.approx(point.temperature_c, abs=0.051)
        assert reached["second_wt"] == pytest.approx(list(point.wt), abs=0.0051)


@pytest.mark.parametrize("diagram_id", fit_ids())
def test_the_minimiser_finds_every_fitted_point_stable(diagram_id):
    """A fit solves each point by itself; no other phase may lie lower there."""
    system = read_assessment(diagram_id).system
    for target in read_fit(diagram_id).targets:
        point = solve_target(target, system)
        ends = []
        steps = (0.0,) if target.kind in ("tie", "boundary") else (-0.2, 0.2)  # both sides of an invariant
        for step in steps:
            for tie in Isotherm(system, celsius_to_kelvin(point.temperature_c + step)).ties:
                for phase, x in ((tie.first, tie.left), (tie.second, tie.right)):
                    ends.append((phase.model, x_to_second_wt(x, *system.elements)))
        # near an extremum the compositions run away as the root of the distance
        near = {"tie": 0.001, "boundary": 0.001, "invariant": 0.5, "congruent": 2.0, "critical": 4.0}[
            target.kind
        ]
        for model, wt in zip(target.models, point.wt, strict=True):
            assert any(m == model and abs(w - wt) < near for m, w in ends), (target.name, model)


@pytest.mark.parametrize("diagram_id", assessment_ids())
def test_every_parameter_file_has_the_one_text_form(diagram_id):
    stored = stored_text(diagram_id)
    assert parameter_text(json.loads(stored)) == stored


def test_facts_used_in_fits_name_real_fillers_of_the_same_system():
    for fact in fitted_facts():
        for name in fact.fillers:
            filler = find_filler(name)
            assert filler.name == name
            assert "-".join(sorted(el.lower() for el in filler.composition_wt)) == fact.id
