"""Long work in a thread, so that short questions need not wait for it."""

from collections.abc import Callable
from typing import TypeVar

import anyio.to_thread

Answered = TypeVar("Answered")


async def answered(quick: bool, work: Callable[[], Answered]) -> Answered:
    """Do quick work at once, which is cheaper than a thread, and other work in a thread."""
    return work() if quick else await anyio.to_thread.run_sync(work)
