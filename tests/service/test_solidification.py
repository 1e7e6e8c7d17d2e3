"""Freezing over HTTP: both ways down, what is told of them, what is refused."""

import pytest

from service.routes.solidification import EXAMPLES


def freeze(ask, alloy, **more):
    answer = ask("POST", "/v1/solidification", json={"alloy": alloy} | more)
    assert answer.status_code == 200, answer.text
    return answer.json()


def way(found, model):
    return [step for step in found["steps"] if step["model"] == model]


@pytest.mark.parametrize("name", EXAMPLES)
def test_examples(ask, name):
    answer = ask("POST", "/v1/solidification", json=EXAMPLES[name]["value"])
    assert answer.status_code == 200
    assert answer.json()["safety"]["notes"]


def test_a_lead_rich_solder_matters(ask):
    found = freeze(ask, {"composition_wt": {"Pb": 90, "Sn": 10}})
    assert found["hold_still_c"]["without_diffusion"] == pytest.approx(183.0, abs=0.02)
    assert found["hold_still_c"]["equilibrium"] == pytest.approx(found["solidus_c"], abs=0.2)
    assert found["below_equilibrium_c"] > 80.0
    assert [w["code"] for w in found["warnings"]] == ["freezes-late"]
    assert [solid["name"] for solid in found["solids"]] == ["(Pb)", "(Sn)"]
    assert found["last_liquid_wt"]["Sn"] == pytest.approx(61.9, abs=0.2)
    for model in ("equilibrium", "without diffusion"):
        steps = way(found, model)
        assert steps[0]["liquid_mass_fraction"] == 1.0
        assert steps[-1]["liquid_mass_fraction"] == pytest.approx(0.0, abs=1e-9)
        assert steps[0]["temperature_c"] == pytest.approx(found["liquidus_c"])
        temperatures = [s["temperature_c"] for s in steps]
        assert temperatures == sorted(temperatures, reverse=True)
    formed = [f for step in way(found, "without diffusion") for f in step["forming"]]
    for solid in found["solids"]:
        mass = sum(f["mass_fraction"] for f in formed if f["name"] == solid["name"])
        assert mass == pytest.approx(solid["mass_fraction"], abs=1e-9)
    assert sum(s["mass_fraction"] for s in found["solids"]) == pytest.approx(1.0, abs=1e-6)


def test_the_residual_decides_where_there_is_little(ask):
    """Sn5Pb95 keeps less than half a percent to the eutectic."""
    alloy = {"designation": "Sn5Pb95"}
    strict = freeze(ask, alloy, residual_liquid_fraction=0.001)["hold_still_c"]["without_diffusion"]
    easy = freeze(ask, alloy, residual_liquid_fraction=0.05)["hold_still_c"]["without_diffusion"]
    assert strict == pytest.approx(183.0, abs=0.02)
    assert easy > 230.0


def test_a_eutectic_freezes_the_same_either_way(ask):
    found = freeze(ask, {"designation": "Sn63Pb37"})
    assert found["below_equilibrium_c"] == pytest.approx(0.0, abs=0.02)
    assert found["below_standard_solidus_c"] == pytest.approx(0.0, abs=0.1)
    assert found["warnings"] == []


def test_by_address_and_by_body_are_one(ask):
    by_address = ask("GET", "/v1/solidification?alloy=Pb90Sn").json()
    by_body = freeze(ask, {"composition_wt": {"Pb": 90, "Sn": 10}})
    assert by_address["steps"] == by_body["steps"]
    assert by_address["hold_still_c"] == by_body["hold_still_c"]


@pytest.mark.parametrize(
    ("body", "status", "field"),
    [
        ({"alloy": {"designation": "BNi-2"}}, 422, "alloy.designation"),
        ({"alloy": {"designation": "none"}}, 422, "alloy.designation"),
        (
            {"alloy": {"designation": "Sn63Pb37"}, "residual_liquid_fraction": 0},
            422,
            "residual_liquid_fraction",
        ),
        ({"alloy": {"designation": "Sn63Pb37"}, "residual": 0.1}, 422, "residual"),
        ({}, 422, "alloy"),
    ],
)
def test_what_is_wrong_is_named(ask, body, status, field):
    answer = ask("POST", "/v1/solidification", json=body)
    assert answer.status_code == status
    assert field in [error["field"] for error in answer.json()["errors"]], answer.json()["errors"]
