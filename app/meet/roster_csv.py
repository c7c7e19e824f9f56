"""The roster as a CSV file: read strictly, every wrong line named, written back the same way.

Columns: ``name`` and ``lot`` are needed; ``flight``, ``platform``, ``body weight`` and, for each lift,
``<lift> opener`` and ``<lift> rack`` may follow in any order. Without a flight column nobody has been placed
yet; where there is one, every line fills it. The platform is only needed where flight and
lifts do not tell where somebody lifts. Comma, semicolon or tab; a decimal comma is read where the columns
are not separated by commas.
"""

from __future__ import annotations

import csv
import io
from collections.abc import Callable, Sequence
from dataclasses import dataclass, field
from fractions import Fraction

from app.loading.mass import show_mass
from app.meet.declare import Refused, read_weight, sentence

NEEDED = ("name", "lot")
MOST_LINES = 2000
MOST_LETTERS = 80


@dataclass(frozen=True, slots=True)
class Entry:
    """One line of the roster, by its number in the file. ``openers`` and ``racks`` go by the lift's name.

    ``flight`` is "" where the roster has no such column.
    """

    name: str
    lot: int
    flight: str
    body_weight: Fraction | None = None
    openers: dict[str, Fraction] = field(default_factory=dict)
    racks: dict[str, str] = field(default_factory=dict)
    platform: str = ""
    line: int = field(default=0, compare=False)


@dataclass(frozen=True, slots=True)
class WrongLine:
    """A line that cannot be taken, by its number in the file (the header is line 1), and why."""

    line: int
    because: str


@dataclass(frozen=True, slots=True)
class Reading:
    """All lines read, or what is wrong with each that is wrong. With any wrong line nothing is to be taken."""

    entries: tuple[Entry, ...]
    wrong: tuple[WrongLine, ...]


CheckOpener = Callable[[str, str, str, Fraction], Refused | None]
"""(platform, flight, lift, weight) → why this opener cannot stand, or None."""


def read_roster(text: str, lifts: Sequence[str], check_opener: CheckOpener) -> Reading:
    """Read a roster. Nothing is guessed: an unknown column or a doubtful number is a wrong line."""
    try:
        table = _rows(text)
    except csv.Error as error:
        return Reading((), (WrongLine(1, f"This is not a CSV file: {error}."),))
    if not table:
        return Reading((), (WrongLine(1, "The roster is empty. The first line names the columns."),))
    header = table[0][1]
    columns: dict[str, int] = {}
    wrong = _read_header(header, lifts, columns)
    if len(table) - 1 > MOST_LINES:
        wrong.append(WrongLine(table[-1][0], f"More than {MOST_LINES} lines. Split the file."))
    if wrong:
        return Reading((), tuple(wrong))
    entries: list[Entry] = []
    seen: dict[int, int] = {}
    for number, cells in table[1:]:
        reader = _Line(number, cells, columns, lifts, check_opener)
        entry = reader.read()
        if entry is not None and entry.lot in seen:
            reader.complain(f"lot {entry.lot} stands already in line {seen[entry.lot]}.")
        if entry is not None and not reader.wrong:
            seen[entry.lot] = number
            entries.append(entry)
        wrong.extend(reader.wrong)
    if not entries and not wrong:
        wrong.append(WrongLine(2, "There is no lifter below the column names."))
    return Reading(() if wrong else tuple(entries), tuple(wrong))


def write_roster(entries: Sequence[Entry], lifts: Sequence[str]) -> str:
    """The roster in the form that :func:`read_roster` takes back unchanged."""
    out = io.StringIO()
    writer = csv.writer(out, lineterminator="\r\n")
    writer.writerow(["name", "lot", "flight", "platform", "body weight", *_lift_columns(lifts)])
    for entry in entries:
        weight = "" if entry.body_weight is None else show_mass(entry.body_weight)
        row = [_plain(entry.name), entry.lot, _plain(entry.flight), _plain(entry.platform), weight]
        for lift in lifts:
            opener = entry.openers.get(lift)
            row += ["" if opener is None else show_mass(opener), _plain(entry.racks.get(lift, ""))]
        writer.writerow(row)
    return out.getvalue()


def _plain(text: str) -> str:
    """Text that no spreadsheet will run: a leading = + - @ is set off by an apostrophe, taken off on reading."""
    return f"'{text}" if _would_run(text) else text


def _bare(text: str) -> str:
    """Undoes :func:`_plain`, and only that: a name may begin with an apostrophe of its own."""
    return text[1:] if text[:1] == "'" and _would_run(text) else text


