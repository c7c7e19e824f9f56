"""Sets to start from. None is a maker's data sheet: the meet measures its own plates and corrects the numbers.

Masses and colours of the kg discs: IWF set as read in ``figures.md`` 2 (two sources agree); that a
powerlifting meet uses the same colours down to 10 kg is common practice. Diameters and thicknesses of the kg
sets are from memory (``figures.md`` 4.5, within about 3 mm); of the lb set the middle of a published range
(``figures.md`` 4.1, S58). How many of each: common practice for one platform (``trade.md`` C2, from memory).
Bar 20 kg and collars 2.5 kg each: WDFPF 2007, WPC (bar and both collars 25 kg). Sleeve 415 mm: ``figures.md``
V49; room that a competition collar takes, 50 mm: from memory.

The bumper set. Men's bar 20 kg with 415 mm of sleeve, women's bar 15 kg with 320 mm, collars 2.5 kg each, so 25
and 20 kg with nothing on; masses and colours of the discs (25 to 5, then 2.5, 2, 1.5, 1, 0.5); 450 mm for every
disc of 10 kg and more: all second-hand reports of the IWF's rules (``figures.md`` 2, S39 to S46, V5, V49).
Thickness of the bumpers, 65, 54, 42 and 32 mm: from memory, low confidence (``figures.md`` 4.5; a published range
for rubber bumpers, 4.3, is thicker still). Sizes of the discs of 5 kg and less: from memory. How many: one pair of
each and more 25s for heavier groups (``trade.md`` C2, from memory). Declared in steps of 1 kg (``figures.md`` 2,
second-hand).
"""

from __future__ import annotations

from dataclasses import dataclass
from fractions import Fraction


@dataclass(frozen=True, slots=True)
class PresetPlate:
    """One row of a set; lengths in mm, the colour as CSS has it."""

    face: str
    count: int
    thickness_mm: str
    diameter_mm: str
    colour: str


@dataclass(frozen=True, slots=True)
class PresetTool:
    """A bar or a belt with its collars."""

    name: str
    kind: str
    mass: str
    usable_mm: str | None = None
    collar_mass: str | None = None
    collar_width_mm: str | None = None


@dataclass(frozen=True, slots=True)
class PresetLift:
    """A lift, the place of its implement in the preset's list, and the step its weights are declared in."""

    name: str
    tool: int
    step: str


@dataclass(frozen=True, slots=True)
class Preset:
    """Everything a platform starts with."""

    key: str
    name: str
    unit: str
    rules: str  # the set of rules to start from
    session: str
    tools: tuple[PresetTool, ...]
    plates: tuple[PresetPlate, ...]
    lifts: tuple[PresetLift, ...]


RED, BLUE, YELLOW, GREEN, WHITE = "#c62828", "#1f4fa3", "#e8b50c", "#1e7a3c", "#f2f2ee"
STEEL, BLACK = "#9aa0a6", "#2b2b2b"

KG_STEEL = (
    PresetPlate("25", 12, "27", "450", RED),
    PresetPlate("20", 2, "22.5", "450", BLUE),
    PresetPlate("15", 2, "21.5", "400", YELLOW),
    PresetPlate("10", 2, "21", "325", GREEN),
    PresetPlate("5", 2, "21", "228", WHITE),
    PresetPlate("2.5", 4, "16", "190", BLACK),
    PresetPlate("1.25", 4, "12", "160", STEEL),
    PresetPlate("0.5", 2, "8", "134", STEEL),
    PresetPlate("0.25", 2, "6", "112", STEEL),
)

KG_BUMPERS = (
    PresetPlate("25", 6, "65", "450", RED),
    PresetPlate("20", 2, "54", "450", BLUE),
    PresetPlate("15", 2, "42", "450", YELLOW),
    PresetPlate("10", 2, "32", "450", GREEN),
    PresetPlate("5", 2, "27", "228", WHITE),
    PresetPlate("2.5", 2, "19", "210", RED),
    PresetPlate("2", 2, "19", "190", BLUE),
    PresetPlate("1.5", 2, "18", "175", YELLOW),
    PresetPlate("1", 2, "15", "160", GREEN),
    PresetPlate("0.5", 2, "13", "134", WHITE),
)

LB_IRON = (
    PresetPlate("45", 14, "52", "450", BLACK),
    PresetPlate("35", 2, "44.5", "395", BLACK),
    PresetPlate("25", 4, "38.5", "340", BLACK),
    PresetPlate("10", 4, "26.5", "250", BLACK),
    PresetPlate("5", 4, "19", "190", BLACK),
    PresetPlate("2.5", 4, "12.5", "160", BLACK),
)

BELT_KG = (
    PresetPlate("25", 4, "27", "450", RED),
    PresetPlate("20", 2, "22.5", "450", BLUE),
    PresetPlate("15", 2, "21.5", "400", YELLOW),
    PresetPlate("10", 3, "21", "325", GREEN),
    PresetPlate("5", 3, "21", "228", WHITE),
    PresetPlate("2.5", 2, "16", "190", BLACK),
    PresetPlate("1.25", 2, "12", "160", STEEL),
    PresetPlate("0.5", 1, "8", "134", STEEL),
    PresetPlate("0.25", 1, "6", "112", STEEL),
)

BAR_LIFTS = (
    PresetLift("Squat", 0, "2.5"),
    PresetLift("Bench press", 0, "2.5"),
    PresetLift("Deadlift", 0, "2.5"),
)

RISING_BARS = (
    PresetTool("Men's bar", "bar", "20", "415", "2.5", "50"),
    PresetTool("Women's bar", "bar", "15", "320", "2.5", "50"),
)


def _rising(key: str, name: str, tool: int) -> Preset:
    """Both bars stand there; which one the lifts begin with is the only difference."""
    lifts = (PresetLift("Snatch", tool, "1"), PresetLift("Clean and jerk", tool, "1"))
    return Preset(key, name, "kg", "rising-bar", "Rising bar", RISING_BARS, KG_BUMPERS, lifts)


PRESETS = (
    Preset(
        "bar-kg",
        "Bar lifts, kg steel plates",
        "kg",
        "rounds-bar",
        "Bar lifts",
        (PresetTool("Power bar", "bar", "20", "415", "2.5", "50"),),
        KG_STEEL,
        BAR_LIFTS,
    ),
    Preset(
        "bar-lb",
        "Bar lifts, lb iron plates",
        "lb",
        "rounds-bar",
        "Bar lifts",
        (PresetTool("Power bar", "bar", "45", "415"),),
        LB_IRON,
        tuple(PresetLift(lift.name, lift.tool, "5") for lift in BAR_LIFTS),
    ),
    Preset(
        "belt-kg",
        "Belt lifts, kg steel plates",
        "kg",
        "rounds-belt",
        "Belt lifts",
        (PresetTool("Belt and chain", "belt", "0", "260"),),
        BELT_KG,
        (PresetLift("Muscle-up", 0, "1.25"), PresetLift("Pull-up", 0, "1.25"), PresetLift("Dip", 0, "1.25")),
    ),
    _rising("rising-men", "Snatch, clean and jerk: kg bumpers, men's bar 20 kg", 0),
    _rising("rising-women", "Snatch, clean and jerk: kg bumpers, women's bar 15 kg", 1),
)


def preset(key: str) -> Preset:
    """The preset with this key; KeyError if there is none."""
    return {one.key: one for one in PRESETS}[key]


def exact(text: str | None) -> Fraction | None:
    """A number of a preset as the exact fraction it is."""
    return None if text is None else Fraction(text)
