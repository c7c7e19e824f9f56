"""Better plans in the background, for requests too large to prove while somebody waits.

An entry is answered with the best plan of a quarter of a second. If that was not proved best, the plan of
what the crew has not been shown is worked out again here with more time, off the event loop and outside any
transaction. A newer entry makes an older plan worthless: it is stopped, and what it found is dropped.
"""

from __future__ import annotations

import logging
import math
from collections.abc import Callable
from concurrent.futures import ThreadPoolExecutor
from dataclasses import replace
from threading import Lock
from typing import Any

from sqlalchemy import Engine

from app.desk.hub import Hub, platform_topic
from app.desk.planned import plan_belts, situation, stored_plan
from app.planning import Budget
from app.store.engine import CannotWrite, reading, writing
from app.store.picture import get, picture
from app.store.tables import PlatformRow

log = logging.getLogger("platewright.plan")


class Improver:
    """One thread that betters the newest plan of each platform."""

    def __init__(self, engine: Engine, hub: Hub, budget: Budget) -> None:
        self._engine, self._hub, self._budget = engine, hub, budget
        self._pool = ThreadPoolExecutor(max_workers=1, thread_name_prefix="improve")
        self._newest: dict[int, int] = {}
        self._lock = Lock()

    def newer(self, platform_id: int, revision: int, *, proved: bool) -> None:
        """The platform has a new revision: older work on it is over; work on this one if it is not proved."""
        with self._lock:
            self._newest[platform_id] = revision
        if not proved:
            self._pool.submit(self.improve, platform_id, revision)

    def improve(self, platform_id: int, revision: int) -> bool:
        """Work the plan of this revision out again; True if a better or proved one was stored."""
        if not self._current(platform_id, revision):
            return False
        with reading(self._engine) as session:
            now = picture(session, platform_id)
        here = situation(now, now.bar)
        if now.revision != revision or here is None:
            return False
        turns = here.turns
        budget = replace(self._budget, monotonic=self._watched(platform_id, revision))
        made = plan_belts(now, here.lift_id, here.starts, turns, budget)
        if made is None or not self._current(platform_id, revision):
            return False
        if not self._stored(platform_id, revision, stored_plan(made, turns)):
            return False
        self._hub.publish(platform_topic(platform_id))
        return True

    def _stored(self, platform_id: int, revision: int, plan: dict[str, Any] | None) -> bool:
        """Whether the plan was new and is on the disk; where that is full the crew goes on with the one it has."""
        try:
            with writing(self._engine) as session:
                row = get(session, PlatformRow, platform_id, "platform")
                if row.revision != revision or plan is None or row.plan == plan:
                    return False
                row.plan = plan
                row.revision += 1
                session.add(row)
        except CannotWrite as error:
            log.warning("A better plan was found and not kept: %s", error)
            return False
        return True

    def close(self) -> None:
        """Stop: what is being worked on is given up."""
        with self._lock:
            self._newest.clear()
        self._pool.shutdown(wait=True, cancel_futures=True)

    def _current(self, platform_id: int, revision: int) -> bool:
        with self._lock:
            return self._newest.get(platform_id) == revision

    def _watched(self, platform_id: int, revision: int) -> Callable[[], float]:
        """The budget's clock, which jumps to the end of time once a newer entry has come."""
        clock = self._budget.monotonic

        def monotonic() -> float:
            if not self._current(platform_id, revision):
                return math.inf
            return clock() if clock else 0.0

        return monotonic
