"""No wrong load is ever shown: whole days driven over HTTP, every screen added up again from its own HTML.

The check shares nothing with the program: it reads the drawn numbers, the OFF and ON rows and the sums, and
compares them with the called weight, the mass of the empty bar (typed in below), the pieces that the platform
owns, and the stack that the screen before left on the bar.
"""

from __future__ import annotations

import random
from collections import Counter
from dataclasses import dataclass
from fractions import Fraction

import pytest
from starlette.testclient import TestClient

from tests.web.asking import HTMX, app_over, get, landed, send
from tests.web.crew_screen import Faces, Screen, look
from tests.web.hands import can_be_done, stands_well, wish
from tests.web.pages import Element, read
from tests.web.ready import Meet


@dataclass(frozen=True)
class Iron:
    """The empty implement. Bar 20 kg and two collars of 2.5 kg (common practice); a belt that is not counted."""

    platform_id: int
    empty: Fraction
    ends: int
    step: Fraction


BAR = Iron(1, Fraction(25), 2, Fraction("2.5"))
BELT = Iron(2, Fraction(0), 1, Fraction("1.25"))


@dataclass(frozen=True)
class Platform:
    """What the check may use: the implement, the pieces and sizes of the plates, and the lift's order and access."""

    iron: Iron
    stock: dict[Fraction, int]
    widths: dict[Fraction, Fraction]
    order: str
    access: str


def check(screen: Screen, on_platform: Platform, before: Faces | None) -> Faces:
    """Add one screen up; returns what is then on each end."""
    iron = on_platform.iron
    assert screen.weight is not None
    shown = screen.drawn if screen.drawn is not None else screen.added_up
    assert shown is not None, screen.text
    assert iron.empty + iron.ends * sum(shown) == screen.weight
    assert all(iron.ends * n <= on_platform.stock.get(face, 0) for face, n in Counter(shown).items())
    assert stands_well(shown, on_platform.order, on_platform.widths), shown
    if screen.state == "lifting" and screen.added_up is None:
        return shown  # a round ends: the great fall to come stands where the sums stood
    assert screen.added_up == shown
    assert screen.side_sum == sum(shown)
    assert screen.count == len(shown)
    if iron.ends == 2:
        assert screen.whole == (2, sum(shown), iron.empty, screen.weight)
    if screen.state in ("changing", "unknown"):
        _check_hands(screen, shown, before, on_platform.access)
    return shown


def _check_hands(screen: Screen, shown: Faces, before: Faces | None, access: str) -> None:
    off, on = screen.off or (), screen.on or ()
    if screen.everything_off:
        assert on == shown
    else:
        assert screen.no_change is not bool(off or on)
        assert before is None or can_be_done(before, shown, off, on, access), (before, off, on, shown)


