"""The stream of a platform's news: the state on connect, one message a revision, a tick in between, and an end."""

from __future__ import annotations

import asyncio
from collections.abc import Callable, Iterator

from fastapi.sse import ServerSentEvent

from app.desk.hub import MemoryHub
from app.web.live import MAX_AGE_S, revisions

TOPIC = "platform:1"


def said(message: ServerSentEvent) -> tuple[str | None, str | None, str | None]:
    """What a browser is told."""
    return message.event, message.id, message.raw_data


class Platform:
    """A platform whose revision the test sets, and a hub to tell of it."""

    def __init__(self) -> None:
        self.hub = MemoryHub(asyncio.get_running_loop())
        self.revision = 41

    def listen(self, monotonic: Callable[[], float] = lambda: 0.0, tick_s: float = 30):
        return revisions(TOPIC, read=lambda: self.revision, hub=self.hub, monotonic=monotonic, tick_s=tick_s)

    def enter(self) -> None:
        self.revision += 1
        self.hub.publish(TOPIC)

    @property
    def listeners(self) -> int:
        return len(self.hub._waiting.get(TOPIC, ()))


def test_the_present_revision_is_told_on_connect() -> None:
    async def story() -> None:
        stream = Platform().listen()
        assert said(await anext(stream)) == ("revision", "41", "41")
        await stream.aclose()

    asyncio.run(story())


def test_an_entry_is_told_at_once() -> None:
    async def story() -> None:
        platform = Platform()
        stream = platform.listen()
        await anext(stream)
        waiting = asyncio.ensure_future(anext(stream))
        await asyncio.sleep(0)
        platform.enter()
        assert said(await asyncio.wait_for(waiting, 10)) == ("revision", "42", "42")
        await stream.aclose()

    asyncio.run(story())


def test_entry_between_the_message_and_the_wait_is_not_lost() -> None:
    async def story() -> None:
        platform = Platform()
        stream = platform.listen()
        await anext(stream)
        platform.enter()  # nobody waits yet: the stream stands at its message
        assert said(await asyncio.wait_for(anext(stream), 10)) == ("revision", "42", "42")
        await stream.aclose()

    asyncio.run(story())


def test_several_entries_at_once_are_one_message_with_the_newest() -> None:
    async def story() -> None:
        platform = Platform()
        stream = platform.listen(tick_s=0)
        await anext(stream)
        for _ in range(3):
            platform.enter()
        assert said(await anext(stream)) == ("revision", "44", "44")
        assert [said(await anext(stream))[0] for _ in range(3)] == ["tick"] * 3
        await stream.aclose()

    asyncio.run(story())


def test_when_nothing_happens_a_tick_says_that_the_page_is_connected() -> None:
    async def story() -> None:
        platform = Platform()
        stream = platform.listen(tick_s=0)
        await anext(stream)
        assert said(await anext(stream)) == ("tick", None, "41")
        await stream.aclose()

    asyncio.run(story())


def test_news_of_another_platform_wake_nobody() -> None:
    async def story() -> None:
        platform = Platform()
        stream = platform.listen()
        await anext(stream)
        waiting = asyncio.ensure_future(anext(stream))
        await asyncio.sleep(0)
        platform.hub.publish("platform:2")
        for _ in range(10):
            await asyncio.sleep(0)
        assert not waiting.done()
        waiting.cancel()
        await asyncio.gather(waiting, return_exceptions=True)
        await stream.aclose()

    asyncio.run(story())


def test_page_that_leaves_is_forgotten() -> None:
    async def story() -> None:
        platform = Platform()
        streams = [platform.listen() for _ in range(3)]
        for stream in streams:
            await anext(stream)
        assert platform.listeners == 3
        for stream in streams:
            await stream.aclose()
        assert platform.listeners == 0

    asyncio.run(story())


def test_stream_ends_by_itself_so_that_the_browser_connects_anew() -> None:
    async def story() -> None:
        times: Iterator[float] = iter([0.0, 1.0, MAX_AGE_S - 1.0, float(MAX_AGE_S)])
        platform = Platform()
        stream = platform.listen(monotonic=lambda: next(times), tick_s=0)
        assert [said(message)[0] async for message in stream] == ["revision", "tick"]
        assert platform.listeners == 0

    asyncio.run(story())


def test_fault_while_reading_ends_the_stream_and_forgets_the_page() -> None:
    async def story() -> None:
        platform = Platform()

        def fail() -> int:
            raise OSError("the disk is gone")

        stream = revisions(TOPIC, read=fail, hub=platform.hub, monotonic=lambda: 0.0)
        told = await asyncio.gather(anext(stream), return_exceptions=True)
        assert [type(one) for one in told] == [OSError]
        assert platform.listeners == 0

    asyncio.run(story())
