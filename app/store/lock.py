"""One program at a time in a data folder: a lock that the system itself lets go of when the program dies."""

from __future__ import annotations

from collections.abc import Iterator
from contextlib import contextmanager
from pathlib import Path

from filelock import FileLock, Timeout

NAME = "in-use.lock"


class InUse(Exception):
    """Another program has the folder."""


@contextmanager
def folder_lock(folder: Path) -> Iterator[None]:
    """Hold the folder for as long as the block lasts.

    Raises :class:`InUse` at once when another program holds it, and ``OSError`` where no lock can be made. A lock
    file that was left behind by a crash is no obstacle: what counts is the system's lock on it.
    """
    # No falling back to a lock that is only a file's existence: that one would outlive a killed server.
    lock = FileLock(folder / NAME, blocking=False, fallback_to_soft=False)
    try:
        lock.acquire()
    except Timeout:
        raise InUse(
            f"The data folder {folder} is in use by another Platewright. Stop that one first, with Ctrl+C "
            "where it was started; or choose another folder with --data FOLDER."
        ) from None
    try:
        yield
    finally:
        lock.release()
