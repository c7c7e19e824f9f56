"""Paper as PDF, read back: what stands on it, how large it is printed, how many sheets it takes."""

from __future__ import annotations

import io
import itertools
from collections import Counter
from fractions import Fraction

import pytest
from pypdf import PageObject, PdfReader
from starlette.testclient import TestClient

from app.web.card_pdf import card_pdf
from app.web.paper import drawable, in_lines, width_of, wrapped
from app.web.views import CardRow, CardView
from tests.web.asking import get
from tests.web.ready import Meet
from tests.web.test_cards_page import CARDS, EMPTY, ENDS, called, card, cell, faces, to_load

POINTS = {"a4": (595, 842), "letter": (612, 792)}


def pdf(client: TestClient, path: str) -> PdfReader:
    answer = client.get(path)
    assert answer.status_code == 200
    assert answer.headers["content-type"] == "application/pdf"
    return PdfReader(io.BytesIO(answer.content))


def words(document: PdfReader) -> str:
    return "\n".join(page.extract_text() for page in document.pages)


def sizes(page: PageObject) -> Counter[float]:
    """How many letters are printed at each size, in points."""
    found: Counter[float] = Counter()

    def note(text: str, _cm: object, _tm: object, _font: object, size: float) -> None:
        found[round(size, 1)] += len(text.strip())

    page.extract_text(visitor_text=note)
    return Counter({size: letters for size, letters in found.items() if letters})


@pytest.mark.parametrize("paper", ["a4", "letter"])
@pytest.mark.parametrize(("platform", "flight", "lift", "number"), CARDS, ids=str)
def test_card_is_one_sheet_with_nothing_under_14_pt(
    visitor: TestClient, platform: int, flight: int, lift: int, number: int, paper: str
) -> None:
    path = f"/platforms/{platform}/cards/{flight}/{lift}/{number}/pdf?paper={paper}"
    (page,) = pdf(visitor, path).pages
    assert (round(page.mediabox.width), round(page.mediabox.height)) == POINTS[paper]
    assert min(sizes(page)) >= 14


def test_weights_are_printed_at_22_pt_or_more(visitor: TestClient) -> None:
    (page,) = pdf(visitor, "/platforms/1/cards/1/1/2/pdf").pages
    large: list[str] = []

    def note(text: str, _cm: object, _tm: object, _font: object, size: float) -> None:
        if size >= 22 and text.strip():
            large.append(text.strip())

    page.extract_text(visitor_text=note)
    assert {called(row) for row in to_load(card(visitor, 1, 1, 1, 2))} <= {
        Fraction(one.rstrip("*")) for one in large
    }


def test_card_says_on_paper_what_the_page_says(visitor: TestClient) -> None:
    printed = " ".join(words(pdf(visitor, "/platforms/1/cards/1/1/2/pdf")).split())
    for row in to_load(card(visitor, 1, 1, 1, 2)):
        assert cell(row, "c-who") in printed
        assert " ".join(cell(row, "c-stack").split()) in printed
        assert row.one("td", "c-stack").texts("span")[0] in printed
    assert "Before line 1: 25 + 10 + 5 a side." in printed
    assert "NO CHANGE" in printed
    assert "page 1 of 1" in printed


def test_card_names_the_version_and_when_it_was_printed(visitor: TestClient, meet: Meet) -> None:
    printed = words(pdf(visitor, "/platforms/1/cards/1/1/2/pdf"))
    assert f"Revision {meet.platform()['revision']}, printed 20" in printed


def test_round_that_nobody_has_declared_is_a_blank_card_with_the_flights_lifters(
    visitor: TestClient, meet: Meet
) -> None:
    """An order made of guesses would only mislead a crew that has nothing but the paper."""
    sheet = card(visitor, 1, 2, 1, 2)
    members = [row["name"] for row in meet.rows("SELECT name FROM lifter WHERE flight_id = 2 ORDER BY lot")]
    rows = [row for row in sheet.one("tbody").all("tr") if cell(row, "c-who") != "change"]
    assert [cell(row, "c-who") for row in rows if row.all("strong")] == members
    assert not to_load(sheet)
    printed = words(pdf(visitor, "/platforms/1/cards/2/1/2/pdf"))
    assert all(name in printed for name in members)


def long_card(lines: int) -> CardView:
    """A flight larger than any rule allows, with the longest names and stacks."""
    row = CardRow(
        order="1",
        lot="123",
        lifter="Maximiliane Wolkenstein-Trautmannsdorff",
        attempt="Squat, 3rd",
        weight="227.25",
        stack=("25", "25", "20", "15", "10", "5", "2.5", "0.5", "0.25"),
        off=("0.25", "0.5", "1.25", "2.5", "15"),
        on=("10", "5", "2.5", "1.25", "0.5", "0.25"),
        rack="14 out",
        sum="2 × 103.25 + 25 = 231.5",
        note="",
    )
    return CardView(
        "Meet", "Flight A · Squat · round 3", "Main hall", "kg", "a side", "Power bar", "empty", (row,) * lines, (), 7,
        "2027-03-06 10:42", "",
    )  # fmt: skip


