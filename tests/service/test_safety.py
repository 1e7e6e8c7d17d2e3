import pytest

from service.mentions import elements_mentioned
from service.safety import safety_for


def topics(*arguments, **named):
    return {note.topic for note in safety_for(*arguments, **named).notes}


def test_nothing_asked_about_still_warns_of_fume_and_points_to_local_rules():
    safety = safety_for(())
    assert {"fume", "burns and hot work", "molten-bath eruption"} <= {note.topic for note in safety.notes}
    assert "Local rules and licensed practice decide" in safety.reminder
    assert {rule.region for rule in safety.regulations} >= {"US", "EU", "UK", "elsewhere"}
    assert not any("lead" in topic or "flux" in topic for topic in topics(()))


@pytest.mark.parametrize("process", [None, "solder", "braze"])
@pytest.mark.parametrize("temperature_c", [None, -40.0, 183.0, 1500.0])
def test_lead_is_always_warned_of(process, temperature_c):
    assert "lead" in topics(["Sn", "Pb"], process, temperature_c)


def test_process_chooses_the_flux():
    assert "rosin flux fume" in topics(["Sn"], "solder")
    assert "fluoride and borate flux" not in topics(["Sn"], "solder")
    assert "rosin flux fume" not in topics(["Ag", "Cu"], "braze")
    assert {"fluoride and borate flux", "flammable furnace gas"} <= topics(["Ag", "Cu"], "braze")
    assert {"rosin flux fume", "fluoride and borate flux"} <= topics(["Sn"])


@pytest.mark.parametrize(
    ("temperature_c", "warned"), [(None, False), (906.9, False), (907.0, True), (1200, True)]
)
def test_boiling_zinc_is_named_from_its_boiling_point_on(temperature_c, warned):
    assert ("zinc boiling" in topics(["Cu", "Zn"], "braze", temperature_c)) is warned


def test_same_question_gives_the_same_object():
    assert safety_for(frozenset({"Pb", "Sn"}), "solder", 200.0) is safety_for(["Sn", "Pb"], "solder", 300.0)


@pytest.mark.parametrize(
    ("address", "body", "elements"),
    [
        ("/v1/melting?alloy=Sn63Pb37", b"", {"Sn", "Pb"}),
        ("/v1/diagrams/pb-sn/figure?", b"", {"Pb", "Sn"}),
        ("/v1/melting?", b'{"alloy": {"composition_wt": {"Cd": 1, "Zn": 99}}', {"Cd", "Zn"}),
        ("/v1/melting?", b'{"alloy": {"designation": "bag1"}}', {"Ag", "Cd", "Cu", "Zn"}),
        ("/v1/fillers/BAg-1?", b"", {"Ag", "Cd", "Cu", "Zn"}),
        ("/v1/melting?temperature_c=5&alloy=b%20ag%201", b"", {"Ag", "Cd", "Cu", "Zn"}),
        ("/v1/problems?", b'{"name": "\xff\xfe"}', set()),
    ],
)
def test_elements_are_found_in_what_was_asked(address, body, elements):
    assert elements_mentioned(address, body) >= elements
    if not elements:
        assert not elements_mentioned(address, body)


def test_safety_alone_for_an_alloy(ask):
    answer = ask("GET", "/v1/safety", params={"alloy": "Sn63Pb37", "process": "solder"})
    assert answer.status_code == 200
    assert "lead" in [note["topic"] for note in answer.json()["safety"]["notes"]]


def test_safety_alone_in_general(ask):
    assert ask("GET", "/v1/safety").json() == {"safety": safety_for(()).model_dump()}
