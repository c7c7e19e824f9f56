"""How a transaction's changes become the edits of one journal line, and how a line is put back."""

from __future__ import annotations

from datetime import UTC, datetime
from fractions import Fraction

import pytest
from sqlmodel import Session, select

from app.desk.entry import Desk
from app.store.engine import writing
from app.store.journal import CannotUndo, Edit, Recorder, plain, put_back, unplain
from app.store.tables import MeetRow, PlateRow, PlatformRow

AT = datetime(2026, 3, 7, 9, 0, tzinfo=UTC)


def platform(session: Session) -> int:
    """A meet with a platform, written before any recorder listens."""
    meet = MeetRow(name="Harbour Cup", created_at=AT)
    session.add(meet)
    session.flush()
    row = PlatformRow(meet_id=meet.id, name="Hall", changed_at=AT)
    session.add(row)
    session.flush()
    return row.id or 0


def plate(session: Session, **values) -> PlateRow:
    row = PlateRow(**({"platform_id": 1, "face": Fraction(25), "count": 2} | values))
    session.add(row)
    session.flush()
    return row


ALL = {
    "id": 1,
    "platform_id": 1,
    "face": "25",
    "count": 2,
    "thickness_mm": None,
    "diameter_mm": None,
    "colour": "#777777",
}


def test_a_new_row_a_changed_row_and_a_row_taken_away_are_one_edit_each(desk: Desk) -> None:
    with writing(desk.engine) as session:
        platform(session)
        changed, gone = plate(session), plate(session, face=Fraction(20))
        recorder = Recorder(session)
        plate(session, face=Fraction("2.5"))
        changed.thickness_mm = Fraction(27)
        session.delete(gone)
        edits = sorted(recorder.edits(), key=lambda edit: edit["id"])
        assert edits == [
            {"table": "plate", "id": 1, "before": {"thickness_mm": None}, "after": {"thickness_mm": "27"}},
            {"table": "plate", "id": 2, "before": ALL | {"id": 2, "face": "20"}, "after": None},
            {"table": "plate", "id": 3, "before": None, "after": ALL | {"id": 3, "face": "2.5"}},
        ]


def test_several_steps_are_one_edit_from_the_first_before_to_the_last_after(desk: Desk) -> None:
    with writing(desk.engine) as session:
        platform(session)
        row = plate(session)
        recorder = Recorder(session)
        for count in (4, 6, 8):
            row.count = count
            session.flush()
        row.colour = "#000000"
        assert recorder.edits() == [
            {
                "table": "plate",
                "id": 1,
                "before": {"count": 2, "colour": "#777777"},
                "after": {"count": 8, "colour": "#000000"},
            }
        ]


def test_what_ends_as_it_began_is_no_edit(desk: Desk) -> None:
    with writing(desk.engine) as session:
        platform(session)
        row = plate(session)
        recorder = Recorder(session)
        row.count = 4
        session.flush()
        row.count = 2
        passing = plate(session, face=Fraction(5))
        session.delete(passing)
        assert recorder.edits() == []


def test_revision_time_and_plan_of_a_platform_are_no_edits(desk: Desk) -> None:
    with writing(desk.engine) as session:
        platform(session)
        row = session.exec(select(PlatformRow)).one()
        recorder = Recorder(session)
        row.revision, row.plan, row.changed_at = 7, {"steps": []}, AT.replace(hour=10)
        assert recorder.edits() == []


@pytest.mark.parametrize(
    ("column", "value", "held"),
    [
        ("weight", Fraction("102.5"), "102.5"),
        ("weight", None, None),
        ("entered_at", AT, "2026-03-07T09:00:00+00:00"),
        ("result", "good", "good"),
        ("version", 3, 3),
    ],
)
def test_a_value_goes_into_the_journal_and_comes_back_the_same(column: str, value, held) -> None:
    """A time came back as text, and the undo of every result failed on it."""
    assert plain(value) == held
    back = unplain("attempt", column, held)
    assert (back, type(back)) == (value, type(value))


def test_a_line_is_put_back_whole(desk: Desk) -> None:
    with writing(desk.engine) as session:
        platform(session)
        changed, gone = plate(session), plate(session, face=Fraction(20))
        recorder = Recorder(session)
        new = plate(session, face=Fraction(5))
        changed.count = 6
        session.delete(gone)
        put_back(session, recorder.edits(), "plates changed")
        found = {row.id: (row.face, row.count) for row in session.exec(select(PlateRow))}
        assert found == {1: (25, 2), 2: (20, 2)}
        assert new not in session


def test_plates_that_swapped_their_faces_are_put_back_though_no_face_may_stand_twice(desk: Desk) -> None:
    with writing(desk.engine) as session:
        platform(session)
        first, second = plate(session), plate(session, face=Fraction(20))
        recorder = Recorder(session)
        for row, face in ((first, "1"), (second, "25"), (first, "20")):
            row.face = Fraction(face)
            session.flush()
        edits = recorder.edits()
        assert [(edit["before"], edit["after"]) for edit in edits] == [
            ({"face": "25"}, {"face": "20"}),
            ({"face": "20"}, {"face": "25"}),
        ]


def four_plates(desk: Desk) -> list[Edit]:
    """An entry that makes two plates four; its edits."""
    with writing(desk.engine) as session:
        platform(session)
        plate(session)
    with writing(desk.engine) as session:
        recorder = Recorder(session)
        session.get_one(PlateRow, 1).count = 4
        return recorder.edits()


def test_a_row_that_was_changed_since_is_not_put_back(desk: Desk) -> None:
    edits = four_plates(desk)
    with writing(desk.engine) as session:
        session.get_one(PlateRow, 1).count = 6
    with writing(desk.engine) as session:
        with pytest.raises(CannotUndo) as told:
            put_back(session, edits, "plates changed")
        assert str(told.value) == "“plates changed” cannot be undone: it has been changed again since."


def test_a_row_that_has_gone_since_is_not_put_back(desk: Desk) -> None:
    edits = four_plates(desk)
    with writing(desk.engine) as session:
        session.delete(session.get_one(PlateRow, 1))
    with writing(desk.engine) as session, pytest.raises(CannotUndo):
        put_back(session, edits, "plates changed")
