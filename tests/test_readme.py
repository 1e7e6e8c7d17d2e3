"""The README's examples run as printed, against a real server, and say what the README says."""

import json
import re
import subprocess

import pytest

from service.app import create_app
from service.settings import Settings
from tests.conftest import ROOT

README = (ROOT / "README.md").read_text(encoding="utf-8")
EXAMPLES = re.findall(r"^curl .*$", README, flags=re.MULTILINE)


def run(command: str, server: str) -> dict[str, object]:
    done = subprocess.run(
        ["bash", "-c", command.replace("http://127.0.0.1:8000", server)],
        capture_output=True,
        text=True,
        check=True,
    )
    answer: dict[str, object] = json.loads(done.stdout)
    return answer


def test_there_are_three_examples() -> None:
    assert len(EXAMPLES) == 3


@pytest.mark.parametrize("command", EXAMPLES)
def test_example_answers_with_cautions(command: str, server: str) -> None:
    answer = run(command, server)
    assert "status" not in answer, answer  # no problem document
    assert answer["source"]
    assert answer["safety"]["notes"]  # type: ignore[index]  # a JSON object


def test_the_window_is_what_its_terms_say(server: str) -> None:
    answer = run(EXAMPLES[0], server)
    assert answer["feasible"] is True
    # 183 °C eutectic, at most 2 °C more for the tolerance, plus superheat 10 and sensor 1.5 (class 1, 375 °C)
    assert 194.5 <= float(answer["minimum_peak_c"]) <= 197.0  # type: ignore[arg-type]  # a JSON number
    assert answer["maximum_peak_c"] == 218.5


def test_first_paragraph_states_the_job() -> None:
    first = README.split("\n\n")[1]
    for word in ("temperature window", "joint", "phase diagram", "HTTP"):
        assert word in first.replace("\n", " ")


def test_every_address_named_exists() -> None:
    paths = create_app(Settings()).openapi()["paths"]
    for method, path in re.findall(r"`(GET|POST) (/v1/[a-z-]+)`", README):
        assert method.lower() in paths[path], path
