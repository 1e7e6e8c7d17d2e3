"""Interleaved slices of CPU time, so that a noisy machine moves both sides of a ratio alike."""

import asyncio
import json
import statistics
import time
from collections.abc import Awaitable, Callable
from typing import Any

ROUNDS = 15

Work = Callable[[], object]


def slice_seconds(work: Work, calls: int) -> float:
    """CPU seconds a call, over one slice."""
    start = time.process_time()
    for _ in range(calls):
        work()
    return (time.process_time() - start) / calls


def ratio(
    work: Work, floor: Work, calls: int, floor_calls: int, rounds: int = ROUNDS
) -> tuple[float, float, float]:
    """Median ratio of work to floor over interleaved rounds, with the median seconds of each."""
    work(), floor()
    ratios, ours, floors = [], [], []
    for _ in range(rounds):
        a, b = slice_seconds(work, calls), slice_seconds(floor, floor_calls)
        ratios.append(a / b)
        ours.append(a)
        floors.append(b)
    return statistics.median(ratios), statistics.median(ours), statistics.median(floors)


class Driver:
    """Asks an ASGI application in process, without sockets and without a client library."""

    def __init__(self, app: Callable[..., Awaitable[None]]) -> None:
        self.app = app
        self.loop = asyncio.new_event_loop()

    def post(self, path: str, body: object) -> Work:
        """A function that sends this POST once and checks for 200."""
        payload = json.dumps(body).encode()
        return self._work("POST", path, b"", payload, [(b"content-type", b"application/json")])

    def get(self, path: str, query: str = "") -> Work:
        """A function that sends this GET once and checks for 200."""
        return self._work("GET", path, query.encode(), b"", [])

    def _work(self, method: str, path: str, query: bytes, payload: bytes, headers: list[Any]) -> Work:
        scope = {
            "type": "http",
            "asgi": {"version": "3.0", "spec_version": "2.3"},
            "http_version": "1.1",
            "method": method,
            "scheme": "http",
            "path": path,
            "raw_path": path.encode(),
            "query_string": query,
            "root_path": "",
            "headers": [(b"host", b"meltband"), *headers, (b"content-length", str(len(payload)).encode())],
            "client": ("127.0.0.1", 1),
            "server": ("127.0.0.1", 80),
        }

        async def exchange() -> None:
            async def receive() -> dict[str, Any]:
                return {"type": "http.request", "body": payload, "more_body": False}

            async def send(message: dict[str, Any]) -> None:
                if message["type"] == "http.response.start" and message["status"] != 200:
                    raise AssertionError(f"{method} {path} answered {message['status']}")

            await self.app(dict(scope), receive, send)

        return lambda: self.loop.run_until_complete(exchange())
