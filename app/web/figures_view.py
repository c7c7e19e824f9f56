"""The table of figures, and its picture: what each choice of settings would cost on one list of weights."""

from __future__ import annotations

from dataclasses import dataclass
from fractions import Fraction

from app.desk.lift_loading import WORDS
from app.desk.wish import Wish
from app.loading.mass import show_mass
from app.planning import Choice, Figures, Frontier

WIDTH, HEIGHT, EDGE = 640, 360, 56


@dataclass(frozen=True, slots=True)
class FigureRow:
    """One choice with its figures, for one end."""

    number: int
    extra_plates: str
    aim: str
    measure: str
    words: tuple[str, str, str]
    plates: str
    mass: str
    worst_plates: str
    worst_mass: str
    proved: bool
    standing: bool  # what the lift has now


@dataclass(frozen=True, slots=True)
class Dot:
    """One or several choices that cost the same, as a point of the picture."""

    x: int
    y: int
    label: str
    chart: bool
    standing: bool


@dataclass(frozen=True, slots=True)
class FiguresView:
    """Rows from the cheapest in kilograms, the chart's own figures, and the picture."""

    unit: str
    rows: tuple[FigureRow, ...]
    chart: tuple[str, str, str, str] | None
    dots: tuple[Dot, ...]
    ticks_x: tuple[tuple[int, str], ...]
    ticks_y: tuple[tuple[int, str], ...]
    width: int
    height: int
    edge: int


def figures_view(found: Frontier, unit: str, standing: Wish) -> FiguresView:
    """The table in the words of the page; equal figures share a dot."""
    choices = sorted(found.choices, key=lambda one: (one.total.mass, one.total.plates, one.worst.plates))
    rows = tuple(_row(number, one, standing) for number, one in enumerate(choices, start=1))
    points = {(one.total.plates, one.total.mass) for one in choices}
    if found.chart is not None:
        points.add((found.chart.total.plates, found.chart.total.mass))
    frame = _Frame(points)
    return FiguresView(
        unit=unit,
        rows=rows,
        chart=None if found.chart is None else _four(found.chart.total, found.chart.worst),
        dots=tuple(_dots(found, choices, rows, frame)),
        ticks_x=frame.ticks(0),
        ticks_y=frame.ticks(1),
        width=WIDTH,
        height=HEIGHT,
        edge=EDGE,
    )


def _four(total: Figures, worst: Figures) -> tuple[str, str, str, str]:
    return str(total.plates), show_mass(total.mass), str(worst.plates), show_mass(worst.mass)


def _row(number: int, one: Choice, standing: Wish) -> FigureRow:
    plates, mass, worst_plates, worst_mass = _four(one.total, one.worst)
    return FigureRow(
        number=number,
        extra_plates=str(one.extra_plates),
        aim=one.aim.value,
        measure=one.measure.value,
        words=(
            WORDS["measure"][one.measure],
            WORDS["aim"][one.aim],
            WORDS["extra_plates"][str(one.extra_plates)],
        ),
        plates=plates,
        mass=mass,
        worst_plates=worst_plates,
        worst_mass=worst_mass,
        proved=one.proof == "optimal",
        standing=(one.extra_plates, one.aim, one.measure)
        == (standing.extra_plates, standing.aim, standing.measure),
    )


class _Frame:
    """Where plates (across) and mass (up) lie in the picture."""

    def __init__(self, points: set[tuple[int, Fraction]]) -> None:
        self.low = min(p for p, _ in points), min(m for _, m in points)
        self.high = max(p for p, _ in points), max(m for _, m in points)

    def at(self, plates: int, mass: Fraction) -> tuple[int, int]:
        x = EDGE + self._share(0, plates) * (WIDTH - 2 * EDGE)
        y = HEIGHT - EDGE - self._share(1, mass) * (HEIGHT - 2 * EDGE)
        return round(x), round(y)

    def _share(self, axis: int, value: Fraction | int) -> Fraction:
        span = self.high[axis] - self.low[axis]
        return Fraction(value - self.low[axis]) / span if span else Fraction(1, 2)

    def ticks(self, axis: int) -> tuple[tuple[int, str], ...]:
        """The least and the largest value with their places along the axis."""
        ends = sorted({Fraction(self.low[axis]), Fraction(self.high[axis])})
        if axis == 0:
            return tuple((self.at(int(end), self.low[1])[0], show_mass(end)) for end in ends)
        return tuple((self.at(self.low[0], end)[1], show_mass(end)) for end in ends)


def _dots(found: Frontier, choices: list[Choice], rows: tuple[FigureRow, ...], frame: _Frame) -> list[Dot]:
    alike: dict[tuple[int, Fraction], list[FigureRow]] = {}
    for one, row in zip(choices, rows, strict=True):
        alike.setdefault((one.total.plates, one.total.mass), []).append(row)
    dots = [
        Dot(*frame.at(*point), label=_numbers(here), chart=False, standing=any(row.standing for row in here))
        for point, here in alike.items()
    ]
    if found.chart is not None:
        x, y = frame.at(found.chart.total.plates, found.chart.total.mass)
        dots.append(Dot(x, y, "chart", chart=True, standing=False))
    return dots


def _numbers(rows: list[FigureRow]) -> str:
    """``3`` or ``3–7`` or ``3, 9``: the rows that this dot stands for."""
    numbers = [row.number for row in rows]
    if len(numbers) > 2 and numbers[-1] - numbers[0] == len(numbers) - 1:
        return f"{numbers[0]}–{numbers[-1]}"
    return ", ".join(map(str, numbers[:3])) + ("…" if len(numbers) > 3 else "")
