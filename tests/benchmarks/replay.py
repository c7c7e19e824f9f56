"""Real rounds through the desk, in the order in which they would have been declared.

    uv run python -m tests.benchmarks.replay ROUNDS.json [--wish "plates;mass;…"] [--every N] [--jobs N] [--keep FOLDER]

Openers are known when the flight comes on; every other weight is handed in just after its lifter's lift before,
when the crew already has the next change in its hands. What the crew then handled (the *rolling* plan) is laid beside
the same weights loaded by the wall chart, and beside one plan made with *hindsight* of them all. The file's rounds
name no lifters: each weight of a round is given to the heaviest lifter left whose attempt before was no heavier.
"""

from __future__ import annotations

import argparse
import json
import pickle
import shutil
import sys
import tempfile
from collections.abc import Iterator, Sequence
from concurrent.futures import ProcessPoolExecutor
from dataclasses import dataclass, field, replace
from fractions import Fraction
from itertools import pairwise
from pathlib import Path
from typing import Any

from app.desk.attempts import Seen, declare, judge
from app.desk.bar import bar_is_loaded, bring_flight, instruction_name
from app.desk.board import Board, board
from app.desk.entry import Desk
from app.desk.equipment import LiftWish, save_lifts, save_plates, stock_seen
from app.desk.lift_loading import keep_wish
from app.desk.roster import import_roster
from app.desk.rule_book import save_rules
from app.desk.setup import add_platform, start_meet
from app.desk.wish import Wish, plan_request
from app.loading.change import hand_list
from app.loading.chart import chart_stack, loadable
from app.loading.equipment import Access, Equipment, Stack
from app.loading.mass import show_mass
from app.loading.stack import check_stack
from app.meet.model import Result
from app.meet.rule_presets import rule_preset
from app.meet.rule_settings import SETTINGS
from app.planning import Aim, Budget, Measure, plan
from app.store.migrate import upgrade
from tests.cast import open_desk
from tests.desk.forms import plate_rows

WHO = "replay"
WISHES = {
    "plates": Wish(),
    "plates, no change slower than the chart's slowest": Wish(chart_limit=True),
    "mass": Wish(measure=Measure.MASS),
    "mass, no change slower than the chart's slowest": Wish(measure=Measure.MASS, chart_limit=True),
    "slowest change": Wish(aim=Aim.WORST),
}
MOST_SHORTFALL = Fraction(5, 1000)  # of the chart: how much worse than hindsight the rolling plan may be


@dataclass(frozen=True, slots=True)
class Cost:
    """Plates and mass handled at one end, and the same of the worst single change."""

    plates: int = 0
    mass: Fraction = field(default_factory=Fraction)
    worst_plates: int = 0
    worst_mass: Fraction = field(default_factory=Fraction)

    @staticmethod
    def of(stacks: Sequence[Stack]) -> Cost:
        """What it takes to load these one after another, from an empty bar."""
        moves = [hand_list(a, b, Access.OUTER_END) for a, b in pairwise([(), *stacks])]
        plates = [len(one.off) + len(one.on) for one in moves]
        mass = [sum(one.off + one.on, Fraction(0)) for one in moves]
        return Cost(sum(plates), sum(mass, Fraction(0)), max(plates), max(mass))

    def __add__(self, other: Cost) -> Cost:
        return Cost(
            self.plates + other.plates,
            self.mass + other.mass,
            max(self.worst_plates, other.worst_plates),
            max(self.worst_mass, other.worst_mass),
        )


@dataclass(frozen=True, slots=True)
class Replayed:
    """One case: what was lifted, and the three costs. Empty ``weights``: not usable, and ``why``."""

    case: str
    unit: str
    weights: tuple[Fraction, ...] = ()
    rolling: Cost = field(default_factory=Cost)
    chart: Cost = field(default_factory=Cost)
    hindsight: Cost = field(default_factory=Cost)
    why: str = ""


def careers(case: dict[str, Any]) -> list[list[Fraction]]:
    """The attempts of each lifter, as far as lists without names allow."""
    rounds = [[Fraction(str(one)) for one in part] for part in case.get("rounds_lb") or case["rounds"]]
    if "rising-bar" in case.get("flags", ()):
        return list(_mixed(sorted(rounds[0])))
    found = [[opener] for opener in sorted(rounds[0])]
    for number, part in enumerate(rounds[1:], start=1):
        left = [one for one in found if len(one) == number]
        for weight in sorted(part, reverse=True):
            fitting = [one for one in left if one[-1] <= weight] or left
            if not fitting:
                break
            lifter = max(fitting, key=lambda one: one[-1])
            lifter.append(weight)
            left = [one for one in left if one is not lifter]
    return found


def _mixed(attempts: Sequence[Fraction]) -> Iterator[list[Fraction]]:
    """On a rising bar three lifters of about the same strength take turns."""
    for place in range(0, len(attempts), 9):
        group = attempts[place : place + 9]
        yield from (list(group[lifter::3]) for lifter in range(min(3, len(group))))


