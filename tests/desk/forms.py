"""The Equipment page's forms as a browser would send them back unchanged."""

from __future__ import annotations

from fractions import Fraction

from app.loading.mass import show_mass
from app.store.picture import Picture


def _text(value: Fraction | None) -> str:
    return "" if value is None else show_mass(value)


def plate_rows(now: Picture) -> list[dict[str, str]]:
    """One row a plate."""
    return [
        {
            "face": show_mass(item.plate.face),
            "count": str(item.plate.count),
            "thickness": _text(item.plate.thickness_mm),
            "diameter": _text(item.plate.diameter_mm),
            "colour": item.colour,
        }
        for item in now.stock
    ]


def tool_rows(now: Picture) -> list[dict[str, str]]:
    """One row a bar or belt."""
    return [
        {
            "id": str(tool.id),
            "name": tool.name,
            "kind": tool.kind,
            "mass": show_mass(tool.implement.mass),
            "usable": _text(tool.implement.usable_mm),
            "collar_mass": "" if tool.collar is None else show_mass(tool.collar.mass),
            "collar_width": "" if tool.collar is None else _text(tool.collar.width_mm),
        }
        for tool in now.tools
    ]
