"""Starts the service by a given command, asks it whether it is ready, and ends it again.

    python -m tests.ask_started FOLDER COMMAND

The continuous checks use it for what the suite cannot try from within its own environment.
"""

import json
import os
import re
import signal
import subprocess
import sys
import urllib.request

LONGEST_S = 300


def ask_started(folder: str, command: str) -> None:
    """Run the shell command in the folder on a free port; raise if it does not answer as it should."""
    process = subprocess.Popen(
        ["bash", "-c", command],
        cwd=folder,
        env=os.environ | {"MELTBAND_PORT": "0"},
        stdout=subprocess.PIPE,
        stderr=subprocess.STDOUT,
        text=True,
        start_new_session=True,
    )
    signal.alarm(LONGEST_S)
    try:
        assert process.stdout is not None
        for line in process.stdout:
            sys.stdout.write(line)
            if found := re.search(r"running on (http://127\.0\.0\.1:[0-9]+)", line):
                ask(found[1])
                return
        raise SystemExit("the service did not start")
    finally:
        signal.alarm(0)
        os.killpg(process.pid, signal.SIGTERM)
        process.communicate(timeout=30)


def ask(address: str) -> None:
    """Ask for readiness, the version, the docs page and every file it loads."""
    with urllib.request.urlopen(f"{address}/readyz", timeout=10) as answer:
        assert json.load(answer)["status"] == "ready"
    with urllib.request.urlopen(f"{address}/version", timeout=10) as answer:
        version = json.load(answer)
        assert version["editions"]
    with urllib.request.urlopen(f"{address}/docs", timeout=10) as answer:
        page = answer.read().decode()
    files = re.findall(r'(?:href|src)="(static/[^"]+)"', page)
    assert len(files) == 5
    for file in files:
        with urllib.request.urlopen(f"{address}/{file}", timeout=10) as answer:
            assert answer.read()
    sys.stdout.write(f"ready: version {version['version']}, {len(version['editions'])} editions\n")


if __name__ == "__main__":
    ask_started(sys.argv[1], sys.argv[2])
