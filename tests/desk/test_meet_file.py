"""A whole meet as one file: out, in and out again; and every way in which a file can be damaged."""

from __future__ import annotations

import copy
import csv
import io
import json
import shutil
from collections.abc import Iterator
from pathlib import Path
from typing import Any

import pytest
from hypothesis import HealthCheck, example, given, settings
from hypothesis import strategies as st

from app.desk import meet_file
from app.desk.bar import bar_carries, hold_platform
from app.desk.board import Board, board
from app.desk.entry import Desk
from app.desk.errors import NotAllowedNow
from app.desk.people import withdraw
from app.desk.roster import import_roster, pictures
from app.desk.setup import start_meet
from app.desk.undo import redo, undo
from app.meet.model import Result
from app.store.engine import reading
from app.store.picture import NotFound, Picture
from tests.cast import ADA, BO, CLEO, OLGA, SQUAT, WANDA, Hall, open_desk
from tests.desk.checks import replayed, rows
from tests.desk.test_misload import LIGHTER, take
from tests.desk.test_undo import without_ten

Document = dict[str, Any]


@pytest.fixture
def elsewhere(empty_file: Path, tmp_path: Path) -> Iterator[Desk]:
    """Another folder, with another meet in it, so that no number stays what it was."""
    made = open_desk(Path(shutil.copy(empty_file, tmp_path / "elsewhere.db")))
    start_meet(made, "Somebody else's", "lb")
    yield made
    made.engine.dispose()


def busy(hall: Hall) -> None:
    """A morning of a meet: lifts, a remedy, undo and redo, plates taken out, a lifter gone, a hold."""
    hall.lift(ADA, 1, following="105")
    take(hall, ADA, LIGHTER, 1)
    hall.lift(BO, 1, Result.MISSED)
    undo(hall.desk, hall.platform_id, None, who=WANDA)
    redo(hall.desk, hall.platform_id, None, who=WANDA)
    without_ten(hall)
    undo(hall.desk, hall.platform_id, None, who=WANDA)
    withdraw(hall.desk, hall.platform_id, hall.lifter(CLEO).id, back=False, who=WANDA)
    hall.rules(default="forfeited")
    hold_platform(hall.desk, hall.platform_id, who=WANDA)


# Out, in and out again


def test_the_demo_goes_out_and_in_and_out_again_the_same_to_the_byte(
    demo_file: Path, tmp_path: Path, elsewhere: Desk
) -> None:
    demo = open_desk(Path(shutil.copy(demo_file, tmp_path / "demo.db")))
    text = meet_file.export_meet(demo, 1)
    made = meet_file.import_meet(elsewhere, text)
    assert made != 1
    assert meet_file.export_meet(elsewhere, made) == text
    demo.engine.dispose()


def test_a_busy_meet_with_deletions_and_undone_entries_comes_back_the_same(
    hall: Hall, elsewhere: Desk
) -> None:
    busy(hall)
    text = meet_file.export_meet(hall.desk, hall.meet_id)
    made = meet_file.import_meet(elsewhere, text)
    assert meet_file.export_meet(elsewhere, made) == text
    again = meet_file.import_meet(hall.desk, text)
    assert meet_file.export_meet(hall.desk, again) == text


def test_the_journal_of_a_meet_taken_in_still_tells_the_whole_meet(hall: Hall, elsewhere: Desk) -> None:
    busy(hall)
    made = meet_file.import_meet(elsewhere, meet_file.export_meet(hall.desk, hall.meet_id))
    there = Hall(elsewhere, made, next(p.platform_id for p in platforms(elsewhere, made)))
    entries = [one for one in there.journal() if one.meet_id == made]
    belongs = {("meet", made)} | {(edit["table"], edit["id"]) for one in entries for edit in one.edits}
    assert replayed(entries) == {at: row for at, row in rows(elsewhere.engine).items() if at in belongs}


def test_a_meet_taken_in_goes_on_where_it_was(hall: Hall, elsewhere: Desk) -> None:
    busy(hall)
    made = meet_file.import_meet(elsewhere, meet_file.export_meet(hall.desk, hall.meet_id))
    there = Hall(elsewhere, made, platforms(elsewhere, made)[0].platform_id)
    here = hall.board()
    assert there.order() == hall.order()
    assert [step.stack for step in there.board().steps] == [step.stack for step in here.steps]
    undo(there.desk, there.platform_id, None, who=WANDA)
    bar_carries(there.desk, there.platform_id, "empty", who=WANDA)
    undo(hall.desk, hall.platform_id, None, who=WANDA)
    assert there.order() == hall.order()