def _would_run(text: str) -> bool:
    """Also behind apostrophes: else one that stands before a formula already would be taken for ours."""
    return text.lstrip("'")[:1] in tuple("=+-@")


def _lift_columns(lifts: Sequence[str]) -> list[str]:
    return [f"{lift} {what}" for lift in lifts for what in ("opener", "rack")]


def _rows(text: str) -> list[tuple[int, list[str]]]:
    """The lines that are not blank, with the number of the line each begins on."""
    text = text.removeprefix("\ufeff").replace("\x00", "")
    first = text.partition("\n")[0]
    delimiter = max(",;\t", key=first.count)
    reader = csv.reader(io.StringIO(text, newline=""), delimiter=delimiter)
    rows: list[tuple[int, list[str]]] = []
    begins = 1
    for cells in reader:
        if any(cell.strip() for cell in cells):
            rows.append((begins, [cell.strip() for cell in cells]))
        begins = reader.line_num + 1
    return rows


def _read_header(header: Sequence[str], lifts: Sequence[str], columns: dict[str, int]) -> list[WrongLine]:
    known = {
        name.casefold(): name
        for name in (*NEEDED, "flight", "platform", "body weight", *_lift_columns(lifts))
    }
    wrong: list[WrongLine] = []
    for place, title in enumerate(header):
        name = known.get(" ".join(title.split()).casefold())
        if name is None:
            allowed = ", ".join(known.values())
            wrong.append(WrongLine(1, f"unknown column “{title}”. Known columns: {allowed}."))
        elif name in columns:
            wrong.append(WrongLine(1, f"column “{name}” stands twice."))
        else:
            columns[name] = place
    wrong += [WrongLine(1, f"column “{name}” is missing.") for name in NEEDED if name not in columns]
    return wrong


@dataclass(slots=True)
class _Line:
    """One line being read; collects everything that is wrong with it, not just the first thing."""

    number: int
    cells: Sequence[str]
    columns: dict[str, int]
    lifts: Sequence[str]
    check_opener: CheckOpener
    wrong: list[WrongLine] = field(default_factory=list)

    def complain(self, because: str) -> None:
        self.wrong.append(WrongLine(self.number, because))

    def cell(self, name: str) -> str:
        place = self.columns.get(name)
        return self.cells[place] if place is not None and place < len(self.cells) else ""

    def read(self) -> Entry | None:
        if len(self.cells) > len(self.columns):
            self.complain(f"{len(self.cells)} fields, but there are {len(self.columns)} columns.")
            return None
        name, flight = self._text("name"), self._text("flight") if "flight" in self.columns else ""
        platform = _bare(self.cell("platform"))
        self._check_length("platform", platform)
        lot = self._lot()
        body_weight = self._mass("body weight", "body weight")
        openers, racks = {}, {}
        for lift in self.lifts:
            opener = self._opener(platform, flight, lift)
            if opener is not None:
                openers[lift] = opener
            rack = _bare(self.cell(f"{lift} rack"))
            self._check_length(f"{lift} rack", rack)
            if rack:
                racks[lift] = rack
        if self.wrong or lot is None:
            return None
        return Entry(name, lot, flight, body_weight, openers, racks, platform, self.number)

    def _text(self, name: str) -> str:
        text = _bare(self.cell(name))
        if not text:
            self.complain(f"{name} is empty.")
        self._check_length(name, text)
        return text

    def _check_length(self, name: str, text: str) -> None:
        if len(text) > MOST_LETTERS:
            self.complain(f"{name} is longer than {MOST_LETTERS} letters.")

    def _lot(self) -> int | None:
        text = self.cell("lot")
        if text.isascii() and text.isdigit() and int(text[:6]) > 0 and len(text) <= 5:
            return int(text)
        self.complain(f"lot “{text}” is not a whole number from 1 to 99999.")
        return None

    def _mass(self, column: str, what: str) -> Fraction | None:
        text = self.cell(column)
        if not text:
            return None
        read = read_weight(text)
        if isinstance(read, Refused):
            self.complain(f"{what}: {sentence(read)}")
            return None
        return read.weight

    def _opener(self, platform: str, flight: str, lift: str) -> Fraction | None:
        weight = self._mass(f"{lift} opener", f"{lift} opener")
        if weight is None:
            return None
        refused = self.check_opener(platform, flight, lift, weight)
        if refused is not None:
            self.complain(f"{lift} opener: {sentence(refused)}")
            return None
        return weight
