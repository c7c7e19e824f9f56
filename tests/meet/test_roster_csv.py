"""The roster as CSV: what is written is read back the same, and every wrong line is named with its reason."""

from __future__ import annotations

from fractions import Fraction

import pytest
from hypothesis import given
from hypothesis import strategies as st

from app.meet.declare import Refused
from app.meet.roster_csv import Entry, WrongLine, read_roster, write_roster

LIFTS = ("Squat", "Bench press")
HEADER = "name,lot,flight,body weight,Squat opener,Squat rack,Bench press opener,Bench press rack"


def takes_all(_platform: str, _flight: str, _lift: str, _weight: Fraction) -> None:
    """Every opener may stand."""
    return


def read(text: str, check=takes_all):
    return read_roster(text, LIFTS, check)


def wrong(*lines: str, header: str = HEADER, check=takes_all) -> list[tuple[int, str]]:
    """What is wrong with these lines, when nothing may be taken then."""
    reading = read("\n".join([header, *lines]), check)
    assert reading.wrong == () or reading.entries == ()
    return [(one.line, one.because) for one in reading.wrong]


def test_a_roster_is_read_line_by_line() -> None:
    reading = read(HEADER + "\nAda Brook,3,Flight A,61.5,100,9 in,60,\nBo Carver,1,Flight A,,,,,\n")
    assert reading.wrong == ()
    assert reading.entries == (
        Entry(
            "Ada Brook",
            3,
            "Flight A",
            Fraction("61.5"),
            {"Squat": Fraction(100), "Bench press": Fraction(60)},
            {"Squat": "9 in"},
        ),
        Entry("Bo Carver", 1, "Flight A"),
    )
    assert [entry.line for entry in reading.entries] == [2, 3]


def test_the_columns_may_stand_in_any_order_and_case_and_the_optional_ones_may_be_missing() -> None:
    reading = read("FLIGHT, squat   Opener ,Lot,Name\nFlight A,100,3,Ada Brook\n")
    assert reading.entries == (Entry("Ada Brook", 3, "Flight A", None, {"Squat": Fraction(100)}),)


@pytest.mark.parametrize("delimiter", [";", "\t"], ids=["semicolon", "tab"])
def test_a_decimal_comma_is_read_where_the_columns_are_not_separated_by_commas(delimiter: str) -> None:
    lines = ["name|lot|flight|body weight|Squat opener", "Ada Brook|3|Flight A|61,5|102,5"]
    reading = read("\n".join(lines).replace("|", delimiter))
    assert reading.entries == (
        Entry("Ada Brook", 3, "Flight A", Fraction("61.5"), {"Squat": Fraction("102.5")}),
    )


@pytest.mark.parametrize("ends", ["\n", "\r\n", "\r"], ids=["unix", "windows", "old mac"])
def test_a_byte_order_mark_blank_lines_and_any_line_ends_are_fine(ends: str) -> None:
    text = ends.join(["name,lot,flight", "", "Ada Brook,3,Flight A", " , , ", "Bo Carver,1,Flight A"])
    reading = read("\ufeff" + text)
    assert [(entry.name, entry.line) for entry in reading.entries] == [("Ada Brook", 3), ("Bo Carver", 5)]


def test_a_line_break_inside_quotes_belongs_to_the_name_and_the_lines_after_it_keep_their_numbers() -> None:
    reading = read('name,lot,flight\n"Ada\nBrook",3,Flight A\nBo Carver,x,Flight A\n')
    assert reading.wrong == (WrongLine(4, "lot “x” is not a whole number from 1 to 99999."),)


WRONG_LINES = {
    "no name": (",3,Flight A", "name is empty."),
    "no flight": ("Ada,3,", "flight is empty."),
    "a name too long": (f"{'A' * 81},3,Flight A", "name is longer than 80 letters."),
    "a flight too long": (f"Ada,3,{'A' * 81}", "flight is longer than 80 letters."),
    "no lot": ("Ada,,Flight A", "lot “” is not a whole number from 1 to 99999."),
    "lot nought": ("Ada,0,Flight A", "lot “0” is not a whole number from 1 to 99999."),
    "a lot below nought": ("Ada,-3,Flight A", "lot “-3” is not a whole number from 1 to 99999."),
    "half a lot": ("Ada,3.5,Flight A", "lot “3.5” is not a whole number from 1 to 99999."),
    "a huge lot": ("Ada,100000,Flight A", "lot “100000” is not a whole number from 1 to 99999."),
    "a lot in Arabic digits": ("Ada,٣,Flight A", "lot “٣” is not a whole number from 1 to 99999."),
    "body weight in words": (
        "Ada,3,Flight A,light",
        "body weight: “light” is not a weight. Type a number such as 142.5.",
    ),
    "body weight below nought": ("Ada,3,Flight A,-60", "body weight: A weight cannot be less than 0."),
    "opener in words": (
        "Ada,3,Flight A,60,heavy",
        "Squat opener: “heavy” is not a weight. Type a number such as 142.5.",
    ),
    "opener not a number": (
        "Ada,3,Flight A,60,NaN",
        "Squat opener: “NaN” is not a weight. Type a number such as 142.5.",
    ),
    "an opener that no bar carries": (
        "Ada,3,Flight A,60,1000000",
        "Squat opener: 1000000 is more than any bar carries. Check the number.",
    ),
    "a rack too long": (f"Ada,3,Flight A,60,100,{'9' * 81}", "Squat rack is longer than 80 letters."),
    "too many fields": ("Ada,3,Flight A,60,100,9,60,7,x", "9 fields, but there are 8 columns."),
}


