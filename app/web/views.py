"""What each page is told: frozen views, every number already a text that may be shown.

A template does no arithmetic. Each stack in a view has been re-summed against the called weight and the
stock by :func:`app.loading.stack.check_stack` before the view was made.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import Literal


@dataclass(frozen=True, slots=True)
class Link:
    """One line of navigation."""

    text: str
    href: str
    here: bool = False


@dataclass(frozen=True, slots=True)
class Frame:
    """What every page carries around its own content."""

    meet: str
    links: tuple[Link, ...]
    official: str  # who sits at this screen, as they wrote it; "" if they did not say


@dataclass(frozen=True, slots=True)
class PlateView:
    """One plate as it is drawn: to scale, the number always on it."""

    face: str
    colour: str  # a CSS colour from the equipment list; it supports, the number carries
    diameter_mm: float
    thickness_mm: float
    fresh: bool = False  # goes on in this change
    face_in: bool = False


@dataclass(frozen=True, slots=True)
class EndView:
    """One end of a bar, or the one stack of a belt, as it must look when the change is done."""

    implement: Literal["bar", "belt"]
    plates: tuple[PlateView, ...]  # inside to outside
    collar: str | None  # its mass, "2.5"; None when there is none
    usable_mm: float | None
    count: str  # "4 plates + collar"
    sum: str  # "25 + 15 + 2.5 = 42.5 a side"
    whole: str  # "2 × 42.5 + 25 = 110"


@dataclass(frozen=True, slots=True)
class ChangeView:
    """What the hands do, in the order they do it."""

    off: tuple[PlateView, ...]  # outermost first
    on: tuple[PlateView, ...]  # innermost first
    side: str  # "a side" for a bar, "the stack" for a belt
    from_empty: bool  # a full build: take everything off first, then this
    end: EndView
    how: str = ""  # which place in the stack each plate leaves or takes, where it is not simply the outer end
    why: str = ""  # why the stack is not the chart's; "" where it is


@dataclass(frozen=True, slots=True)
class RackView:
    """A setting of the rack for this lifter; ``old`` is "" when nobody stood there before."""

    name: str  # "Rack", "Safeties", "Chain"
    old: str
    new: str


@dataclass(frozen=True, slots=True)
class UpView:
    """Who lifts, and what."""

    lifter: str
    lot: str
    attempt: str  # "Squat, 2nd"
    flight: str  # "Flight A, round 2"
    weight: str  # "142.5"


@dataclass(frozen=True, slots=True)
class ThenView:
    """One line of what follows."""

    weight: str
    lifter: str
    note: str  # "same weight", "new round", "next flight", "not handed in"


@dataclass(frozen=True, slots=True)
class FallView:
    """The first bar of the next round, told while the last lift of this one is on."""

    weight: str
    lifter: str
    note: str
    change: ChangeView


CrewState = Literal["idle", "waiting", "changing", "lifting", "changed", "hold", "unknown", "finished"]


@dataclass(frozen=True, slots=True)
class OtherBeltView:
    """The load that is made up on the free belt while a lifter has the other one."""

    weight: str
    lifter: str
    change: ChangeView
    warning: str  # the next weight has changed since; "" as long as it has not


@dataclass(frozen=True, slots=True)
class CrewView:
    """The crew's screen at one revision of the platform."""

    platform_id: int
    platform: str
    unit: str
    revision: int
    as_of: str  # "10:42:17", the platform's own last change
    state: CrewState
    up: UpView | None
    change: ChangeView | None
    rack: tuple[RackView, ...]  # only those that differ from the lifter before
    then: tuple[ThenView, ...]
    keep_out: tuple[str, ...]  # faces taken off now and wanted again within two lifts
    message: str  # one sentence for the states that need one
    shown: str = ""  # names the instruction shown; the forms send it back as hidden field "shown"
    new_weight: str = ""  # state "changed": the weight that replaces up.weight
    bar_now: str = ""  # what is known to be on each end, "25 + 15"
    fall: FallView | None = None  # at a round's end, while the bar is loaded
    other: OtherBeltView | None = None


@dataclass(frozen=True, slots=True)
class CardRow:
    """One attempt on a printed swap list."""

    order: str
    lot: str
    lifter: str
    attempt: str
    weight: str
    stack: tuple[str, ...]  # faces, inside to outside
    off: tuple[str, ...]
    on: tuple[str, ...]
    rack: str  # "14 out", "" when there is none
    sum: str
    note: str  # "not handed in", "cannot be made: 100 or 102.5"


@dataclass(frozen=True, slots=True)
class CardView:
    """The swap list of one flight's round: one page of paper."""

    meet: str
    title: str  # "Flight A · Squat · round 2"
    platform: str
    unit: str
    side: str  # "a side" or "the stack"
    implement: str  # "Power bar 20 + collars 2 × 2.5 = 25 kg"
    start: str  # what is on each end before the first line, "empty" or "25 + 10"
    rows: tuple[CardRow, ...]
    undeclared: tuple[CardRow, ...]  # lifters of the flight with no weight yet: blank lines
    revision: int
    printed: str  # "2027-03-06 10:42"
    total: str  # "34 plates, 312.5 kg handled a side; by the chart 36 plates, 420 kg"
