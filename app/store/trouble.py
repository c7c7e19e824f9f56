"""What a disk does to a file, in words: full, read-only, gone, damaged, busy."""

from __future__ import annotations

import errno
import sqlite3

FULL, READ_ONLY, GONE, DAMAGED, SILENT, BUSY = (
    "is full",
    "cannot be written to",
    "is gone",
    "is damaged",
    "does not answer",
    "is held by another program",
)

BY_ERRNO = {
    errno.ENOSPC: FULL,
    errno.EDQUOT: FULL,
    errno.EROFS: READ_ONLY,
    errno.EACCES: READ_ONLY,
    errno.EPERM: READ_ONLY,
    errno.ENOENT: GONE,
    errno.ENODEV: GONE,
    errno.ENOTDIR: "is no folder",
    errno.EIO: SILENT,
}
BY_SQLITE = {
    sqlite3.SQLITE_FULL: FULL,
    sqlite3.SQLITE_READONLY: READ_ONLY,
    sqlite3.SQLITE_PERM: READ_ONLY,
    sqlite3.SQLITE_CANTOPEN: "cannot be opened",
    sqlite3.SQLITE_CORRUPT: DAMAGED,
    sqlite3.SQLITE_NOTADB: DAMAGED,
    sqlite3.SQLITE_IOERR: SILENT,
    sqlite3.SQLITE_BUSY: BUSY,
    sqlite3.SQLITE_LOCKED: BUSY,
}


def trouble_of(error: BaseException) -> str | None:
    """What is wrong with the disk or the file, as the end of a sentence; None when it is something else.

    Takes Python's and SQLite's own errors, also inside SQLAlchemy's.
    """
    inner = getattr(error, "orig", None) or error
    if isinstance(inner, sqlite3.Error):
        return BY_SQLITE.get(getattr(inner, "sqlite_errorcode", 0) & 0xFF)  # the low byte: the rest is detail
    if isinstance(inner, OSError):
        return BY_ERRNO.get(inner.errno or 0)
    return None
