"""``platewright check`` finds any value that is not as the journal has it, and any load that does not add up."""

from __future__ import annotations

import json
import shutil
import sqlite3
from collections.abc import Iterator
from contextlib import closing, contextmanager
from pathlib import Path
from typing import Any

import pytest

from app.desk.check_data import check_file
from app.desk.equipment import save_plates, stock_seen
from app.meet.model import Result
from app.store.journal import NOT_KEPT
from app.store.replay import entries, play, stored
from app.store.sound import reading_file
from app.store.tables import TABLES
from tests.cast import ADA, BO, OLGA, Hall, open_desk
from tests.desk.checks import replayed, rows
from tests.desk.forms import plate_rows
from tests.durability.entering import enter
from tests.serving import Done, platewright_here


@pytest.fixture
def meet(ready_file: Path, tmp_path: Path) -> Path:
    """A data folder whose meet has a lift, an undo's worth of changes and an instruction that is out."""
    file = Path(shutil.copy(ready_file, tmp_path / "meet.db"))
    hall = Hall(open_desk(file))
    hall.lift(ADA, 1, Result.GOOD, following="105")
    enter(hall, "120")
    hall.desk.engine.dispose()
    return file


def check(meet: Path) -> Done:
    return platewright_here("check", "--data", str(meet.parent))


@contextmanager
def tampered(meet: Path) -> Iterator[sqlite3.Connection]:
    """Write into the file past the program, all of it taken back afterwards."""
    before = meet.read_bytes()
    with closing(sqlite3.connect(meet)) as connection:
        yield connection
    meet.write_bytes(before)


def test_a_meet_that_is_in_order_is_told_in_sentences_with_status_0(meet: Path) -> None:
    done = check(meet)
    assert (done.status, done.err) == (0, "")
    assert done.out.splitlines() == [
        "The file is whole.",
        "Every reference leads to something that is there.",
        "The journal's 8 entries lead to just what is stored.",
        "2 instructions given so far and 9 planned loads add up to the weight, from plates that were there.",
        f"{meet} is in order.",
    ]


def test_the_demos_journal_leads_to_what_the_demo_is(demo_file: Path) -> None:
    """Against the tests' own replay and their own reading of the tables, which share no code with the program's."""
    desk = open_desk(demo_file)
    with reading_file(demo_file) as session:
        state: dict[tuple[str, int], dict[str, Any]] = {}
        journal = entries(session)
        assert [sentence for entry in journal for sentence in play(state, entry)] == []
        assert state == replayed(journal) == rows(desk.engine) == stored(session)
    desk.engine.dispose()
    assert check_file(demo_file).wrong == []


def test_it_may_be_asked_while_the_server_works_and_sees_the_last_entry(hall: Hall) -> None:
    enter(hall, "120")
    report = check_file(Path(hall.desk.engine.url.database or ""))
    assert (report.wrong, report.newest) == ([], hall.journal()[-1].id)
    enter(hall, "122.5")


def other_value(value: object) -> object:
    """A value of the same kind that is another one."""
    if isinstance(value, int):
        return value + 1000
    if value is None:
        return None
    text = str(value) or "x"
    if text[:1] in "[{":
        return json.dumps({"other": 1} if text[0] == "{" else ["1"])
    if text[:4] == "2026":
        return text.replace("2026", "2025")
    return f"{int(text) + 1}" if text.isdigit() else f"1{text}"


def test_any_column_of_any_table_that_was_changed_past_the_program_is_found(meet: Path) -> None:
    tried = 0
    for table, kind in TABLES.items():
        for column in sorted(set(kind.model_fields) - {"id"} - NOT_KEPT.get(table, set())):
            with tampered(meet) as connection:
                found = connection.execute(
                    f"SELECT id, {column} FROM {table} WHERE {column} IS NOT NULL ORDER BY id LIMIT 1"
                ).fetchone()
                if found is None:
                    continue
                connection.execute(
                    f"UPDATE {table} SET {column} = ? WHERE id = ?", (other_value(found[1]), found[0])
                )
                connection.commit()
                tried += 1
                assert check_file(meet).wrong != [], (table, column)
    assert tried > 50


