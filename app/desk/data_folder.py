"""The folder in which a meet is kept: may it be served, and where do its copies go?"""

from __future__ import annotations

from contextlib import suppress
from pathlib import Path

from app.desk.keeper import CopyPlan
from app.store.backup import Copy, copies
from app.store.sound import damage
from app.store.trouble import trouble_of

MEET = "meet.db"


def copy_plan(folder: Path, place: Path | None, keep: int, minutes: float) -> CopyPlan:
    """Where copies go. A folder is made only beside what is there: not where a stick is missing."""
    found = (place.expanduser() if place else folder / "backups").resolve()
    with suppress(OSError):  # the keeper will say what is wrong with it, as often as it tries
        found.mkdir(exist_ok=True)
    return CopyPlan(found, keep, minutes)


def why_not_served(folder: Path, plan: CopyPlan) -> str:
    """Why the meet's file must not be served, and what to do; "" when it is whole, or there is none yet."""
    meet = folder / MEET
    if not meet.exists():
        return ""
    newest = _newest(plan.folder)
    broken = damage(meet)
    if not meet.stat().st_size and newest is not None:
        broken = "it is empty"  # without a copy it is a first start that was broken off
    if broken is None:
        return ""
    copy = f"the newest copy is {newest.file}" if newest else f"no copy was found in {plan.folder}"
    return (
        f"The data folder {folder} cannot be used: {MEET} is damaged ({broken}). It was left as it is. "
        f"Bring a copy back with “platewright restore COPY --data FOLDER”: {copy}. "
        "Choose another with --data FOLDER."
    )


def _newest(folder: Path) -> Copy | None:
    with suppress(OSError):
        return max(copies(folder), default=None)
    return None


def say_copies(plan: CopyPlan) -> list[str]:
    """Where copies go and how many are there, as it is said at start."""
    try:
        there = len(copies(plan.folder))
    except OSError as error:
        return [
            f"NO COPIES for now: {plan.folder} {trouble_of(error) or error}. It is tried again and again."
        ]
    return [
        f"Copies go to {plan.folder}, after each round and every {plan.minutes:g} minutes while something changes:",
        f"  {there} {'are' if there != 1 else 'is'} there, the last {plan.keep} are kept.",
    ]
