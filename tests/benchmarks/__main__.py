"""Prints every goal with what was measured: `python -m tests.benchmarks`."""

import subprocess
import sys
import time
from concurrent.futures import ProcessPoolExecutor

import numpy as np

from diagrams.equilibrium import Isotherm
from diagrams.files.assessments import read_assessment
from diagrams.files.catalog import catalog
from diagrams.questions.locate import locate
from diagrams.questions.locate_many import locate_many
from diagrams.rebuild import build_text, buildable_ids
from diagrams.units import second_wt_to_x
from service.app import create_app
from service.routes.strict import StrictRoute
from service.schemas.base import AnswerModel, StrictModel
from service.settings import Settings
from tests.benchmarks.harness import Driver, ratio, slice_seconds
from tests.conftest import running_server
from tests.diagrams.minimised import phases_at


class EchoQuestion(StrictModel):
    """Six fields in."""

    name: str
    a: float
    b: float
    c: float
    d: float
    words: list[str]


class EchoAnswer(AnswerModel):
    """Ten fields out."""

    name: str
    a: float
    b: float
    c: float
    d: float
    words: list[str]
    total: float
    count: int
    first: str
    last: str


async def echo(question: EchoQuestion) -> EchoAnswer:
    """The floor: parse, add up, answer."""
    return EchoAnswer(
        **question.model_dump(),
        total=question.a + question.b + question.c + question.d,
        count=len(question.words),
        first=question.words[0],
        last=question.words[-1],
    )


ECHO = {"name": "x", "a": 1.0, "b": 2.0, "c": 3.0, "d": 4.0, "words": ["one", "two"]}
QUESTION = {"alloy": {"designation": "Sn63Pb37"}, "temperature_c": 200.0}


def say(what: str, measured: str, goal: str) -> None:
    """One line a goal."""
    sys.stdout.write(f"{what:<58} {measured:<34} goal {goal}\n")
    sys.stdout.flush()


def service() -> None:
    """Requests against an echo of the same application."""
    app = create_app(Settings())
    app.router.routes.insert(0, StrictRoute("/echo", echo, methods=["POST"]))
    driver = Driver(app)
    floor = driver.post("/echo", ECHO)
    for name, work, calls in (
        ("POST /v1/equilibrium", driver.post("/v1/equilibrium", QUESTION), 200),
        ("GET /v1/equilibrium", driver.get("/v1/equilibrium", "alloy=Sn63Pb37&temperature_c=200"), 200),
        ("POST /v1/melting", driver.post("/v1/melting", {"alloy": {"designation": "Sn63Pb37"}}), 50),
        (
            "POST /v1/window",
            driver.post("/v1/window", {"alloy": {"designation": "Sn63Pb37"}, "target_liquid_fraction": 0.9}),
            50,
        ),
    ):
        times, ours, base = ratio(work, floor, calls, 200)
        goal = "<= 2.0 echoes" if name == "POST /v1/equilibrium" else "(none set)"
        say(name, f"{times:.2f} echoes ({ours * 1e6:.0f}/{base * 1e6:.0f} us)", goal)


def library() -> None:
    """Point, bulk, and polygon against minimisation."""
    diagram = catalog().get("pb-sn")
    system = read_assessment("pb-sn").system
    point = slice_seconds(lambda: locate(diagram, 40.0, 200.0), 20000)
    say("library point query, lead-tin", f"{point * 1e6:.1f} us", "<= 20 us")
    rng = np.random.default_rng(1)
    worst = 0.0
    for one in catalog().diagrams.values():
        x = rng.uniform(*one.composition_range_wt, 100_000)
        t = rng.uniform(*one.temperature_range_c, 100_000)
        locate_many(one, x[:10], t[:10])
        worst = max(worst, slice_seconds(lambda: locate_many(one, x, t), 3) / 100_000)  # noqa: B023  # run at once
    say("library bulk query, slowest diagram", f"{worst * 1e6:.2f} us a point", "<= 0.5 us a point")
    x40 = second_wt_to_x(40.0, "Pb", "Sn")
    times, minimised, read = ratio(
        lambda: phases_at(Isotherm(system, 473.15), x40), lambda: locate(diagram, 40.0, 200.0), 30, 3000
    )
    say(
        "minimisation over polygon, lead-tin",
        f"{times:.0f} times ({minimised * 1e3:.2f} ms/{read * 1e6:.1f} us)",
        ">= 300 times",
    )


def start() -> None:
    """Start to ready, and memory once ready."""
    seconds, memory = [], []
    for _ in range(5):
        begin = time.perf_counter()
        with running_server() as address:
            while True:
                answer = subprocess.run(
                    ["curl", "-s", "-o", "/dev/null", "-w", "%{http_code}", f"{address}/readyz"],
                    capture_output=True,
                    text=True,
                    check=False,
                )
                if answer.stdout == "200":
                    break
            seconds.append(time.perf_counter() - begin)
            memory.append(resident_mb(address))
    say("start to ready", f"{min(seconds):.2f} s best, {sorted(seconds)[2]:.2f} s median of 5", "< 2 s")
    say("memory of a worker once ready", f"{max(memory):.0f} MB", "< 130 MB")


def resident_mb(address: str) -> float:
    """Resident memory of the server listening at an address."""
    port = address.rsplit(":", 1)[1]
    pids = subprocess.run(
        ["pgrep", "-f", "service --port"], capture_output=True, text=True, check=False
    ).stdout.split()
    sizes = []
    for pid in pids:
        with open(f"/proc/{pid}/status", encoding="utf-8") as status:  # noqa: PTH123  # a kernel file
            sizes += [int(line.split()[1]) / 1024 for line in status if line.startswith("VmRSS")]
    assert sizes, f"no server found for port {port}"
    return max(sizes)


def rebuild() -> None:
    """All stored diagrams anew, in a throw-away process."""
    begin = time.perf_counter()
    with ProcessPoolExecutor(2) as pool:
        texts = list(pool.map(build_text, buildable_ids()))
    say(
        f"rebuild of all {len(texts)} diagrams", f"{time.perf_counter() - begin:.0f} s on two cores", "< 90 s"
    )


if __name__ == "__main__":
    for part in (library, service, start, rebuild):
        part()
