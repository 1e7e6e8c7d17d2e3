"""Columns of points: the same as one by one, outside marked, limits kept."""

import numpy as np
import pytest


def columns(diagram, points):
    return {
        "diagram": diagram,
        "second_wt": [wt for wt, _ in points],
        "temperature_c": [temperature_c for _, temperature_c in points],
    }


@pytest.mark.parametrize("diagram", ["pb-sn", "cu-zn", "au-sn"])
def test_many_points_are_answered_as_each_alone(ask, draw, diagram):
    drawing = draw(diagram)
    (_, _), (c_low, c_high) = drawing.ranges
    rng = np.random.default_rng(3)
    points = [
        (float(w), float(t))
        for w, t in zip(rng.uniform(0, 100, 150), rng.uniform(c_low - 30, c_high + 30, 150), strict=True)
    ]
    published = ask("GET", f"/v1/diagrams/{diagram}").json()
    points += [
        (wt, invariant["temperature_c"])
        for invariant in published["invariants"]
        for wt in invariant["compositions_wt"].values()
    ]
    many = ask("POST", "/v1/equilibria", json=columns(diagram, points)).json()
    assert any(many["outside"])
    assert not all(many["outside"])
    first, second = drawing.elements
    for k, (wt, temperature_c) in enumerate(points):
        alloy = {"composition_wt": {first: 100 - wt, second: wt}}
        one = ask("POST", "/v1/equilibrium", json={"alloy": alloy, "temperature_c": temperature_c})
        if many["outside"][k]:
            assert one.status_code == 422
            assert (many["field"][k], many["liquid_mass_fraction"][k]) == ("outside", None)
        else:
            assert many["field"][k] == one.json()["field"], points[k]
            expected = one.json()["liquid_mass_fraction"]
            assert many["liquid_mass_fraction"][k] == pytest.approx(expected, abs=1e-9)


def test_a_full_load_is_answered(ask):
    rng = np.random.default_rng(5)
    points = list(zip(rng.uniform(0, 100, 200_000), rng.uniform(25, 420, 200_000), strict=True))
    answer = ask("POST", "/v1/equilibria", json=columns("pb-sn", points))
    assert answer.status_code == 200
    found = answer.json()
    assert {len(found[name]) for name in ("field", "liquid_mass_fraction", "outside")} == {200_000}
    assert all(0 <= fraction <= 1 for fraction in found["liquid_mass_fraction"])
    assert "lead" in {note["topic"] for note in found["safety"]["notes"]}


@pytest.mark.parametrize(
    ("change", "status", "field"),
    [
        ({"second_wt": [1.0]}, 422, "temperature_c"),
        ({"second_wt": [1.0, "2"]}, 422, "second_wt.1"),
        ({"temperature_c": [100.0, True]}, 422, "temperature_c.1"),
        ({"second_wt": [], "temperature_c": []}, 422, "second_wt"),
        ({"second_wt": [1.0] * 200_001, "temperature_c": [100.0] * 200_001}, 422, "second_wt"),
        ({"diagram": "sn-xx"}, 404, "diagram"),
        ({"diagram": None}, 422, "diagram"),
    ],
)
def test_what_is_wrong_with_the_columns_is_named(ask, change, status, field):
    question = columns("pb-sn", [(10.0, 200.0), (20.0, 200.0)]) | change
    answer = ask("POST", "/v1/equilibria", json=question)
    assert answer.status_code == status
    assert answer.json()["errors"][0]["field"] == field
