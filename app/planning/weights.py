"""Which targets can be made at all, and the refusal when one cannot."""

from __future__ import annotations

from fractions import Fraction

from app.loading.chart import TooManyWeights, loadable, nearest
from app.loading.equipment import Equipment
from app.loading.mass import show_mass
from app.planning.refusal import Refusal, bad_request


def shares(equipment: Equipment, targets: tuple[Fraction, ...]) -> tuple[Fraction, ...]:
    """One end's part of every target; refuses a target under the bar."""
    for target in targets:
        if target < equipment.base_mass:
            raise refuse_weight(equipment, target)
    return tuple((target - equipment.base_mass) / equipment.implement.ends for target in targets)


def refuse_weight(equipment: Equipment, target: Fraction) -> Refusal:
    """Why this weight cannot be made, and the nearest below and above that can."""
    try:
        below, above = nearest(equipment, target)
    except TooManyWeights as wrong:
        return bad_request("plates", str(wrong))
    code, because = _reason(equipment, target)
    ways = [show_mass(weight) for weight in (below, above) if weight is not None]
    offer = f" Nearest: {' or '.join(ways)}." if ways else ""
    return Refusal(code, because + offer, target=target, below=below, above=above)


def _reason(equipment: Equipment, target: Fraction) -> tuple[str, str]:
    base = equipment.base_mass
    if target < base:
        collars = " with its collars" if equipment.collar else ""
        bare = f"{show_mass(target)} is lighter than the empty bar{collars}, which weighs {show_mass(base)}."
        return "lighter-than-bar", bare
    roomy = Equipment(
        implement=type(equipment.implement)(equipment.implement.mass, equipment.implement.ends),
        collar=equipment.collar,
        plates=equipment.plates,
    )
    if equipment.implement.usable_mm is not None and loadable(roomy, target):
        room = show_mass(equipment.implement.usable_mm)
        return "no-room", f"The plates that make {show_mass(target)} do not fit the {room} mm of the sleeve."
    return "unloadable", f"{show_mass(target)} cannot be made with the plates at the platform."
