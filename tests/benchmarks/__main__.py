"""Prints every goal with what was measured: `python -m tests.benchmarks`."""

import io
import subprocess
import sys
import time
from collections.abc import Callable
from concurrent.futures import ProcessPoolExecutor
from pathlib import Path

import numpy as np
from fastapi import FastAPI

from diagrams.alloys import parse_alloy
from diagrams.equilibrium import Isotherm
from diagrams.files.assessments import read_assessment
from diagrams.files.catalog import catalog
from diagrams.questions.by_minimisation import ByMinimisation
from diagrams.questions.locate import locate
from diagrams.questions.locate_many import locate_many
from diagrams.questions.many_curve import follow
from diagrams.questions.many_place import place_many
from diagrams.questions.many_state import StateFinder
from diagrams.rebuild import build_text, buildable_ids
from diagrams.sections.build import build_section
from diagrams.sections.line import line_between
from diagrams.units import second_wt_to_x
from service.app import create_app
from service.routes.strict import StrictRoute
from service.schemas.base import AnswerModel, StrictModel
from service.settings import Settings
from tests.benchmarks.harness import Driver, ratio, slice_seconds
from tests.conftest import RunningServer
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
    driver = Driver(app_with_echo())
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
        once = slice_seconds(lambda one=one, x=x, t=t: locate_many(one, x, t), 3)
        worst = max(worst, once / 100_000)
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


def many() -> None:
    """Alloys of many elements: a curve, a tolerance, a section new and cached, freezing."""
    alloy = parse_alloy("Sn90Ag3Cu0.5Pb6.5")
    finder = StateFinder(place_many(alloy), alloy.composition_wt)
    assert finder.place.sample  # prepared once a service
    temperatures_c = np.linspace(150.0, 250.0, 300).tolist()

    def whole() -> list[float]:
        curve = follow(finder)
        return [curve.liquid_fraction(t) for t in temperatures_c]

    best = min(timed(whole) for _ in range(3))
    say("melting curve of a four-element alloy", f"{best:.2f} s", "< 0.3 s (300 temperatures)")
    sac = ByMinimisation(parse_alloy("SAC305"))
    spans = timed(lambda: (sac.kept(0.0), sac.needed(1.0)))
    say("SAC305 with tolerance, first time", f"{spans:.2f} s", "(none set)")
    line = line_between({"Sn": 96.5, "Ag": 3.0, "Cu": 0.5}, {"Cu": 100.0}, 5.0)
    assert line.sample  # likewise
    built = timed(lambda: build_section(line, "x", "a", "b"))
    say("a new section, SAC305 to 5 % copper", f"{built:.1f} s", "< 3 s")
    driver = Driver(app_with_echo())
    copper = {"composition_wt": {"Cu": 100}}
    body = {"from_alloy": {"designation": "SAC305"}, "to_alloy": copper, "to_share_max": 5}
    times, ours, base = ratio(driver.post("/v1/sections", body), driver.post("/echo", ECHO), 20, 200)
    say(
        "a cached section, POST /v1/sections",
        f"{times:.1f} echoes ({ours * 1e6:.0f}/{base * 1e6:.0f} us)",
        "<= 2.0 echoes",
    )


def profiles() -> None:
    """Twelve sensors of 10 000 samples, against numpy reading the numbers; growth with samples."""
    driver = Driver(app_with_echo())
    seconds = {}
    for samples in (10_000, 20_000, 40_000):
        times_s = np.linspace(0.0, 300.0, samples).round(4)
        run = np.interp(times_s, [0, 50, 140, 175, 190, 240, 300], [24, 118, 161, 212, 213, 120, 55]).round(2)
        columns = [(run + 0.01 * k).tolist() for k in range(12)]
        body = {
            "alloy": {"designation": "Sn63Pb37"},
            "superheat_c": 15,
            "upper_limits": [{"name": "part", "limit_c": 235}],
            "limits": {"rise_c_per_s": {"at_most": 3}, "time_above_solidus_s": {"at_least": 30}},
            "time_s": times_s.tolist(),
            "sensors": [{"name": f"s{k}", "temperature_c": column} for k, column in enumerate(columns)],
        }
        text = "\n".join(",".join(map(str, row)) for row in zip(times_s.tolist(), *columns, strict=True))
        times, ours, base = ratio(
            driver.post("/v1/profile-checks", body),
            lambda text=text: np.loadtxt(io.StringIO(text), delimiter=","),
            3,
            3,
            rounds=5,
        )
        seconds[samples] = ours
        if samples == 10_000:
            say(
                "12 sensors of 10 000 samples judged",
                f"{ours * 1e3:.0f} ms, {times:.1f} readings ({base * 1e3:.0f} ms)",
                "<= 60 ms, <= 10 readings",
            )
    say("the same with four times the samples", f"{seconds[40_000] / seconds[10_000]:.1f} times", "4 times")


def timed(work: Callable[[], object]) -> float:
    """CPU seconds of one call."""
    begin = time.process_time()
    work()
    return time.process_time() - begin


def app_with_echo() -> FastAPI:
    """The application with the floor in it."""
    app = create_app(Settings())
    app.router.routes.insert(0, StrictRoute("/echo", echo, methods=["POST"]))
    return app


def start() -> None:
    """Start to ready, and memory once ready."""
    seconds, memory = [], []
    for _ in range(5):
        begin = time.perf_counter()
        with RunningServer() as address:
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
        status = Path(f"/proc/{pid}/status").read_text(encoding="utf-8").splitlines()
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
    for part in (library, service, many, profiles, start, rebuild):
        part()
