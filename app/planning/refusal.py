"""What the planner cannot do, said in one plain sentence with a way forward."""

from __future__ import annotations

from fractions import Fraction

from app.loading.mass import show_mass


class Refusal(Exception):
    """A request that has no plan. ``code`` is one of ``unloadable``, ``lighter-than-bar``, ``no-room`` and
    ``bad-request``; ``below`` and ``above`` are the nearest weights that can be made; ``key`` names what is
    wrong in a bad request."""

    def __init__(
        self,
        code: str,
        because: str,
        *,
        target: Fraction | None = None,
        below: Fraction | None = None,
        above: Fraction | None = None,
        key: str | None = None,
    ) -> None:
        super().__init__(because)
        self.code = code
        self.because = because
        self.target = target
        self.below = below
        self.above = above
        self.key = key


def bad_request(key: str, because: str) -> Refusal:
    """A refusal of one key of the request."""
    return Refusal("bad-request", _printable(because), key=_printable(key))


def _printable(text: str) -> str:
    """Half a character pair, which JSON can carry and UTF-8 cannot, must not break the answer."""
    return text.encode("utf-8", "replace").decode("utf-8")


def refusal_document(refusal: Refusal) -> dict[str, object]:
    """The refusal as the contract shows it, ready for JSON."""
    error: dict[str, object] = {"code": refusal.code, "because": refusal.because}
    if refusal.code == "bad-request":
        error["key"] = refusal.key
    else:
        error["target"] = _mass(refusal.target)
        error["below"] = _mass(refusal.below)
        error["above"] = _mass(refusal.above)
    return {"error": error}


def _mass(mass: Fraction | None) -> str | None:
    return None if mass is None else show_mass(mass)
