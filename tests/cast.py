"""The cast: one small invented meet that every test knows, and a ready platform to try things on.

**Harbour Cup**, in kg, on one platform, *Hall*, set up from the kit "Bar lifts, kg steel plates" (bar 20 kg, collars
2.5 kg each, so 25 kg with no plate on; steps of 2.5 kg). It lifts Squat, Bench press and Deadlift.

=============  ===  ========  =====  ===========  ========
lifter         lot  flight    squat  bench press  deadlift
=============  ===  ========  =====  ===========  ========
Ada Brook        3  Flight A   100      60          120
Bo Carver        1  Flight A   110      70          130
Cleo Dahl        2  Flight A   110      65          140
Dov Ekman        4  Flight B   150     100          180
Etta Frost       5  Flight B   160     110          190
=============  ===  ========  =====  ===========  ========

Flight A is on, lifting Squat, and the crew has been shown the first change: 100 kg for Ada. Bo and Cleo want the same
weight: Bo has the lower lot and lifts first. Nobody else has declared anything.

The second platform, where a test asks for one, is *Stage*, with belt and chain: Flight C (Livia Corran, lot 21, and
Kofi Lund, lot 28) opens the muscle-up with 0 and 10 kg and the pull-up with 18.75 and 43.75.

**Wanda** writes at the table, **Luc** loads, **Olga** organises, **Otto** sits at another table and is always
the other one in a race.

Everything is made through the use cases, on a real SQLite file; nothing is set that this page does not say.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from datetime import UTC, datetime, timedelta
from fractions import Fraction
from pathlib import Path

from sqlmodel import select

from app.desk import attempts
from app.desk.attempts import Seen
from app.desk.bar import bar_is_loaded, bring_flight, instruction_name
from app.desk.board import Board, board
from app.desk.entry import Desk
from app.desk.hub import Hub, QuietHub
from app.desk.roster import import_roster
from app.desk.rule_book import save_rules
from app.desk.setup import add_platform, start_meet
from app.meet.model import Attempt, Lifter, Result
from app.meet.rule_reading import preset_rules, rules_document
from app.planning import Budget
from app.store.engine import make_engine, reading
from app.store.picture import Picture, picture
from app.store.tables import JournalRow

WANDA, LUC, OLGA, OTTO = "Wanda", "Luc", "Olga", "Otto"
ADA, BO, CLEO, DOV, ETTA = "Ada Brook", "Bo Carver", "Cleo Dahl", "Dov Ekman", "Etta Frost"
SQUAT, BENCH, DEADLIFT = "Squat", "Bench press", "Deadlift"
FLIGHT_A, FLIGHT_B = "Flight A", "Flight B"

ROSTER = """\
name,lot,flight,body weight,Squat opener,Squat rack,Bench press opener,Deadlift opener
Ada Brook,3,Flight A,61.5,100,9,60,120
Bo Carver,1,Flight A,74.2,110,11,70,130
Cleo Dahl,2,Flight A,68.0,110,10,65,140
Dov Ekman,4,Flight B,93.1,150,14,100,180
Etta Frost,5,Flight B,88.4,160,13,110,190
"""

BELT_ROSTER = """\
name,lot,flight,body weight,Muscle-up opener,Pull-up opener
Livia Corran,21,Flight C,56.3,0,18.75
Kofi Lund,28,Flight C,68.9,10,43.75
"""

START = datetime(2026, 3, 7, 9, 0, tzinfo=UTC)


def kg(text: str | int) -> Fraction:
    """A mass as the rules hold it: ``kg("102.5")``."""
    return Fraction(text)


def stack(*faces: str | int) -> tuple[Fraction, ...]:
    """One end, inside to outside: ``stack(25, 10, "2.5")``."""
    return tuple(Fraction(face) for face in faces)


@dataclass
class Clock:
    """A clock that moves on by a second each time it is read."""

    now: datetime = START

    def __call__(self) -> datetime:
        self.now += timedelta(seconds=1)
        return self.now


def open_desk(file: Path, hub: Hub | None = None) -> Desk:
    """A desk over a database file that is up to date. It plans as long as a proof takes: no clock decides a test."""
    return Desk(make_engine(f"sqlite:///{file}"), hub or QuietHub(), Clock(), Budget())


@dataclass
class Hall:
    """A meet with one platform, and the words to speak about it."""

    desk: Desk
    meet_id: int = 1
    platform_id: int = 1

    def picture(self) -> Picture:
        """The platform as it stands."""
        with reading(self.desk.engine) as session:
            return picture(session, self.platform_id)

    def board(self) -> Board:
        """What the pages read."""
        one = board(self.desk, self.platform_id)
        assert isinstance(one, Board)
        return one

    def journal(self) -> Sequence[JournalRow]:
        """All entries, oldest first."""
        with reading(self.desk.engine) as session:
            rows = session.exec(select(JournalRow)).all()
            session.expunge_all()
            return sorted(rows, key=lambda row: row.id or 0)

    def lifter(self, name: str) -> Lifter:
        """The lifter of this name."""
        return next(one for _, _, p in self.picture().sessions for one in p.lifters if one.name == name)

    def flight_id(self, name: str) -> int:
        """The flight of this name."""
        return next(one.id for _, _, p in self.picture().sessions for one in p.flights if one.name == name)

    def lift_id(self, name: str) -> int:
        """The lift of this name."""
        return next(one.id for _, _, p in self.picture().sessions for one in p.lifts if one.name == name)

    def attempt(self, name: str, number: int, lift: str = SQUAT) -> Attempt:
        """The lifter's attempt as it stands."""
        lifter, lift_id = self.lifter(name), self.lift_id(lift)
        return next(
            one
            for _, _, p in self.picture().sessions
            for one in p.attempts
            if (one.lifter_id, one.lift_id, one.number) == (lifter.id, lift_id, number)
        )

    def seen(self, name: str, number: int, lift: str = SQUAT) -> Seen:
        """The attempt as a page made now shows it."""
        one = self.attempt(name, number, lift)
        return Seen(one.id, one.version)

    def declare(
        self, name: str, number: int, weight: str, lift: str = SQUAT, who: str = WANDA, reason: str = ""
    ) -> str:
        """Wanda hands in a weight."""
        seen = self.seen(name, number, lift)
        return attempts.declare(self.desk, self.platform_id, seen, weight, reason, who=who)

    def judge(self, name: str, number: int, result: Result, lift: str = SQUAT, who: str = WANDA) -> str:
        """Wanda enters a result."""
        return attempts.judge(self.desk, self.platform_id, self.seen(name, number, lift), result, who=who)

    def load(self) -> None:
        """Luc says that the bar is loaded as shown."""
        shown = instruction_name(self.picture().bar)
        bar_is_loaded(self.desk, self.platform_id, shown, who=LUC)

    def lift(
        self, name: str, number: int, result: Result = Result.GOOD, following: str = "", lift: str = SQUAT
    ) -> None:
        """The whole attempt: loaded, lifted, judged, and perhaps the next weight handed in."""
        self.load()
        self.judge(name, number, result, lift)
        if following:
            self.declare(name, number + 1, following, lift)

    def up(self) -> tuple[str, int, Fraction] | None:
        """Who is up: the name, the number of the attempt, and the weight."""
        turn = self.board().up
        return None if turn is None else (turn.lifter.name, turn.attempt.number, turn.weight)

    def order(self) -> list[tuple[str, int, Fraction]]:
        """Everything that the flight still lifts, in lifting order."""
        return [(turn.lifter.name, turn.attempt.number, turn.weight) for turn in self.board().order]

    def wait(self, seconds: int) -> None:
        """Time passes in the hall."""
        clock = self.desk.clock
        assert isinstance(clock, Clock)
        clock.now += timedelta(seconds=seconds)

    def rules(self, preset: str = "", **settings: str) -> str:
        """Olga changes rules of the platform's session on the Rules page; the others stay, or become a preset's."""
        now = self.picture()
        (session_id,) = now.rules
        typed = rules_document(preset_rules(preset, now.unit) if preset else now.rules[session_id]) | settings
        return save_rules(self.desk, self.platform_id, session_id, typed, who=OLGA)

    def bring(self, flight: str, lift: str) -> None:
        """Wanda brings a flight on."""
        bring_flight(self.desk, self.platform_id, self.flight_id(flight), self.lift_id(lift), who=WANDA)


def ready_meet(desk: Desk) -> Hall:
    """Harbour Cup as this page's docstring has it, made through the use cases."""
    hall = bare_meet(desk)
    import_roster(desk, hall.meet_id, ROSTER, who=OLGA)
    hall.bring(FLIGHT_A, SQUAT)
    return hall


def bare_meet(desk: Desk) -> Hall:
    """Harbour Cup with its platform, before the roster."""
    meet_id = start_meet(desk, "Harbour Cup", "kg")
    return Hall(desk, meet_id, add_platform(desk, meet_id, "Hall", "bar-kg", who=OLGA))
