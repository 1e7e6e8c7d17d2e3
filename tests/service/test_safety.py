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


def test_torches_acid_flux_and_nitrogen_are_spoken_of_where_they_are_used():
    brazing = " ".join(note.text for note in safety_for(["Ag", "Cu"], "braze").notes)
    assert "flashback" in brazing
    assert "oil and grease off everything that carries oxygen" in brazing
    soldering = " ".join(note.text for note in safety_for(["Sn"], "solder").notes)
    assert "hydrogen chloride" in soldering
    assert "Nitrogen of a reflow oven" in soldering
    assert "acetylene" not in soldering


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
        ("/v1/melting?alloy=sn40pb", b"", {"Sn", "Pb"}),
        ("/v1/melting?alloy=SN-40PB", b"", {"Sn", "Pb"}),
        ("/v1/melting?alloy=ag3cu0.5zn", b"", {"Ag", "Cu", "Zn"}),
        ("/v1/melting?alloy=101", b"", {"Sn", "Pb"}),
        ("/v1/equilibria?", b'{"diagram": "ag-pb", "second_wt": [NaN]}', {"Ag", "Pb"}),
        ("/v1/equilibria?", b'{"diagram": "AG_PB"}', {"Pb"}),
        ("/v1/window?", b'{"earlier_joints": [{"alloy": {"designation": 101}}]', {"Sn", "Pb"}),
        ("/v1/window?", b'{"aloy": "an old leaded joint, cadmium plated"}', {"Pb", "Cd"}),
        ("/v1/window?", rb'{"alloy": {"composition_wt": {"\u0050\u0062": 1, "Sn": 99}}}', {"Sn", "Pb"}),
        ("/v1/window?", '{"Sn": 1, "Pb": 2}'.encode("utf-16"), {"Sn", "Pb"}),
        ("/v1/window?", b'{"x": "%s", "y": "pb"}' % (b"-" * 1_000_000), {"Pb"}),
        ("/v1/problems?", b'{"name": "\xff\xfe"}', set()),
        ("/v1/equilibrium?temperature_c=200&alloy=", b'{"name": "inside a capacitor, 20 pins"}', set()),
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


@pytest.mark.parametrize(
    "alloy", ["SAC305", "Ag72Cu", "BNi-2", "BAg-8", "Zn95Al", "Pb37Sn", "CuP 182", "Sn95.5Ag3.8Cu"]
)
def test_safety_alone_takes_the_process_as_the_answers_do(ask, alloy):
    alone = ask("GET", "/v1/safety", params={"alloy": alloy}).json()["safety"]
    beside = ask("GET", "/v1/melting", params={"alloy": alloy}).json()["safety"]
    flux = {"rosin flux fume", "fluoride and borate flux"}
    fluxes = [{note["topic"] for note in safety["notes"]} & flux for safety in (alone, beside)]
    assert fluxes[0] == fluxes[1]
    assert len(fluxes[0]) == 1


def test_safety_alone_for_what_no_data_cover_warns_of_both_processes(ask):
    notes = ask("GET", "/v1/safety", params={"alloy": "Bi50Cd"}).json()["safety"]["notes"]
    assert {"cadmium", "rosin flux fume", "fluoride and borate flux"} <= {note["topic"] for note in notes}


def test_safety_alone_for_a_diagram(ask):
    answer = ask("GET", "/v1/safety", params={"diagram": "ag-pb", "process": "solder"})
    notes = {note["topic"] for note in answer.json()["safety"]["notes"]}
    assert {"lead", "silver fume"} <= notes
    assert "fluoride and borate flux" not in notes
    unknown = ask("GET", "/v1/safety", params={"diagram": "pb-xx"})
    assert (unknown.status_code, unknown.json()["errors"][0]["field"]) == (404, "diagram")


def test_safety_alone_in_general(ask):
    assert ask("GET", "/v1/safety").json() == {"safety": safety_for(()).model_dump()}