def test_a_meet_taken_in_leaves_the_others_alone(hall: Hall) -> None:
    before = rows(hall.desk.engine)
    text = meet_file.export_meet(hall.desk, hall.meet_id)
    meet_file.import_meet(hall.desk, text)
    after = rows(hall.desk.engine)
    assert {at: after[at] for at in before} == before
    assert meet_file.export_meet(hall.desk, hall.meet_id) == text


def test_a_meet_without_anybody_goes_out_and_in(elsewhere: Desk) -> None:
    text = meet_file.export_meet(elsewhere, 1)
    assert meet_file.export_meet(elsewhere, meet_file.import_meet(elsewhere, text)) == text


def platforms(desk: Desk, meet_id: int) -> list[Picture]:
    with reading(desk.engine) as session:
        return pictures(session, meet_id)


# Damaged files


@pytest.fixture(scope="module")
def document(ready_file: Path, tmp_path_factory: pytest.TempPathFactory) -> Document:
    """The file of a busy meet, read; copy it before it is damaged."""
    hall = Hall(open_desk(Path(shutil.copy(ready_file, tmp_path_factory.mktemp("file") / "meet.db"))))
    busy(hall)
    text = meet_file.export_meet(hall.desk, hall.meet_id)
    hall.desk.engine.dispose()
    found: Document = json.loads(text)
    return found


@pytest.fixture(scope="module")
def folder(empty_file: Path, tmp_path_factory: pytest.TempPathFactory) -> Iterator[Desk]:
    """A folder that damaged files are tried on; nothing may be left in it."""
    made = open_desk(Path(shutil.copy(empty_file, tmp_path_factory.mktemp("damaged") / "meet.db")))
    yield made
    made.engine.dispose()


def is_refused(desk: Desk, text: str) -> str:
    """The sentence with which a file is refused; nothing of it is left behind."""
    before = rows(desk.engine)
    with pytest.raises(NotAllowedNow) as told:
        meet_file.import_meet(desk, text)
    assert rows(desk.engine) == before
    words = str(told.value)
    assert words.endswith("Nothing was taken in.")
    assert "\n" not in words
    assert len(words) < 300
    return words


@pytest.mark.parametrize(
    ("text", "told"),
    [
        ("", "This is not a meet file: it is not JSON."),
        ("name,lot\n", "This is not a meet file: it is not JSON."),
        ("[" * 200_000, "This is not a meet file: it is not JSON."),
        ("[]", "This is not a meet file of this version of Platewright."),
        ('{"platewright meet": 99}', "This is not a meet file of this version of Platewright."),
        ('{"platewright meet": 1}', "The meet file is not complete."),
        ('{"platewright meet": 1, "tables": []}', "The meet file is not complete."),
        ('{"platewright meet": 1, "tables": {"meet": []}}', "The meet file is not complete."),
    ],
    ids=[
        "empty",
        "a roster",
        "deep",
        "a list",
        "another version",
        "no tables",
        "a list of tables",
        "one table",
    ],
)
def test_what_is_no_meet_file_is_said_so(folder: Desk, text: str, told: str) -> None:
    assert is_refused(folder, text) == f"{told} Nothing was taken in."


@pytest.mark.parametrize("table", ["meet", "platform", "lift", "attempt", "journal"])
def test_a_table_that_is_missing_is_no_whole_file(folder: Desk, document: Document, table: str) -> None:
    hurt = copy.deepcopy(document)
    del hurt["tables"][table]
    assert is_refused(folder, json.dumps(hurt)) == "The meet file is not complete. Nothing was taken in."


