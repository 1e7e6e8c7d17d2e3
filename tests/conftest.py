"""What the tests share: the application in process, and a real server on a free port."""

import asyncio
import os
import re
import subprocess
import sys
from collections.abc import Callable, Iterator
from pathlib import Path

import httpx
import pytest
from fastapi import FastAPI
from hypothesis import settings as hypothesis_settings

from service.app import create_app
from service.settings import Settings

ROOT = Path(__file__).resolve().parent.parent
hypothesis_settings.register_profile("steady", derandomize=True, deadline=None)
hypothesis_settings.load_profile("steady")

Ask = Callable[..., httpx.Response]


def asker(app: FastAPI) -> Ask:
    """Return a function that asks the application in process: `ask("GET", "/livez")`."""

    def ask(method: str, path: str, **more: object) -> httpx.Response:
        async def exchange() -> httpx.Response:
            transport = httpx.ASGITransport(app, raise_app_exceptions=False)
            async with httpx.AsyncClient(transport=transport, base_url="http://meltband") as client:
                return await client.request(method, path, **more)

        return asyncio.run(exchange())

    return ask


@pytest.fixture(scope="session")
def app() -> FastAPI:
    return create_app(Settings())


@pytest.fixture(scope="session")
def ask(app: FastAPI) -> Ask:
    return asker(app)


@pytest.fixture(scope="session")
def server() -> Iterator[str]:
    """Start `python -m service` on a free port and return its address."""
    with RunningServer() as address:
        yield address


class RunningServer:
    """Starts `python -m service --port 0` with further arguments; stops it with SIGTERM.

    As a statement: `with RunningServer("--root-path", "/x") as address`.
    """

    def __init__(self, *arguments: str) -> None:
        self.arguments = arguments

    def __enter__(self) -> str:
        environment = {k: v for k, v in os.environ.items() if not k.startswith("MELTBAND_")}
        self.process = subprocess.Popen(
            [sys.executable, "-m", "service", "--port", "0", *self.arguments],
            cwd=ROOT,
            env=environment,
            stdout=subprocess.PIPE,
            stderr=subprocess.STDOUT,
            text=True,
        )
        self.lines: list[str] = []
        assert self.process.stdout is not None
        for line in self.process.stdout:
            self.lines.append(line)
            if found := re.search(r"running on (http://[0-9.:]+)", line):
                return found[1]
        raise AssertionError("the server did not start:\n" + "".join(self.lines))

    def __exit__(self, *_: object) -> None:
        self.process.terminate()
        rest, _ = self.process.communicate(timeout=30)
        self.lines += rest.splitlines(keepends=True)
        self.exit_code = self.process.returncode
