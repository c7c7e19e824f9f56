"""Who is told that a platform has a new revision. Always after the commit, so that a listener reads at once."""

from __future__ import annotations

import asyncio
from collections import defaultdict
from collections.abc import Iterator
from contextlib import contextmanager
from typing import Protocol


class Hub(Protocol):
    """Where the desk puts its news."""

    def publish(self, topic: str) -> None:
        """Say that ``topic`` has changed."""


class QuietHub:
    """For work with no page open: the command line, and setting a meet up."""

    def publish(self, topic: str) -> None:
        """Nobody listens."""


class MemoryHub:
    """Wakes the streams of one process when a topic has changed."""

    def __init__(self, loop: asyncio.AbstractEventLoop) -> None:
        self._loop = loop
        self._waiting: defaultdict[str, set[asyncio.Event]] = defaultdict(set)

    @contextmanager
    def subscribe(self, topic: str) -> Iterator[asyncio.Event]:
        """An event that is set at each publication, for as long as the block lasts."""
        changed = asyncio.Event()
        self._waiting[topic].add(changed)
        try:
            yield changed
        finally:
            self._waiting[topic].discard(changed)
            if not self._waiting[topic]:
                del self._waiting[topic]

    def publish(self, topic: str) -> None:
        """Safe from any thread: plain routes run in a thread pool."""
        self._loop.call_soon_threadsafe(self._wake, topic)

    def _wake(self, topic: str) -> None:
        for changed in self._waiting.get(topic, ()):
            changed.set()


def platform_topic(platform_id: int) -> str:
    """The topic of one platform's revisions."""
    return f"platform:{platform_id}"
