"""``platewright demo``, ``serve``, ``check``, ``restore``, ``plan``: what is typed at a terminal."""

from __future__ import annotations

import argparse
import logging
import socket
import sqlite3
import sys
from collections.abc import Callable, Sequence
from contextlib import ExitStack
from pathlib import Path

import uvicorn
from alembic.util.exc import CommandError
from sqlalchemy.exc import SQLAlchemyError

from app.desk.check_data import check_file
from app.desk.data_folder import MEET, copy_plan, say_copies, why_not_served
from app.desk.demo import make_demo
from app.desk.entry import Desk
from app.desk.errors import DeskError
from app.desk.hub import QuietHub
from app.desk.keeper import CopyPlan
from app.desk.plan_text import MEMORY_MB, SECONDS, answers, watched
from app.desk.restore import CannotRestore, restore
from app.desk.roster import meet_ids, pictures
from app.store.engine import CannotWrite, make_engine, reading
from app.store.lock import InUse, folder_lock
from app.store.migrate import upgrade
from app.store.trouble import trouble_of
from app.web.house import PROJECT, frame
from app.web.main import create_app, utc_now

REAL = "platewright-data"  # the folder of a real meet, at home
GRACE_S = 2  # an open stream would keep the server alive; after this it is ended


def main(argv: Sequence[str] | None = None) -> None:
    """Run one command; exit status 2 when it could not be done as asked."""
    chosen = _parser().parse_args(argv)
    sys.exit(chosen.run(chosen))


def _parser() -> argparse.ArgumentParser:
    parser = argparse.ArgumentParser(
        prog="platewright",
        description="Sequences the plates on a lifting-meet day: what comes off, what goes on.",
    )
    commands = parser.add_subparsers(required=True, metavar="COMMAND")
    demo = commands.add_parser("demo", help="set up an invented meet and serve it")
    _serving(demo, "platewright-demo")
    demo.set_defaults(run=_demo)
    serve = commands.add_parser("serve", help="serve a real meet from a data folder")
    _serving(serve, REAL)
    serve.set_defaults(run=_serve)
    check = commands.add_parser(
        "check", help="see that a meet's file is whole; also while it is being served"
    )
    _data(check, REAL)
    check.set_defaults(run=_check)
    back = commands.add_parser(
        "restore", help="put a copy in the meet's place; the file that was there is kept"
    )
    back.add_argument("copy", type=Path, metavar="COPY", help="one of the copies that the server makes")
    _data(back, REAL)
    back.set_defaults(run=_restore)
    plan = commands.add_parser("plan", help="answer a planner's request: one JSON object, or one a line")
    plan.add_argument("file", metavar="FILE", help="the request, or - for standard input")
    _limits(plan)
    plan.set_defaults(run=_plan)
    return parser


def _serving(parser: argparse.ArgumentParser, folder: str) -> None:
    parser.add_argument(
        "--host", default="127.0.0.1", help="the address to listen on (default: this machine only)"
    )
    parser.add_argument("--port", type=int, default=8420, help="the port (default: 8420)")
    _data(parser, folder)
    parser.add_argument(
        "--backup",
        type=Path,
        metavar="FOLDER",
        help="where copies of the meet go, best on a stick (default: backups, in the data folder)",
    )
    parser.add_argument(
        "--keep", type=_positive(int), default=48, help="how many copies are kept (default: 48)"
    )
    parser.add_argument(
        "--backup-minutes",
        type=_positive(float),
        default=3.0,
        metavar="MINUTES",
        help="a copy is made this often while something changes, and after each round (default: 3)",
    )
    _limits(parser)


def _positive(kind: Callable[[str], float]) -> Callable[[str], float]:
    """A number above 0, said so when it is not."""

    def read(text: str) -> float:
        try:
            number = kind(text)
        except ValueError:
            number = 0
        if not 0 < number < 1_000_000:
            raise argparse.ArgumentTypeError(f"{text} is no number above 0")
        return number

    return read


def _data(parser: argparse.ArgumentParser, folder: str) -> None:
    parser.add_argument(
        "--data",
        type=Path,
        default=Path.home() / folder,
        metavar="FOLDER",
        help=f"where the meet is kept (~/{folder})",
    )


def _limits(parser: argparse.ArgumentParser) -> None:
    parser.add_argument(
        "--plan-seconds",
        type=float,
        default=SECONDS,
        help=f"the longest a plan may take (default: {SECONDS:g})",
    )
    parser.add_argument(
        "--plan-memory",
        type=int,
        default=MEMORY_MB,
        metavar="MB",
        help=f"and the most memory (default: {MEMORY_MB} MB)",
    )


def _demo(chosen: argparse.Namespace) -> int:
    return _run(chosen, demo=True)


def _serve(chosen: argparse.Namespace) -> int:
    return _run(chosen, demo=False)


