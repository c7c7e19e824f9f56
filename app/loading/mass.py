"""Exact masses: no float ever decides whether a weight can be made."""

from __future__ import annotations

import re
from decimal import Decimal
from fractions import Fraction

Mass = Fraction

MOST_DECIMALS = 12
LARGEST = 1_000_000
_PLAIN = re.compile(r"[+-]?(\d{1,40}(\.\d{0,40})?|\.\d{1,40})", re.ASCII)


def parse_mass(value: object) -> Fraction:
    """Read a mass (or any other measured decimal) exactly.

    Takes an int, a finite ``Decimal``, a decimal string or a float (read as the shortest decimal that
    prints the same, so ``0.1`` is one tenth). Raises ``ValueError`` with a plain sentence otherwise.

    >>> parse_mass("102.5"), parse_mass(0.1)
    (Fraction(205, 2), Fraction(1, 10))
    """
    if isinstance(value, bool) or not isinstance(value, int | float | str | Decimal | Fraction):
        raise ValueError(f"{_shown(value)} is not a number.")  # noqa: TRY004 - the reader catches one kind
    if isinstance(value, str) and not _PLAIN.fullmatch(value.strip()):
        raise ValueError(f"{_shown(value)} is not a decimal number such as 102.5.")
    if isinstance(value, int | Fraction):
        return _within(Fraction(value), value)
    number = Decimal(repr(value)) if isinstance(value, float) else Decimal(value)
    if not number.is_finite():
        raise ValueError(f"{_shown(value)} is not a finite number.")
    # Looked at before it is spelled out: 1e999999999 would fill the memory.
    if number and (number.adjusted() > 6 or number.adjusted() < -MOST_DECIMALS):
        return _within(None, value)
    return _within(Fraction(number), value)


def _within(number: Fraction | None, value: object) -> Fraction:
    if number is None or abs(number) > LARGEST:
        raise ValueError(f"{_shown(value)} is too large or too small for a mass.")
    if 10**MOST_DECIMALS % number.denominator:
        raise ValueError(f"{_shown(value)} has more than {MOST_DECIMALS} decimals.")
    return number


def _shown(value: object) -> str:
    if isinstance(value, int) and not isinstance(value, bool) and abs(value) > 10**20:
        return "A number of more than twenty digits"
    text = str(value) if isinstance(value, int | float | Decimal | Fraction) else repr(value)
    return text if len(text) <= 40 else text[:40] + "…"


def show_mass(mass: Fraction) -> str:
    """The shortest exact decimal: ``"102.5"``, ``"0.45359237"``, ``"5"``.

    Raises ``ValueError`` for a fraction that no finite decimal writes (a third).
    """
    if mass.denominator == 1:
        return str(mass.numerator)
    scale = 10 ** _decimals(mass.denominator)
    whole, rest = divmod(abs(mass.numerator) * (scale // mass.denominator), scale)
    sign = "-" if mass < 0 else ""
    return f"{sign}{whole}.{str(rest).zfill(len(str(scale)) - 1)}"


def _decimals(denominator: int) -> int:
    """How many decimals a fraction with this denominator needs."""
    for decimals in range(1, 64):
        if 10**decimals % denominator == 0:
            return decimals
    raise ValueError(f"No short decimal has the denominator {denominator}.")
