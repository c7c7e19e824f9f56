"""Disks that are too small or read-only: real ones in memory, where this machine lets us mount them."""

from __future__ import annotations

import subprocess
from collections.abc import Iterator
from contextlib import contextmanager
from pathlib import Path

import pytest


@contextmanager
def disk(place: Path, size: str = "2m") -> Iterator[Path]:
    """A disk of its own, in memory, for as long as the block lasts; the test is skipped where none can be made."""
    place.mkdir()
    try:
        done = subprocess.run(
            ["mount", "-t", "tmpfs", "-o", f"size={size}", "tmpfs", str(place)],
            capture_output=True,
            check=False,
        )
    except OSError as error:
        pytest.skip(f"no disk can be mounted here: {error}")
    if done.returncode:
        pytest.skip(f"no disk can be mounted here: {done.stderr.decode().strip()}")
    try:
        yield place
    finally:
        subprocess.run(["umount", "--lazy", str(place)], check=True)


def make_read_only(place: Path) -> None:
    """From now on nothing can be written on this disk."""
    subprocess.run(["mount", "-o", "remount,ro", str(place)], check=True)


def fill(place: Path, leave: int = 0) -> Path:
    """Fill the disk to the last block, then give ``leave`` bytes back; the file that fills it."""
    filler = place / "films"
    with filler.open("wb", buffering=0) as file:
        try:
            while file.write(bytes(4096)):
                pass
        except OSError:
            pass
        file.truncate(max(0, file.tell() - leave))
    return filler
