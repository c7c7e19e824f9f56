"""The crew's screen read back: what stands on it in numbers, without asking the program what it meant."""

from __future__ import annotations

from dataclasses import dataclass
from fractions import Fraction

from starlette.testclient import TestClient

from tests.web.asking import get
from tests.web.pages import Element

Faces = tuple[Fraction, ...]


@dataclass(frozen=True)
class Screen:
    """What the crew reads. ``None`` where the screen does not show that part."""

    state: str
    weight: Fraction | None
    off: Faces | None  # outermost first
    on: Faces | None  # innermost first
    everything_off: bool
    drawn: Faces | None  # inside to outside
    added_up: Faces | None  # the plates of the sum in words, inside to outside
    side_sum: Fraction | None
    whole: tuple[Fraction, ...]  # every number of the referee's sum, the total last
    count: int | None
    no_change: bool
    text: str


def look(client: TestClient, platform_id: int = 1) -> Screen:
    """The crew's screen as it is now."""
    return read_screen(get(client, f"/platforms/{platform_id}/crew").one("section", "now"))


def read_screen(now: Element) -> Screen:
    """The numbers of one screen."""
    weight = [one.one("span", "heard").text for one in now.all(klass="weight")]
    drawings = now.all("svg", "end-drawing")
    sums = [one for one in now.texts(klass="sum") if one]
    side = _side(sums[0]) if sums else None
    return Screen(
        state=now.attrs["data-state"],
        weight=Fraction(weight[0]) if weight else None,
        off=_row(now, "off"),
        on=_row(now, "on"),
        everything_off=bool(now.all(klass="everything")),
        drawn=tuple(map(Fraction, drawings[0].texts("text", "label-number"))) if drawings else None,
        added_up=side[0] if side else None,
        side_sum=side[1] if side else None,
        whole=_numbers(sums[-1]) if sums else (),
        count=_count(now),
        no_change=bool(now.all(klass="nothing")),
        text=now.text,
    )


def _row(now: Element, klass: str) -> Faces | None:
    """A row of plates, which stands there three times: for a wide screen, a narrow one, and an ear."""
    moves = [one for one in now.all("div", klass) if "move" in one.classes and one.all("svg")]
    if not moves:
        return None
    ways = [tuple(map(Fraction, row.texts("text", "token"))) for row in moves[0].all("svg", "plate-row")]
    heard = moves[0].all("span", "heard")
    ways += [tuple(map(Fraction, one.text.split(", "))) for one in heard]
    assert len(set(ways)) == 1, f"the same row is shown as {ways}"
    return ways[0]


def _side(words: str) -> tuple[Faces, Fraction]:
    """``25 + 15 = 40 a side``, ``25 a side``, ``nothing a side``; a belt says nothing of sides."""
    words = words.removesuffix(" a side")
    if words.startswith("nothing"):
        return (), Fraction(0)
    parts, _, total = words.partition(" = ")
    faces = tuple(map(Fraction, parts.split(" + ")))
    return faces, Fraction(total or parts)


def _numbers(words: str) -> tuple[Fraction, ...]:
    for sign in "×+=":
        words = words.replace(sign, " ")
    return tuple(Fraction(word) for word in words.split() if word[0].isdigit())


def _count(now: Element) -> int | None:
    for words in now.texts(klass="count"):
        first, _, rest = words.partition(" ")
        if rest.startswith("plate"):
            return 0 if first == "no" else int(first)
    return None