# table, column, what stands there now (row 0 of the table)
WRONG: list[tuple[str, str, Any]] = [
    ("attempt", "weight", "heavy"),
    ("attempt", "weight", "1e999"),
    ("attempt", "weight", "-100"),
    ("attempt", "result", "splendid"),
    ("attempt", "number", 0),
    ("attempt", "lifter_id", 999),
    ("attempt", "lifter_id", None),
    ("attempt", "lift_id", -1),
    ("attempt", "retake", "tomorrow"),
    ("attempt", "lifted_at", "yesterday"),
    ("attempt", "version", None),
    ("lifter", "flight_id", 77),
    ("lifter", "name", None),
    ("lifter", "lot", 10**30),
    ("lifter", "lot", "one"),
    ("lifter", "withdrawn", "perhaps"),
    ("lift", "step", "0"),
    ("lift", "step", "-2.5"),
    ("lift", "implement_id", 99),
    ("lift", "loading", {"measure": "beauty"}),
    ("lift", "loading", {"plate_s": "long"}),
    ("lift", "loading", ["plates"]),
    ("session", "rules", {"step": "zero"}),
    ("session", "rules", ["none"]),
    ("session", "rules", {"preset": "wild"}),
    ("platform", "condition", "asleep"),
    ("platform", "flight_id", 50),
    ("platform", "lift_id", 50),
    ("platform", "implement_id", 50),
    ("platform", "bar", ["25", "heavy"]),
    ("platform", "bar", "25"),
    ("platform", "bar", [25]),
    ("platform", "hand", {"attempt": 1}),
    ("platform", "hand", {"attempt": 1, "weight": "x", "before": None, "stack": [], "why": ""}),
    ("platform", "hand", "loading"),
    ("platform", "revision", -5),
    ("platform", "changed_at", "noon"),
    ("platform", "name", 7),
    ("plate", "count", -2),
    ("plate", "count", 10**9),
    ("plate", "face", "0"),
    ("plate", "face", "-25"),
    ("plate", "face", "1/3"),
    ("plate", "thickness_mm", "-1"),
    ("plate", "colour", "red; background: url(x)"),
    ("implement", "kind", "rope"),
    ("implement", "mass", "-20"),
    ("meet", "unit", "stone"),
    ("meet", "name", ""),
    ("journal", "edits", "none"),
    ("journal", "edits", [None]),
    ("journal", "edits", [{"table": "journal", "id": 1, "before": None, "after": None}]),
    ("journal", "edits", [{"table": "attempt", "id": 1, "before": {"colour": 1}, "after": {"colour": 2}}]),
    (
        "journal",
        "edits",
        [{"table": "attempt", "id": 1, "before": {"weight": "x"}, "after": {"weight": "y"}}],
    ),
    ("journal", "edits", [{"table": "attempt", "id": 1}]),
    ("journal", "undoes", 10**6),
    ("journal", "meet_id", 2),
    ("journal", "platform_id", 9),
]


@pytest.mark.parametrize(
    ("table", "column", "value"), WRONG, ids=[f"{at} {t} {c}" for at, (t, c, _) in enumerate(WRONG)]
)
def test_a_wrong_value_is_one_plain_sentence(
    folder: Desk, document: Document, table: str, column: str, value: Any
) -> None:
    hurt = copy.deepcopy(document)
    hurt["tables"][table][0][column] = value
    is_refused(folder, json.dumps(hurt))


def test_a_row_that_stands_twice_is_refused(folder: Desk, document: Document) -> None:
    for table in ("attempt", "lifter", "plate"):
        hurt = copy.deepcopy(document)
        hurt["tables"][table].append(dict(hurt["tables"][table][0]))
        is_refused(folder, json.dumps(hurt))


def test_a_column_too_many_or_too_few_is_refused(folder: Desk, document: Document) -> None:
    for change in ({"colour": "red"}, None):
        hurt = copy.deepcopy(document)
        if change:
            hurt["tables"]["lifter"][0] |= change
        else:
            del hurt["tables"]["lifter"][0]["lot"]
        is_refused(folder, json.dumps(hurt))


def test_a_lift_of_one_session_and_a_lifter_of_another_do_not_go_together(
    folder: Desk, demo_file: Path, tmp_path: Path
) -> None:
    """The demo has two platforms: a plate, a lift, an attempt must belong to the same one as what it hangs on."""
    demo = open_desk(Path(shutil.copy(demo_file, tmp_path / "demo.db")))
    whole = json.loads(meet_file.export_meet(demo, 1))
    demo.engine.dispose()
    belt_lift = whole["tables"]["lift"][-1]["row"]
    for table, column, value in (
        ("platform", "lift_id", belt_lift),
        ("platform", "flight_id", whole["tables"]["flight"][-1]["row"]),
        ("lift", "implement_id", whole["tables"]["implement"][-1]["row"]),
    ):
        hurt = copy.deepcopy(whole)
        hurt["tables"][table][0][column] = value
        is_refused(folder, json.dumps(hurt))


junk = st.one_of(
    st.none(),
    st.booleans(),
    st.integers(-5, 60),
    st.sampled_from([10**20, -(10**20), 1.5]),
    st.sampled_from(
        ["", "0", "-1", "2.5", "1e5", "NaN", "open", "good", "2026-03-07T09:00:00+00:00", "\x00", "=1+1"]
    ),
    st.text(max_size=5),
    st.lists(st.sampled_from(["25", "2.5", "x"]), max_size=3),
    st.dictionaries(
        st.sampled_from(["attempt", "weight", "stack", "before", "preset", "x"]), st.integers(), max_size=3
    ),
)