def _run(chosen: argparse.Namespace, *, demo: bool) -> int:
    trouble = _trouble_with_port(chosen.host, chosen.port)
    if trouble:
        return _fail(trouble)
    folder = chosen.data.expanduser().resolve()
    with ExitStack() as held:
        try:
            folder.mkdir(parents=True, exist_ok=True)
            held.enter_context(folder_lock(folder))
            plan = copy_plan(folder, chosen.backup, int(chosen.keep), chosen.backup_minutes)
            broken = why_not_served(folder, plan)
            if broken:
                return _fail(broken)
            url = f"sqlite:///{folder / MEET}"
            _make_ready(chosen, url, folder, plan, demo=demo)
        except InUse as other:
            return _fail(str(other))
        except (OSError, sqlite3.Error, SQLAlchemyError, CommandError, CannotWrite, DeskError) as error:
            return _fail(
                f"The data folder {chosen.data} cannot be used: {_why(error)}. Choose another with --data FOLDER."
            )
        logging.getLogger("alembic").setLevel(logging.WARNING)
        logging.basicConfig(level=logging.INFO, format="%(asctime)s %(name)s %(levelname)s %(message)s")
        uvicorn.run(
            create_app(url, plan_budget=watched(chosen.plan_seconds, chosen.plan_memory), copy_plan=plan),
            host=chosen.host,
            port=chosen.port,
            timeout_graceful_shutdown=GRACE_S,
            log_level="warning",
        )
    return 0


def _make_ready(chosen: argparse.Namespace, url: str, folder: Path, plan: CopyPlan, *, demo: bool) -> None:
    """Bring the folder's meet up to date, and say where everything is."""
    upgrade(url)
    desk = Desk(make_engine(url), QuietHub(), utc_now)
    if demo:
        make_demo(desk, PROJECT / "demo_meet")
    _say_addresses(desk, chosen.host, chosen.port, folder, plan)
    desk.engine.dispose()


def _check(chosen: argparse.Namespace) -> int:
    database = chosen.data.expanduser().resolve() / MEET
    if not database.exists():
        return _fail(f"There is no meet in {chosen.data}: nothing was checked.")
    try:
        report = check_file(database)
    except OSError as error:
        return _fail(f"{database} cannot be read: it {trouble_of(error) or error}.")
    for sentence in report.good:
        print(sentence)
    if not report.wrong:
        print(f"{database} is in order.")
        return 0
    return _fail("\n".join([f"{database} is NOT in order.", *report.wrong]))


def _restore(chosen: argparse.Namespace) -> int:
    folder = chosen.data.expanduser().resolve()
    try:
        folder.mkdir(parents=True, exist_ok=True)
        with folder_lock(folder):
            said = restore(chosen.copy.expanduser().resolve(), folder, utc_now())
    except (InUse, CannotRestore) as refused:
        return _fail(str(refused))
    except (OSError, sqlite3.Error, SQLAlchemyError) as error:
        return _fail(f"Not restored: {chosen.copy} could not be brought into {folder}: {_why(error)}.")
    print("\n".join(said))
    return 0


def _why(error: Exception) -> str:
    """The reason in one line, without the statement that failed."""
    if isinstance(error, CommandError):
        return "its meet was made by another version of Platewright"
    trouble = trouble_of(error)
    if trouble is not None:
        return f"it {trouble}"
    return str(getattr(error, "orig", None) or error).partition("\n")[0].rstrip(".")


def _trouble_with_port(host: str, port: int) -> str:
    """Why this address cannot be listened on; "" when it can."""
    if not 0 < port < 65536:
        return f"{port} is not a port. Choose one from 1024 to 65535 with --port."
    family = socket.AF_INET6 if ":" in host else socket.AF_INET
    with socket.socket(family) as probe:
        probe.setsockopt(socket.SOL_SOCKET, socket.SO_REUSEADDR, 1)
        try:
            probe.bind((host, port))
        except OSError as error:
            if error.errno in (98, 48, 10048):
                return (
                    f"Port {port} is taken: another program, perhaps another Platewright, listens there. "
                    f"Stop it, or choose another port: --port {port + 1}."
                )
            return f"Cannot listen on {host}, port {port}: {error.strerror}. Choose others with --host and --port."
    return ""


def _say_addresses(desk: Desk, host: str, port: int, folder: Path, plan: CopyPlan) -> None:
    base = f"http://{'127.0.0.1' if host in ('0.0.0.0', '::') else host}:{port}"  # noqa: S104 - compared, not bound
    lines = [f"Platewright keeps its meet in {folder}", f"  Start           {base}/"]
    with reading(desk.engine) as session:
        for meet_id in meet_ids(session):
            for now in pictures(session, meet_id):
                lines.append(f"  {now.meet}, {now.platform}")
                links = frame(now.meet, "", meet_id, now.platform_id).links
                lines += [f"    {link.text:<13} {base}{link.href}" for link in links]
    lines += say_copies(plan)
    lines.append("Stop with Ctrl+C. Nothing is lost: everything entered is on the disk already.")
    print("\n".join(lines), flush=True)


def _plan(chosen: argparse.Namespace) -> int:
    try:
        text = sys.stdin.read() if chosen.file == "-" else Path(chosen.file).read_text(encoding="utf-8")
    except (OSError, UnicodeDecodeError) as error:
        return _fail(f"{chosen.file} cannot be read: {error}")
    status = 0
    budget = watched(chosen.plan_seconds, chosen.plan_memory)
    for line, good in answers(text, budget):
        print(line, flush=True)
        status = status if good else 2
    return status


def _fail(sentence: str) -> int:
    print(sentence, file=sys.stderr)
    return 2


if __name__ == "__main__":
    main()