def replay(case: dict[str, Any], wish: Wish, empty: Path) -> Replayed:
    """One case through a desk of its own."""
    unit = "lb" if "rounds_lb" in case else "kg"
    lifters = careers(case)
    with tempfile.TemporaryDirectory() as folder:
        desk = replace(open_desk(Path(shutil.copy(empty, folder))), budget=Budget())
        platform_id = _ready(desk, case, unit, wish)
        equipment = _equipment(desk, platform_id)
        wrong = next((w for theirs in lifters for w in theirs if not loadable(equipment, w)), None)
        if wrong is not None:
            desk.engine.dispose()
            return Replayed(case["case"], unit, why=f"{show_mass(wrong)} {unit} cannot be made")
        stacks = list(_lift(desk, platform_id, lifters))
        desk.engine.dispose()
    weights = tuple(weight for weight, _ in stacks)
    by_chart = [chart_stack(equipment, weight) for weight in weights]
    best = plan(plan_request(unit, equipment, wish, (), weights))
    return Replayed(
        case["case"],
        unit,
        weights,
        Cost.of([stack for _, stack in stacks]),
        Cost.of([one for one in by_chart if one is not None]),
        Cost.of([change.stack for change in best.changes]),
    )


def _ready(desk: Desk, case: dict[str, Any], unit: str, wish: Wish) -> int:
    meet_id = start_meet(desk, "Replay", unit)
    platform_id = add_platform(desk, meet_id, "Platform", f"bar-{unit}", who=WHO)
    import_roster(desk, meet_id, "name,lot,flight\nNobody,9999,Flight\n", who=WHO)
    one = _board(desk, platform_id)
    if "rising-bar" in case.get("flags", ()):
        preset = rule_preset("rising-bar")
        typed = {"preset": preset.key} | {s.key: preset.value(s.key, unit) for s in SETTINGS}
        save_rules(desk, platform_id, next(iter(one.now.rules)), typed, who=WHO)
        wishes = [LiftWish(one.lift.id, str(one.tool.id), "1", "1", "plates", "total")]
        save_lifts(desk, platform_id, wishes, who=WHO)
        _small_plates(desk, platform_id)
    keep_wish(desk, platform_id, one.lift.id, wish, who=WHO)
    return platform_id


def _small_plates(desk: Desk, platform_id: int) -> None:
    """A pair each of 2, 1.5 and 1 kg beside the rest: what steps of 1 kg need (``figures.md`` 2)."""
    now = _board(desk, platform_id).now
    small = [
        {"face": face, "count": "2", "thickness": "15", "diameter": "175", "colour": "#777777"}
        for face in ("2", "1.5", "1")
    ]
    save_plates(desk, platform_id, [*plate_rows(now), *small], stock_seen(now.stock, now.tools), who=WHO)


def _equipment(desk: Desk, platform_id: int) -> Equipment:
    return _board(desk, platform_id).equipment


def _board(desk: Desk, platform_id: int) -> Board:
    one = board(desk, platform_id)
    assert isinstance(one, Board)
    return one


def _lift(desk: Desk, platform_id: int, lifters: list[list[Fraction]]) -> Iterator[tuple[Fraction, Stack]]:
    """The whole flight; each weight with the stack that the crew loaded for it."""
    lines = ["name,lot,flight", *(f"Lifter {lot},{lot},Flight" for lot in range(1, len(lifters) + 1))]
    meet_id = _board(desk, platform_id).now.meet_id
    import_roster(desk, meet_id, "\n".join(lines), who=WHO)
    for lot, theirs in enumerate(lifters, start=1):
        _hand_in(desk, platform_id, lot, 1, theirs)
    one = _board(desk, platform_id)
    bring_flight(desk, platform_id, one.flight.id, one.lift.id, who=WHO)
    while True:
        one = _board(desk, platform_id)
        if one.up is None:
            return
        turn, hand = one.up, one.now.bar.hand
        theirs = lifters[turn.lifter.lot - 1]
        assert hand is not None, turn
        assert (hand.attempt_id, hand.weight) == (turn.attempt.id, turn.weight), turn
        check_stack(one.equipment, hand.stack, turn.weight)
        bar_is_loaded(desk, platform_id, instruction_name(one.now.bar), who=WHO)
        yield turn.weight, hand.stack
        following = theirs[turn.attempt.number :]
        missed = bool(following) and following[0] <= turn.weight
        seen = Seen(turn.attempt.id, turn.attempt.version)
        judge(desk, platform_id, seen, Result.MISSED if missed else Result.GOOD, who=WHO)
        _hand_in(desk, platform_id, turn.lifter.lot, turn.attempt.number + 1, theirs)