def test_card_longer_than_a_sheet_goes_on_under_the_same_head_and_splits_no_row() -> None:
    document = PdfReader(io.BytesIO(card_pdf(long_card(20), "letter")))
    assert len(document.pages) == 2
    for number, page in enumerate(document.pages, start=1):
        text = page.extract_text()
        assert "Flight A · Squat · round 3" in text
        assert f"page {number} of 2" in text
        assert text.count("227.25") == text.count("lot 123") == text.count("2 × 103.25")


@pytest.mark.parametrize("lift", [1, 2, 3])
def test_chart_has_every_makeable_weight_of_the_range_with_a_stack_that_adds_up(
    visitor: TestClient, meet: Meet, lift: int
) -> None:
    page = get(visitor, f"/platforms/1/chart/{lift}?lightest=25&heaviest=200")
    stock = meet.stock(1)
    listed = {}
    for row in page.one("tbody").all("tr"):
        stack = faces(row.one("td").text)
        weight = Fraction(row.one("th").text)
        assert EMPTY[1] + ENDS[1] * sum(stack) == weight
        assert list(stack) == sorted(stack, reverse=True)
        assert all(ENDS[1] * count <= stock[face] for face, count in Counter(stack).items())
        listed[weight] = stack
    assert set(listed) == {weight for weight in steps_of("2.5", "200") if weight in makeable(stock)}, (
        "a weight is missing or too many"
    )


def steps_of(step: str, heaviest: str) -> set[Fraction]:
    return {Fraction(step) * count for count in range(10, int(Fraction(heaviest) / Fraction(step)) + 1)}


def makeable(stock: dict[Fraction, int]) -> set[Fraction]:
    """Every weight by trying all numbers of pairs, without the program."""
    pairs = [range(count // 2 + 1) for count in stock.values()]
    sides = {
        sum((face * n for face, n in zip(stock, some, strict=True)), Fraction(0))
        for some in itertools.product(*pairs)
    }
    return {EMPTY[1] + 2 * side for side in sides}


def test_chart_as_pdf_prints_every_line_of_the_page(visitor: TestClient) -> None:
    page = get(visitor, "/platforms/1/chart/1?heaviest=300")
    document = pdf(visitor, "/platforms/1/chart/1/pdf?heaviest=300")
    assert len(document.pages) == 2
    printed = words(document).split("\n")
    for row in page.one("tbody").all("tr"):
        assert row.one("th").text in printed
        assert row.one("td").text in printed
    assert all(min(sizes(sheet)) >= 14 for sheet in document.pages)


def test_chart_of_a_belt_is_of_one_stack(visitor: TestClient) -> None:
    lift = "/platforms/2/chart/4"
    assert "Plates the stack, inside first" in get(visitor, lift).text
    assert "Belt and chain" in words(pdf(visitor, f"{lift}/pdf"))


@pytest.mark.parametrize("range_", ["lightest=500", "lightest=abc&heaviest=", "heaviest=1", "lightest=1e9"])
def test_range_without_weights_says_so_or_is_no_range(visitor: TestClient, range_: str) -> None:
    assert get(visitor, f"/platforms/1/chart/1?{range_}")
    assert pdf(visitor, f"/platforms/1/chart/1/pdf?{range_}").pages


@pytest.mark.parametrize("path", ["chart/99", "chart/99/pdf", "cards/1/1/9/pdf", "cards/1/99/1/pdf"])
def test_paper_of_what_is_not_there_is_404(visitor: TestClient, path: str) -> None:
    assert visitor.get(f"/platforms/1/{path}").status_code == 404


def test_checklist_names_the_platforms_own_iron_and_the_cautions(visitor: TestClient) -> None:
    for text in (
        get(visitor, "/platforms/1/checklist").text,
        words(pdf(visitor, "/platforms/1/checklist/pdf")),
    ):
        joined = " ".join(text.split())
        assert "12 × 25 kg" in joined
        assert "Power bar 20 + collars 2 × 2.5 = 25 kg" in joined
        assert "screen time-out set to never" in joined
        assert "it must be 100 mm" in joined
        assert "Nobody loads while a lifter is under the bar" in joined


def test_letters_that_the_typeface_has_are_printed_and_others_are_marked() -> None:
    assert drawable("Żółć Ğ ß ñ") == "Żółć Ğ ß ñ"
    assert drawable("Ольга") == "?????"


def test_words_are_wrapped_within_their_column() -> None:
    lines = wrapped("1.25 2.5 15 25 and a verylongwordthatcannotfit", 24)
    assert all(width_of(line, 14) <= 24 for line in lines)
    assert lines[-1].endswith("…")
    assert len(in_lines("one two three four five six seven", 24, 2)) == 2
