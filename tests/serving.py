"""The real program in a process of its own: started on a free port, waited for, and its output kept."""

from __future__ import annotations

import io
import os
import signal
import socket
import subprocess
import sys
import time
from collections.abc import Iterator, Sequence
from contextlib import contextmanager, redirect_stderr, redirect_stdout
from dataclasses import dataclass
from pathlib import Path

import httpx2

from app.cli import main

PATIENCE_S = 60


def free_port() -> int:
    """A port of this machine that nobody listens on."""
    with socket.socket() as probe:
        probe.bind(("127.0.0.1", 0))
        return int(probe.getsockname()[1])


@dataclass(frozen=True)
class Done:
    """What a command left behind."""

    status: int
    out: str
    err: str


def platewright(*arguments: str, stdin: bytes = b"") -> Done:
    """Run a command to its end in a process of its own."""
    command = [sys.executable, "-m", "app.cli", *arguments]
    done = subprocess.run(command, input=stdin, capture_output=True, timeout=PATIENCE_S, check=False)
    return Done(done.returncode, done.stdout.decode(), done.stderr.decode())


def platewright_here(*arguments: str, stdin: str = "") -> Done:
    """The same within the test: for the many ways in which a command is refused."""
    out, err, status = io.StringIO(), io.StringIO(), 0
    before, sys.stdin = sys.stdin, io.StringIO(stdin)
    try:
        with redirect_stdout(out), redirect_stderr(err):
            main(arguments)
    except SystemExit as end:
        status = int(end.code or 0)
    finally:
        sys.stdin = before
    return Done(status, out.getvalue(), err.getvalue())


@dataclass
class Served:
    """A running server."""

    process: subprocess.Popen[bytes]
    url: str
    log: Path

    @property
    def said(self) -> str:
        """What it has printed so far."""
        return self.log.read_text(encoding="utf-8")

    def kill(self) -> None:
        """End it as a power cut does: no signal it could catch."""
        self.process.send_signal(signal.SIGKILL)
        self.process.wait(PATIENCE_S)


@contextmanager
def served(
    command: str, data: Path, port: int | None = None, options: Sequence[str] = ()
) -> Iterator[Served]:
    """``platewright demo`` or ``serve`` over a folder, for as long as the block lasts."""
    port = port or free_port()
    data.parent.mkdir(parents=True, exist_ok=True)
    log = data.parent / f"{data.name}-{port}.log"
    arguments = [sys.executable, "-m", "app.cli", command, "--port", str(port), "--data", str(data)]
    arguments += options
    with (
        log.open("wb") as out,
        subprocess.Popen(
            arguments, stdout=out, stderr=out, env=os.environ | {"PYTHONUNBUFFERED": "1"}
        ) as process,
    ):
        running = Served(process, f"http://127.0.0.1:{port}", log)
        try:
            _wait(running)
            yield running
        finally:
            process.terminate()


def _wait(running: Served) -> None:
    """Until it answers; with what it printed when it does not."""
    until = time.monotonic() + PATIENCE_S
    while time.monotonic() < until and running.process.poll() is None:
        try:
            httpx2.get(f"{running.url}/", timeout=5)
        except httpx2.TransportError:
            time.sleep(0.02)
        else:
            return
    raise AssertionError(f"the server does not answer:\n{running.said}")
