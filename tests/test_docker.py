"""The Dockerfile, as far as it can be tried without an engine: its style, its copies, its commands."""

import os
import re
import shutil
import socket
import subprocess
import sys
import time
from pathlib import Path

import dockerfile
import pytest
import yaml

ROOT = Path(__file__).resolve().parent.parent
FILE = ROOT / "docker" / "Dockerfile"
STEPS = dockerfile.parse_file(str(FILE))


def steps(kind: str):
    return [step for step in STEPS if step.cmd.upper() == kind]


def copied_from_the_context() -> list[tuple[list[str], str]]:
    return [(list(step.value[:-1]), step.value[-1]) for step in steps("COPY") if not step.flags]


@pytest.fixture(scope="module")
def image_files(tmp_path_factory) -> Path:
    """Lay out what COPY brings into the build stage, and nothing else."""
    build = tmp_path_factory.mktemp("build")
    for sources, target in copied_from_the_context():
        for source in sources:
            goal = build / target / (source if target.endswith("/") else "")
            goal.parent.mkdir(parents=True, exist_ok=True)
            if (ROOT / source).is_dir():
                shutil.copytree(ROOT / source, goal, ignore=shutil.ignore_patterns("__pycache__"))
            else:
                shutil.copy(ROOT / source, goal)
    return build


def test_the_style_is_clean():
    linter = Path(sys.executable).with_name("hadolint")
    done = subprocess.run([linter, str(FILE)], capture_output=True, text=True, check=False)
    assert (done.returncode, done.stdout) == (0, "")


def test_two_stages_of_the_same_base_and_an_unprivileged_user():
    assert len({step.value[0] for step in steps("FROM")}) == 1
    assert len(steps("FROM")) == 2
    user, group = steps("USER")[-1].value[0].split(":")
    assert int(user) >= 10000
    assert int(group) >= 10000
    last_stage = STEPS[STEPS.index(steps("FROM")[-1]) :]
    assert [step.cmd.upper() for step in last_stage].index("USER") > 0


def test_the_entry_point_takes_signals_itself():
    (entry,) = steps("ENTRYPOINT")
    assert entry.json
    assert entry.value == ("/opt/meltband/bin/python", "-m", "service")
    assert steps("HEALTHCHECK")[0].value[0] == "CMD"


def test_the_lock_file_is_installed_before_the_code_and_with_hashes():
    runs = [" ".join(step.value) for step in steps("RUN")]
    locked = next(i for i, run in enumerate(runs) if "--require-hashes -r docker/requirements.lock" in run)
    own = next(i for i, run in enumerate(runs) if "--no-deps --no-build-isolation ." in run)
    assert locked < own


def test_what_is_copied_exists_and_is_let_through():
    ignored = (ROOT / ".dockerignore").read_text(encoding="utf-8").splitlines()
    rules = [line for line in ignored if line and not line.startswith("#")]
    assert rules[0] == "*"
    let_through = {line[1:] for line in rules if line.startswith("!")}
    copied = {source for sources, _ in copied_from_the_context() for source in sources}
    assert copied == let_through
    assert {name for name in copied if not (ROOT / name).exists()} == set()
    assert not any(name.startswith((".", "tests")) for name in copied)


def test_the_copied_files_build_a_wheel_that_holds_everything(image_files, tmp_path):
    build = [sys.executable, "-m", "pip", "wheel", "--quiet", "--no-deps", "--no-build-isolation"]
    subprocess.run([*build, "--wheel-dir", str(tmp_path), "."], cwd=image_files, check=True)
    (wheel,) = tmp_path.glob("meltband-*.whl")
    place = tmp_path / "unpacked"
    shutil.unpack_archive(wheel, place, "zip")
    for package in ("service", "diagrams"):
        there = {path.relative_to(place) for path in (place / package).rglob("*") if path.is_file()}
        here = {path.relative_to(ROOT) for path in (ROOT / package).rglob("*") if path.is_file()}
        assert there == {path for path in here if "__pycache__" not in path.parts}
    licences = {path.name for path in place.glob("meltband-*.dist-info/licenses/**/*") if path.is_file()}
    assert licences == {"LICENSE", "NOTICE"}


@pytest.fixture(scope="module")
def container_like(image_files):
    """Start the entry point as the image would: from the copied files alone, with its ENV."""
    with socket.socket() as taken:
        taken.bind(("127.0.0.1", 0))
        port = taken.getsockname()[1]
    environment = {"PATH": os.environ["PATH"], "PYTHONDONTWRITEBYTECODE": "1"}
    for step in steps("ENV"):
        environment |= dict(zip(step.value[::2], step.value[1::2], strict=True))
    environment["MELTBAND_PORT"] = str(port)
    (entry,) = steps("ENTRYPOINT")
    command = [sys.executable, *entry.value[1:]]  # same interpreter version, packages from the same lock
    process = subprocess.Popen(command, cwd=image_files, env=environment, stdout=subprocess.DEVNULL)
    yield port
    process.terminate()
    process.wait(timeout=30)


def test_the_health_check_turns_healthy(container_like):
    command = steps("HEALTHCHECK")[0].value[1:]
    assert command[:2] == ("/opt/meltband/bin/python", "-c")
    code = command[2]
    assert re.search(r"127\.0\.0\.1:8000/readyz", code)
    code = code.replace(":8000/", f":{container_like}/")
    deadline = time.monotonic() + 20
    while subprocess.run([sys.executable, "-c", code], capture_output=True, check=False).returncode != 0:
        assert time.monotonic() < deadline, "not healthy in 20 s"
        time.sleep(0.2)


def test_compose_opens_nothing_to_other_machines_and_takes_rights_away():
    compose = yaml.safe_load((ROOT / "docker" / "compose.yaml").read_text(encoding="utf-8"))
    (service,) = compose["services"].values()
    assert all(port.startswith("127.0.0.1:") for port in service["ports"])
    assert service["read_only"] is True
    assert service["cap_drop"] == ["ALL"]
    assert (ROOT / "docker" / service["build"]["context"] / service["build"]["dockerfile"]).is_file()
