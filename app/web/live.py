"""The stream that tells a page which revision its platform has; the page then fetches its own fragment."""

from __future__ import annotations

import asyncio
import time
from collections.abc import AsyncIterable, AsyncIterator, Callable
from contextlib import suppress
from functools import partial

from fastapi import APIRouter, Depends
from fastapi.sse import EventSourceResponse, ServerSentEvent
from starlette.concurrency import run_in_threadpool

from app.desk.entry import Desk
from app.desk.hub import MemoryHub, platform_topic
from app.store.engine import reading
from app.store.picture import get
from app.store.tables import PlatformRow
from app.web.house import DeskDep, HubDep

MAX_AGE_S = 600  # then the browser reconnects and is told the current revision again
TICK_S = 3  # a page that hears nothing for longer than 5 s says that it is not connected

router = APIRouter()


def known_platform(platform_id: int, desk: DeskDep) -> None:
    """An unknown platform is an answer of 404, not a stream that breaks off."""
    current_revision(desk, platform_id)


@router.get(
    "/platforms/{platform_id}/events",
    response_class=EventSourceResponse,
    dependencies=[Depends(known_platform)],
)
async def platform_events(platform_id: int, desk: DeskDep, hub: HubDep) -> AsyncIterable[ServerSentEvent]:
    """Named messages: ``revision`` (its data the number) at once and at each change, ``tick`` between."""
    read = partial(current_revision, desk, platform_id)
    async for message in revisions(platform_topic(platform_id), read=read, hub=hub, monotonic=time.monotonic):
        yield message


def current_revision(desk: Desk, platform_id: int) -> int:
    """The platform's revision, read in a short session of its own."""
    with reading(desk.engine) as session:
        return get(session, PlatformRow, platform_id, "platform").revision


async def revisions(
    topic: str,
    *,
    read: Callable[[], int],
    hub: MemoryHub,
    monotonic: Callable[[], float],
    tick_s: float = TICK_S,
) -> AsyncIterator[ServerSentEvent]:
    """The loop itself, testable without HTTP: its reader, hub and clock are arguments."""
    seen: int | None = None
    end = monotonic() + MAX_AGE_S
    with hub.subscribe(topic) as changed:
        while monotonic() < end:
            changed.clear()  # before the read, so that a change during it is not lost
            revision = await run_in_threadpool(read)
            if revision != seen:
                seen = revision
                yield ServerSentEvent(event="revision", id=str(seen), raw_data=str(seen))
            else:
                yield ServerSentEvent(event="tick", raw_data=str(seen))
            with suppress(TimeoutError):
                await asyncio.wait_for(changed.wait(), tick_s)
