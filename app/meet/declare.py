"""May this weight be declared? A decision as data; the words for people are in it, the writing elsewhere."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from fractions import Fraction

from app.loading.chart import loadable
from app.loading.equipment import Equipment
from app.loading.mass import parse_mass, show_mass
from app.meet.model import Attempt, Result


@dataclass(frozen=True, slots=True)
class Refused:
    """Why a declaration cannot stand, and which weights near it could."""

    because: str
    below: Fraction | None = None
    above: Fraction | None = None


@dataclass(frozen=True, slots=True)
class Allowed:
    """The weight, read and found right."""

    weight: Fraction


Decision = Allowed | Refused

HEAVIEST = Fraction(2000)  # more than any bar has carried; a slip of the finger, not a declaration
MOST_SHOWN = 40  # letters of a mistyped weight that are repeated to whoever typed it
LOOK_AROUND = 200  # steps to look up and down for a weight that can be made


def read_weight(text: str) -> Allowed | Refused:
    """The typed text as an exact mass; a decimal comma is read as a point."""
    text = text.strip()
    try:
        weight = parse_mass(text.replace(",", "."))
    except ValueError:
        shown = text if len(text) <= MOST_SHOWN else text[:MOST_SHOWN] + "…"
        return Refused(f"“{shown}” is not a weight. Type a number such as 142.5.")
    if weight < 0:
        return Refused("A weight cannot be less than 0.")
    if weight > HEAVIEST:
        return Refused(f"{show_mass(weight)} is more than any bar carries. Check the number.")
    return Allowed(weight)


def decide(
    weight: Fraction,
    attempt: Attempt,
    earlier: Sequence[Attempt],
    step: Fraction,
    equipment: Equipment,
    unit: str,
) -> Decision:
    """Whether ``attempt`` may be declared at ``weight``; the first rule that it breaks is named.

    ``earlier`` are the lifter's attempts of this lift with a lower number. Order of the checks: already
    lifted, under the bar, no multiple of the step, below a weight already taken (IPL Rulebook 2019, 6.1.1:
    never below a weight already failed; after a good lift common practice), cannot be made.
    """
    if attempt.result is not Result.OPEN:
        return Refused("This attempt has been lifted. Undo its result first, or correct the result.")
    lifted = [done.weight for done in earlier if done.weight is not None and done.result is not Result.OPEN]
    least = max([equipment.base_mass, *lifted])
    if weight >= least and weight % step == 0 and loadable(equipment, weight):
        return Allowed(weight)
    because = f"{show_mass(weight)} {unit} {_why_not(weight, least, step, equipment, unit)}."
    return Refused(because, *_makeable_near(weight, least, step, equipment))


def _why_not(weight: Fraction, least: Fraction, step: Fraction, equipment: Equipment, unit: str) -> str:
    base = equipment.base_mass
    if weight < base:
        return f"is lighter than the bar with its collars, {show_mass(base)} {unit}"
    if weight % step:
        return f"is not a multiple of {show_mass(step)}"
    if weight < least:
        return f"is lower than this lifter's last attempt, {show_mass(least)}"
    return "cannot be made with the plates at this platform"


def _makeable_near(
    weight: Fraction, least: Fraction, step: Fraction, equipment: Equipment
) -> tuple[Fraction | None, Fraction | None]:
    """The nearest weights below and above that may be declared: multiples of the step, not under ``least``,
    that the plates make; None where there is none."""
    lower = (weight // step * step - step * k for k in range(LOOK_AROUND))
    first = -(-max(weight, least) // step) * step
    upper = (first + step * k for k in range(LOOK_AROUND))
    below = next((mass for mass in lower if least <= mass < weight and loadable(equipment, mass)), None)
    return below, next((mass for mass in upper if mass > weight and loadable(equipment, mass)), None)


def sentence(refused: Refused) -> str:
    """The refusal with the way forward: ``… Nearest: 100 or 102.5.``"""
    near = [show_mass(mass) for mass in (refused.below, refused.above) if mass is not None]
    if not near:
        return refused.because
    word = "Nearest" if len(near) == 2 else "Next possible"
    return f"{refused.because} {word}: {' or '.join(near)}."