@settings(max_examples=60, deadline=None, suppress_health_check=[HealthCheck.function_scoped_fixture])
@given(data=st.data())
def test_whatever_is_changed_in_a_file_it_is_taken_in_whole_or_refused_in_words(
    folder: Desk, document: Document, data: st.DataObject
) -> None:
    """Taken in, its pages can be shown and it goes out again the same; refused, nothing of it is left."""
    hurt = copy.deepcopy(document)
    for _ in range(data.draw(st.integers(1, 2))):
        table = data.draw(st.sampled_from(sorted(hurt["tables"])))
        place = hurt["tables"][table]
        row = data.draw(st.integers(0, max(0, len(place) - 1)))
        how = data.draw(st.sampled_from(["change", "change", "change", "drop", "add", "row"]))
        if not place:
            continue
        if how == "drop":
            place.pop(row)
        elif how == "add":
            place.append(data.draw(junk))
        elif how == "row":
            place[row] = data.draw(junk)
        elif isinstance(place[row], dict):
            column = data.draw(st.sampled_from(sorted(place[row])))
            place[row][column] = data.draw(junk)
    text = json.dumps(hurt)
    before = rows(folder.engine)
    try:
        made = meet_file.import_meet(folder, text)
    except NotAllowedNow:
        assert rows(folder.engine) == before
        return
    out = meet_file.export_meet(folder, made)
    assert meet_file.export_meet(folder, meet_file.import_meet(folder, out)) == out
    for now in platforms(folder, made):
        shown = board(folder, now.platform_id)
        if isinstance(shown, Board):
            for _, _, programme in now.sessions:
                for flight in programme.flights:
                    for lift in programme.lifts:
                        board(folder, now.platform_id, flight.id, lift.id)


@settings(max_examples=40, deadline=None, suppress_health_check=[HealthCheck.function_scoped_fixture])
@example(text='{"platewright meet": 1, "tables": {"meet": [1]}}')
@given(text=st.text(max_size=200))
def test_any_text_is_refused_in_words(folder: Desk, text: str) -> None:
    is_refused(folder, text)


def test_a_huge_file_of_nothing_is_refused(folder: Desk) -> None:
    is_refused(
        folder, '{"platewright meet": 1, "tables": ' + json.dumps({"meet": [{"row": 1}] * 200_000}) + "}"
    )


# Results and journal


def read_csv(text: str) -> list[dict[str, str]]:
    return list(csv.DictReader(io.StringIO(text)))


def test_the_results_are_the_score_sheet_line_by_line(hall: Hall) -> None:
    hall.lift(ADA, 1, following="105")
    hall.lift(BO, 1, Result.MISSED)
    found = [one for one in meet_file.results(hall.desk, hall.meet_id) if one["lift"] == SQUAT]
    told = [(one["lifter"], one["attempt"], one["weight"], one["result"]) for one in found]
    assert told == [
        (BO, 1, "110", "no lift"),
        (CLEO, 1, "110", "not lifted"),
        (ADA, 1, "100", "good lift"),
        (ADA, 2, "105", "not lifted"),
        ("Dov Ekman", 1, "150", "not lifted"),
        ("Etta Frost", 1, "160", "not lifted"),
    ]
    assert found[0]["body weight"] == "74.2"
    table = read_csv(meet_file.as_csv(meet_file.RESULT_COLUMNS, found))
    assert [(one["lifter"], one["weight"]) for one in table] == [
        (one["lifter"], one["weight"]) for one in found
    ]


def test_the_journal_goes_out_whole(hall: Hall) -> None:
    busy(hall)
    told = meet_file.journal(hall.desk, hall.meet_id)
    assert [one["what"] for one in told] == [one.what for one in hall.journal()]
    assert [one["edits"] for one in told] == [one.edits for one in hall.journal()]
    assert json.loads(meet_file.as_json(told)) == told
    table = read_csv(meet_file.as_csv(meet_file.JOURNAL_COLUMNS, told))
    assert [one["what"] for one in table] == [one["what"] for one in told]


@pytest.mark.parametrize("name", ["=HYPERLINK(1)", "+1", "-1", "@SUM(1)", "\t=1"])
def test_a_cell_that_a_spreadsheet_would_run_is_set_off(hall: Hall, name: str) -> None:
    """A name from somebody's roster must not become a formula in somebody else's spreadsheet."""
    text = meet_file.as_csv(("lifter",), [{"lifter": name}])
    assert read_csv(text)[0]["lifter"] == "'" + name


def test_a_lifter_named_like_a_formula_goes_in_as_a_name_and_out_as_text(hall: Hall) -> None:
    import_roster(hall.desk, hall.meet_id, "name,lot,flight,Squat opener\n=1+1,6,Flight A,100\n", who=OLGA)
    found = meet_file.results(hall.desk, hall.meet_id)
    assert "=1+1" in {one["lifter"] for one in found}
    assert "'=1+1" in meet_file.as_csv(meet_file.RESULT_COLUMNS, found)


def test_the_files_of_a_meet_that_is_not_there_say_so(hall: Hall) -> None:
    for ask in (meet_file.export_meet, meet_file.results, meet_file.journal):
        with pytest.raises(NotFound):
            ask(hall.desk, 99)