def _hand_in(desk: Desk, platform_id: int, lot: int, number: int, theirs: Sequence[Fraction]) -> None:
    """The lifter's next weight, or the passes of one who takes no more."""
    one = _board(desk, platform_id)
    lifter = next(x for x in one.programme.lifters if x.lot == lot)
    attempts = {a.number: a for a in one.programme.of_lift(one.lift.id)[lifter.id]}
    if number <= min(3, len(theirs)):
        weight = theirs[number - 1]
        text = show_mass(weight) + ("r" if weight % one.lift.step else "")
        seen = Seen(attempts[number].id, attempts[number].version)
        declare(desk, platform_id, seen, text, "as it was declared", who=WHO)
        return
    for left in range(number, 4):
        seen = Seen(attempts[left].id, attempts[left].version)
        judge(desk, platform_id, seen, Result.PASSED, who=WHO)


def percent(ours: Fraction | int, chart: Fraction | int) -> str:
    """``-3.2 %`` of the chart."""
    return f"{float(100 * (Fraction(ours) - chart) / chart):+.2f} %" if chart else "–"


def report(name: str, found: Sequence[Replayed]) -> bool:
    """Say the figures of one wish; False when the rolling plan falls too far behind hindsight."""
    done = [one for one in found if one.weights]
    kept = True
    for unit in ("kg", "lb"):
        part = [one for one in done if one.unit == unit]
        if not part:
            continue
        rolling, chart, best = (
            sum((getattr(one, which) for one in part), Cost()) for which in ("rolling", "chart", "hindsight")
        )
        attempts = sum(len(one.weights) for one in part)
        say(f"{name}: {len(part)} flights in {unit}, {attempts} attempts")
        for what in ("plates", "mass"):
            c, r, h = (getattr(one, what) for one in (chart, rolling, best))
            say(
                f"  {what:<6} chart {float(c):.0f}, rolling {percent(r, c)}, hindsight {percent(h, c)}, "
                f"rolling behind hindsight by {float(100 * (Fraction(r) - h) / c):.2f} % of the chart"
            )
        for what in ("worst_plates", "worst_mass"):
            harder = sum(getattr(one.rolling, what) > getattr(one.chart, what) for one in part)
            easier = sum(getattr(one.rolling, what) < getattr(one.chart, what) for one in part)
            mean = {
                which: float(sum(Fraction(getattr(getattr(one, which), what)) for one in part)) / len(part)
                for which in ("chart", "rolling", "hindsight")
            }
            words = ", ".join(f"{which} {value:.2f}" for which, value in mean.items())
            say(
                f"  {what.replace('_', ' change, '):<20} mean {words}; "
                f"harder than the chart's in {harder}, easier in {easier}"
            )
        measure = "mass" if name.startswith("mass") else "plates"
        if name in ("plates", "mass"):
            c, r, h = (getattr(one, measure) for one in (chart, rolling, best))
            kept = kept and Fraction(r) - h <= MOST_SHORTFALL * Fraction(c)
    return kept


def say(line: str) -> None:
    print(line, flush=True)


Job = tuple[dict[str, Any], str, Path, Path | None]


def _one(job: Job) -> Replayed:
    """One case, or what an earlier run kept of it: all of them take long, and a run may be broken off."""
    case, name, empty, keep = job
    file = None if keep is None else keep / f"{list(WISHES).index(name)}-{case['case']}.pickle"
    if file is not None and file.exists():
        kept: Replayed = pickle.loads(file.read_bytes())
        return kept
    found = replay(case, WISHES[name], empty)
    if file is not None:
        file.write_bytes(pickle.dumps(found))
    return found


def main(arguments: Sequence[str] | None = None) -> int:
    """All wishes, one after another; 1 when a rolling plan is more than 0.5 % behind hindsight."""
    reader = argparse.ArgumentParser(
        description=__doc__, formatter_class=argparse.RawDescriptionHelpFormatter
    )
    reader.add_argument("rounds", type=Path)
    reader.add_argument("--wish", default=";".join(WISHES), help="names, a semicolon between them")
    reader.add_argument("--every", type=int, default=1, help="take each Nth case only")
    reader.add_argument("--jobs", type=int, default=1)
    reader.add_argument(
        "--keep", type=Path, help="a folder for what is done, so that a broken-off run goes on"
    )
    asked = reader.parse_args(arguments)
    if asked.keep is not None:
        asked.keep.mkdir(parents=True, exist_ok=True)
    cases = json.loads(asked.rounds.read_text(encoding="utf-8"))["cases"][:: asked.every]
    kept = True
    with tempfile.TemporaryDirectory() as folder, ProcessPoolExecutor(asked.jobs) as pool:
        empty = Path(folder) / "meet.db"
        upgrade(f"sqlite:///{empty}")
        for name in asked.wish.split(";"):
            found = list(pool.map(_one, [(case, name, empty, asked.keep) for case in cases]))
            unusable = [one for one in found if not one.weights]
            say(
                f"{len(unusable)} cases cannot be lifted with this set: "
                + "; ".join(f"{one.case}, {one.why}" for one in unusable)
            )
            kept = report(name, found) and kept
    return 0 if kept else 1


if __name__ == "__main__":
    sys.exit(main())