@pytest.mark.parametrize(
    ("change", "sentence"),
    [
        (
            "UPDATE attempt SET weight = '142.5' WHERE weight = '120' AND number = 2",
            "the journal leads to weight 120, the file has 142.5.",
        ),
        ("DELETE FROM rack WHERE id = 1", "rack 1: the journal knows it and the file does not."),
        (
            "INSERT INTO rack (lifter_id, lift_id, setting) SELECT lifter_id, 2, '7' FROM rack LIMIT 1",
            "no entry made it.",
        ),
        ("DELETE FROM journal WHERE id = 3", "which was not there."),
        ("UPDATE platform SET flight_id = 99", "platform 1 speaks of flight 99, which is not there."),
        ("UPDATE lifter SET flight_id = 99 WHERE id = 1", "lifter 1 speaks of a flight that is not there."),
        ("UPDATE platform SET revision = 1", "Hall stands at revision 1, and entry by entry it had reached"),
        ("UPDATE attempt SET weight = 'heavy' WHERE id = 1", "Something in the file cannot be read: "),
    ],
)
def test_what_is_wrong_is_said_in_a_plain_sentence_with_status_2(
    meet: Path, change: str, sentence: str
) -> None:
    with closing(sqlite3.connect(meet)) as connection:
        connection.execute(change)
        connection.commit()
    done = check(meet)
    assert done.status == 2
    assert done.err.splitlines()[0] == f"{meet} is NOT in order."
    assert sentence in done.err
    assert "Traceback" not in done.err


def rewrite(meet: Path, query: str, change: str, alter: Any) -> None:
    """Alter the JSON of one stored value."""
    with closing(sqlite3.connect(meet)) as connection:
        (value,) = connection.execute(query).fetchone()
        connection.execute(change, (json.dumps(alter(json.loads(value))),))
        connection.commit()


def test_a_planned_load_that_does_not_make_its_weight_is_found(meet: Path) -> None:
    def heavier(plan: dict[str, Any]) -> dict[str, Any]:
        plan["steps"][0]["stack"].insert(0, "25")
        return plan

    rewrite(meet, "SELECT plan FROM platform", "UPDATE platform SET plan = ?", heavier)
    done = check(meet)
    assert done.status == 2
    assert "The plan of Hall: The stack makes" in done.err


def test_an_instruction_that_ever_went_out_wrong_is_found_in_the_journal(meet: Path) -> None:
    """The line that gave Ada's first change, and the ones after it, tell of a stack that is 5 kg short."""

    def lighter(edits: list[dict[str, Any]]) -> list[dict[str, Any]]:
        return json.loads(json.dumps(edits).replace('"stack": ["25", "10", "2.5"]', '"stack": ["25", "10"]'))

    for number in range(1, 9):
        rewrite(
            meet,
            f"SELECT edits FROM journal WHERE id = {number}",
            f"UPDATE journal SET edits = ? WHERE id = {number}",
            lighter,
        )
    done = check(meet)
    assert done.status == 2
    assert "Hall: The stack makes 95, not the 100 asked for." in done.err


def test_plates_that_were_taken_away_later_make_no_earlier_instruction_wrong(hall: Hall) -> None:
    now = hall.picture()
    left = [row for row in plate_rows(now) if row["face"] != "2.5"]  # it is in the change that is out
    save_plates(hall.desk, hall.platform_id, left, stock_seen(now.stock, now.tools), who=OLGA)
    hall.lift(ADA, 1)
    hall.lift(BO, 1)
    assert check_file(Path(hall.desk.engine.url.database or "")).wrong == []


@pytest.mark.parametrize("content", [b"", b"this is no database at all" * 400])
def test_a_file_that_is_none_of_ours_is_said(tmp_path: Path, content: bytes) -> None:
    (tmp_path / "meet.db").write_bytes(content)
    done = platewright_here("check", "--data", str(tmp_path))
    assert done.status == 2
    assert "is NOT in order." in done.err
    assert "Traceback" not in done.err


def test_a_folder_without_a_meet_is_said(tmp_path: Path) -> None:
    done = platewright_here("check", "--data", str(tmp_path / "nowhere"))
    assert (done.status, done.out) == (2, "")
    assert done.err == f"There is no meet in {tmp_path / 'nowhere'}: nothing was checked.\n"
    assert not (tmp_path / "nowhere").exists()