class Day:
    """One platform driven through a flight with everything that people do at a table."""

    def __init__(self, client: TestClient, meet: Meet, iron: Iron, chance: random.Random) -> None:
        self.client, self.meet, self.iron, self.chance = client, meet, iron, chance
        self.base = f"/platforms/{iron.platform_id}"
        self.bar: Faces | None = None
        self.seen: Counter[str] = Counter()
        self.lifted = 0

    def on_platform(self) -> Platform:
        number = self.iron.platform_id
        order, access = wish(self.meet.loading(self.meet.platform(number)["lift_id"]))
        return Platform(self.iron, self.meet.stock(number), self.meet.diameters(number), order, access)

    def table(self) -> Element:
        return get(self.client, f"{self.base}/table")

    def send(self, action: str, button: str = "", **typed: str) -> None:
        landed(self.client, send(self.client, self.table(), action, button, **typed))

    def crew(self) -> Screen:
        screen = look(self.client, self.iron.platform_id)
        self.seen["no change" if screen.no_change else screen.state] += 1
        if screen.state in ("changing", "unknown", "lifting"):
            stack = check(screen, self.on_platform(), self.bar)
            assert screen.weight == self._called()
            if screen.state == "lifting":
                self.bar = stack
        else:
            assert screen.drawn is None or screen.state == "changed"
            assert (screen.off, screen.on) == (None, None)
        return screen

    def _called(self) -> Fraction:
        """The weight on the Table's own line for who is up."""
        return Fraction(self.table().one("span", "weight-figure").text)

    def to_come(self) -> list[Element]:
        body = self.table().one("table", "order").one("tbody") if self.table().all("table", "order") else None
        return [] if body is None else [row for row in body.all("tr") if "id" in row.attrs]

    def hand_in(self, row: Element, weight: str) -> int:
        """Hand a weight in, with a reason where a rule stands against it and the table may decide."""
        attempt = row.attrs["id"].removeprefix("row-")
        answer = send(self.client, self.table(), "/weight", attempt=attempt, weight=weight)
        page = read(answer.text) if answer.status_code == 422 else None
        if page is not None and page.all("input", "reason"):
            answer = send(self.client, page, "/weight", attempt=attempt, weight=weight, reason="jury")
        return answer.status_code

    def raise_somebody(self) -> None:
        """Somebody changes a weight: often whoever is up, mostly by a few steps, sometimes to nonsense."""
        rows = self.to_come()
        if rows and self.chance.random() < 0.1:
            assert self.hand_in(rows[0], "0.3") == 422
        elif rows:
            row = rows[0] if self.chance.random() < 0.5 else self.chance.choice(rows)
            self.lift_weight_of(row, self.chance.randint(0, 4))

    def lift_weight_of(self, row: Element, steps: int) -> None:
        box = row.one("input", "weight-box").attrs
        weight = Fraction(box["value"] or box["placeholder"]) + steps * self.iron.step
        assert self.hand_in(row, f"{float(weight):g}") in (200, 303, 422)

    def answer(self) -> None:
        """The crew says what is on the bar."""
        what = self.chance.choice(["before", "shown", "unknown"])
        page = get(self.client, f"{self.base}/crew")
        offered = [one.attrs["value"] for one in page.all("button", name="bar")]
        what = what if what in offered else "unknown"
        hand = self.meet.platform(self.iron.platform_id)["hand"]
        landed(self.client, send(self.client, page, "/bar", f"bar={what}"))
        faces = {"before": hand["before"], "shown": hand["stack"], "unknown": None}[what]
        self.bar = None if faces is None else tuple(map(Fraction, faces))

    def turn(self) -> bool:
        """One thing happens; False when the flight is over."""
        if self.seen["changing"] == 3 and not self.seen["changed"]:
            self.lift_weight_of(self.to_come()[0], 1)  # every day sees a weight changed under the hands
        elif self.chance.random() < 0.4:
            self.raise_somebody()
        screen = self.crew()
        match screen.state:
            case "finished":
                return False
            case "waiting":
                assert self.hand_in(self.to_come()[0], "") in (200, 303)
            case "changed":
                self.answer()
            case "hold":
                self.send("/table-bar", "tell=go")
            case "lifting":
                self.judge()
            case _:
                self.load(screen)
        return True

    def load(self, screen: Screen) -> None:
        if self.chance.random() < 0.05:
            self.send("/table-bar", "tell=hold")
        elif self.chance.random() < 0.85:
            landed(self.client, send(self.client, get(self.client, f"{self.base}/crew"), "/loaded"))
        else:  # the table is quicker: a result says that the bar was as shown
            self.bar = screen.drawn if screen.drawn is not None else screen.added_up
            self.judge()

    def judge(self) -> None:
        result = self.chance.choice(["good", "good", "missed"])
        panel = self.table().one("section", aria_label="Up now")
        landed(self.client, send(self.client, panel, "/result", f"result={result}"))
        self.lifted += 1


@pytest.mark.parametrize(
    ("iron", "seed", "headers"),
    [(BAR, 1, {}), (BAR, 2, HTMX), (BELT, 3, HTMX), (BELT, 4, {})],
    ids=["bar plain", "bar htmx", "belt htmx", "belt plain"],
)
def test_every_screen_of_a_whole_flight_adds_up(
    meet: Meet, iron: Iron, seed: int, headers: dict[str, str]
) -> None:
    with app_over(meet, headers) as client:
        day = Day(client, meet, iron, random.Random(seed))
        for _ in range(400):
            if not day.turn():
                break
        assert look(client, iron.platform_id).state == "finished"
    assert day.lifted == {1: 17, 2: 15}[iron.platform_id]
    assert {"changing", "lifting", "changed", "waiting"} <= set(day.seen)
