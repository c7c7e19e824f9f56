"""What one screen is told about itself: how far away it is read, how large it is, in which language, by whom.

Kept on the device, in one cookie of plain words that says nothing about people.
"""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from typing import Annotated
from urllib.parse import parse_qsl, urlencode

from fastapi import Depends
from starlette.requests import Request

from app.web.languages import LANGUAGES

SCREEN_COOKIE = "screen"
DISTANCES = ("2", "3", "4", "6")  # metres
ROLES = {
    "": "The whole crew",
    "left": "Left end",
    "right": "Right end",
    "hander": "Hands plates up",
    "rack": "Sets the rack",
    "alone": "One loader alone",
}
SMALLEST_IN, LARGEST_IN = 3.0, 200.0


@dataclass(frozen=True, slots=True)
class Screen:
    """The settings of one device; "" where nothing has been said."""

    distance: str = ""  # metres, one of DISTANCES
    diagonal: str = ""  # inches, "10.1"
    language: str = "en"
    role: str = ""

    @property
    def measured(self) -> bool:
        """Whether sizes in millimetres are known for it."""
        return bool(self.distance and self.diagonal)

    @property
    def distance_mm(self) -> int:
        """How high a digit must be, at 12 mm for each metre (``trade.md`` B, legibility)."""
        return 12 * int(self.distance) if self.distance else 0

    def cookie(self) -> str:
        """As the device keeps it."""
        return urlencode(
            {
                "distance": self.distance,
                "diagonal": self.diagonal,
                "language": self.language,
                "role": self.role,
            }
        )


def read_screen(said: Mapping[str, str]) -> Screen:
    """Settings from a form or a cookie; what cannot be is left out."""
    distance, role = said.get("distance", ""), said.get("role", "")
    language = said.get("language", "en")
    return Screen(
        distance=distance if distance in DISTANCES else "",
        diagonal=read_diagonal(said.get("diagonal", "")) or "",
        language=language if language in LANGUAGES else "en",
        role=role if role in ROLES else "",
    )


def read_diagonal(text: str) -> str | None:
    """Inches as a short decimal; "" when nothing was typed, None when it is no size of a screen."""
    text = text.strip().rstrip('"″').strip().replace(",", ".")
    if not text:
        return ""
    try:
        inches = float(text)
    except ValueError:
        return None
    return f"{inches:g}" if SMALLEST_IN <= inches <= LARGEST_IN else None


def the_screen(request: Request) -> Screen:
    """The settings of the device that asks."""
    try:
        said = dict(parse_qsl(request.cookies.get(SCREEN_COOKIE, ""), max_num_fields=12))
    except ValueError:
        said = {}  # no cookie of ours
    return read_screen(said)


ScreenDep = Annotated[Screen, Depends(the_screen)]
