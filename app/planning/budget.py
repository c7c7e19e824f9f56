"""How much memory and time one plan may take."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass


@dataclass(frozen=True, slots=True)
class Budget:
    """Limits of one plan. The pure rooms know no clock: without ``monotonic`` the seconds are not watched.

    ``memory_bytes`` bounds the planner's own arrays (estimated before they are made). ``seconds`` is when the
    search for a proof gives up and the best plan found is answered with a bound.
    """

    memory_bytes: int = 400_000_000
    seconds: float = 20.0
    monotonic: Callable[[], float] | None = None