@pytest.mark.parametrize(("line", "because"), WRONG_LINES.values(), ids=list(WRONG_LINES))
def test_a_wrong_line_is_named_by_number_and_reason(line: str, because: str) -> None:
    assert wrong("Bo Carver,1,Flight A", line) == [(3, because)]


def test_an_opener_that_the_rules_refuse_is_told_with_what_would_be_right() -> None:
    def refuses(_platform: str, flight: str, lift: str, weight: Fraction) -> Refused:
        return Refused(f"{flight}, {lift}: {weight} will not do.", Fraction(100), Fraction("102.5"))

    assert wrong("Ada,3,Flight A,60,101", check=refuses) == [
        (2, "Squat opener: Flight A, Squat: 101 will not do. Nearest: 100 or 102.5.")
    ]


def test_a_lot_that_stands_twice_is_told_with_the_line_it_stands_in_first() -> None:
    assert wrong("Ada,3,Flight A", "Bo,1,Flight A", "Cleo,3,Flight A") == [
        (4, "lot 3 stands already in line 2.")
    ]


def test_everything_wrong_is_told_at_once_and_nothing_is_taken() -> None:
    assert wrong(",x,", "Bo,1,Flight A", "Ada,3,Flight A,a,b,,c") == [
        (2, "name is empty."),
        (2, "flight is empty."),
        (2, "lot “x” is not a whole number from 1 to 99999."),
        (4, "body weight: “a” is not a weight. Type a number such as 142.5."),
        (4, "Squat opener: “b” is not a weight. Type a number such as 142.5."),
        (4, "Bench press opener: “c” is not a weight. Type a number such as 142.5."),
    ]


def test_wrong_columns_are_told_all_at_once() -> None:
    known = "name, lot, flight, platform, body weight, Squat opener, Squat rack, Bench press opener, Bench press rack"
    assert wrong("Ada,3,x,y", header="name,name,Curl opener,flight") == [
        (1, "column “name” stands twice."),
        (1, f"unknown column “Curl opener”. Known columns: {known}."),
        (1, "column “lot” is missing."),
    ]


def test_without_a_flight_column_nobody_has_been_placed_yet() -> None:
    (entry,) = read("name,lot\nAda Brook,3").entries
    assert entry.flight == ""


def test_an_empty_roster_and_one_without_lifters_say_so() -> None:
    for text in ("", "\n \n", "\ufeff"):
        assert read(text).wrong == (WrongLine(1, "The roster is empty. The first line names the columns."),)
    assert wrong() == [(2, "There is no lifter below the column names.")]


def test_a_file_of_thousands_of_lines_is_refused() -> None:
    lines = [f"Lifter {lot},{lot},Flight A" for lot in range(1, 2002)]
    assert wrong(*lines) == [(2002, "More than 2000 lines. Split the file.")]


def test_a_field_that_never_ends_is_refused_in_words() -> None:
    assert wrong(f'"{"x" * 200_000}",3,Flight A') == [
        (1, "This is not a CSV file: field larger than field limit (131072).")
    ]


def test_a_name_that_a_spreadsheet_would_run_is_written_harmlessly_and_read_back() -> None:
    """CSV injection: a cell that begins with = + - @ is a formula to a spreadsheet (OWASP's advice)."""
    entry = Entry("=HYPERLINK(1)", 3, "-Flight A", None, {}, {"Squat": "+9"})
    text = write_roster([entry], LIFTS)
    assert text.splitlines()[1] == "'=HYPERLINK(1),3,'-Flight A,,,,'+9,,"
    assert read(text).entries == (entry,)


def test_a_name_that_begins_with_its_own_apostrophe_keeps_it() -> None:
    entries = (Entry("'t Hart", 3, "'=A"), Entry("''=x", 4, "Flight A"))
    assert read(write_roster(entries, LIFTS)).entries == entries


# Names as they may come: quotes, commas, semicolons, formulas, line breaks, any script. Outer white space is taken
# off on reading, and no name holds a NUL.
names = (
    st.one_of(
        st.text(st.sampled_from("=+-@'\",;\t\n\r Aéß汉🏋"), max_size=12),
        st.text(st.characters(exclude_categories=["Cs"]), max_size=80),
    )
    .map(lambda text: text.replace("\x00", "").strip())
    .filter(lambda text: 0 < len(text) <= 80)
)
masses = st.integers(0, 200_000).map(lambda steps: Fraction(steps, 100))
entries = st.builds(
    Entry,
    name=names,
    lot=st.integers(1, 99_999),
    flight=names,
    body_weight=st.one_of(st.none(), masses),
    openers=st.dictionaries(st.sampled_from(LIFTS), masses),
    racks=st.dictionaries(st.sampled_from(LIFTS), names),
)


@given(roster=st.lists(entries, min_size=1, max_size=6, unique_by=lambda one: one.lot))
def test_what_is_written_is_read_back_the_same(roster: list[Entry]) -> None:
    reading = read(write_roster(roster, LIFTS))
    assert reading.wrong == ()
    assert reading.entries == tuple(roster)


@given(
    text=st.one_of(
        st.text(),
        st.text(st.sampled_from("name,lot;flight\t\r\n\"'=0123456789.\x00\ufeff ")),
        st.lists(st.text(st.sampled_from("ab,;\"'\n3"), max_size=20)).map(
            lambda lines: "\n".join([HEADER, *lines])
        ),
    )
)
def test_whatever_is_pasted_is_either_read_or_told_what_is_wrong(text: str) -> None:
    reading = read(text)
    assert (reading.entries == ()) is (reading.wrong != ())
    assert all(one.line >= 1 and one.because for one in reading.wrong)
