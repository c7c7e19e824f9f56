"""Plans too large to prove at once are bettered in the background, for what the crew has not been shown."""

from __future__ import annotations

import time
from collections.abc import Iterator
from dataclasses import dataclass, field, replace

import pytest

from app.desk.improve import Improver
from app.desk.lift_loading import keep_wish
from app.desk.wish import Wish
from app.loading.equipment import Access, Order
from app.planning import Budget
from tests.cast import ADA, BO, OLGA, SQUAT, Hall

NO_TIME = Budget(seconds=-1.0, monotonic=time.monotonic)  # over before it begins: the best plan at hand


@dataclass
class Listener:
    """Hears what is published."""

    heard: list[str] = field(default_factory=list)

    def publish(self, topic: str) -> None:
        """Note it."""
        self.heard.append(topic)


@pytest.fixture
def hurried(hall: Hall) -> Hall:
    """The ready meet with a lift in any order, and no time to prove a plan at the table."""
    keep_wish(hall.desk, 1, hall.lift_id(SQUAT), Wish(order=Order.ANY, access=Access.BOTH_ENDS), who=OLGA)
    return replace(hall, desk=replace(hall.desk, budget=NO_TIME))


@pytest.fixture
def improver(hurried: Hall) -> Iterator[Improver]:
    """An improver with all the time it needs."""
    made = Improver(hurried.desk.engine, Listener(), Budget())
    yield made
    made.close()


def proved(hall: Hall) -> bool:
    """Whether the stored plan says that it is proved best."""
    plan = hall.picture().plan
    return plan is not None and plan["proved"]


def test_an_entry_without_time_gets_a_right_plan_that_claims_no_proof(hurried: Hall) -> None:
    hurried.declare(BO, 1, "115")
    assert not proved(hurried)
    assert [step.stack is not None for step in hurried.board().steps] == [True] * len(hurried.board().steps)


def test_the_background_proves_the_plan_and_tells_the_pages(hurried: Hall, improver: Improver) -> None:
    hurried.declare(BO, 1, "115")
    before = hurried.picture()
    improver.newer(1, before.revision + 1, proved=True)  # nothing to do: another revision
    improver._newest[1] = before.revision
    assert improver.improve(1, before.revision) is True
    after = hurried.picture()
    assert proved(hurried)
    assert after.revision == before.revision + 1
    assert after.bar == before.bar


def test_an_older_revision_is_not_improved_over_a_newer_one(hurried: Hall, improver: Improver) -> None:
    hurried.declare(BO, 1, "115")
    old = hurried.picture().revision
    hurried.declare(ADA, 2, "105")
    plan = hurried.picture().plan
    improver._newest[1] = old
    assert improver.improve(1, old) is False
    assert hurried.picture().plan == plan


def test_a_proved_plan_is_left_alone(hall: Hall) -> None:
    hall.declare(BO, 1, "115")
    assert proved(hall)


def test_work_that_was_asked_for_is_done_by_the_thread(hurried: Hall) -> None:
    listener = Listener()
    improver = Improver(hurried.desk.engine, listener, Budget())
    hurried = replace(hurried, desk=replace(hurried.desk, improver=improver))
    hurried.declare(BO, 1, "115")
    improver._pool.shutdown(wait=True)
    assert proved(hurried)
    assert listener.heard == ["platform:1"]
