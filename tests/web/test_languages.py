"""The crew's words in every language: no word forgotten, none left over, and the numbers in them kept."""

from __future__ import annotations

import re
from collections.abc import Iterator
from string import Formatter

import pytest
from babel.messages.catalog import Catalog
from babel.messages.pofile import read_po
from jinja2 import nodes
from starlette.testclient import TestClient

from app.web.crew_view import MESSAGES, NOTES
from app.web.house import PROJECT, templates
from app.web.languages import LANGUAGES, LOCALES, words_in
from app.web.screen import ROLES
from tests.web.asking import get, landed, send

CREW = "/platforms/1/crew"
FOREIGN = [code for code in LANGUAGES if code != "en"]
FROM_VIEWS = {*MESSAGES, *NOTES, "a side", "the stack", "left", "right"}


def said_in_templates() -> Iterator[str]:
    """Every text that a template asks the catalogue for."""
    for path in (PROJECT / "templates").rglob("*.html"):
        for call in templates.parse(path.read_text(encoding="utf-8")).find_all(nodes.Call):
            if isinstance(call.node, nodes.Name) and call.node.name in ("_", "n_"):
                yield from (
                    one.value
                    for one in call.args
                    if isinstance(one, nodes.Const) and isinstance(one.value, str)
                )


def catalogue(language: str) -> Catalog:
    with (LOCALES / f"{language}.po").open("rb") as source:
        return read_po(source, locale=language, abort_invalid=True)


def texts(value: object) -> list[str]:
    return [value] if isinstance(value, str) else [str(one) for one in value]  # type: ignore[attr-defined]


@pytest.mark.parametrize("language", FOREIGN)
def test_catalogue_has_every_word_and_no_other(language: str) -> None:
    known = {text for message in catalogue(language) if message.id for text in texts(message.id)}
    assert known == {*said_in_templates()} | FROM_VIEWS


@pytest.mark.parametrize("language", FOREIGN)
def test_every_word_is_translated_with_the_same_blanks_to_fill(language: str) -> None:
    for message in catalogue(language):
        if message.id:
            blanks = {name for _, name, *_ in Formatter().parse(texts(message.id)[-1]) if name}
            for text in texts(message.string):
                assert text, message.id
                assert {name for _, name, *_ in Formatter().parse(text) if name} == blanks


def test_polish_counts_plates_in_its_three_ways() -> None:
    """Plural forms of Polish as in the Unicode CLDR: 1; 2–4, 22–24, …; all others."""
    words = words_in("pl")
    said = [words.count("{number} plate", "{number} plates", n).format(number=n) for n in (1, 2, 5, 12, 22)]
    assert said == ["1 talerz", "2 talerze", "5 talerzy", "12 talerzy", "22 talerze"]


def test_language_that_is_not_known_speaks_english() -> None:
    assert words_in("xx").say("Off") == "Off"


def drawn(client: TestClient) -> list[str]:
    """Every number that is drawn: weight, off, on and the finished end."""
    return [one for one in get(client, CREW).texts("text") if one.replace(".", "").isdigit()]


@pytest.mark.parametrize("language", FOREIGN)
def test_screen_speaks_its_language_and_the_numbers_stay(client: TestClient, language: str) -> None:
    before = drawn(client)
    landed(client, send(client, get(client, "/platforms/1/screen"), "/screen", language=language))
    page = client.get(CREW, headers={"HX-Request-Type": "full"}).text
    assert f'<html lang="{language}">' in page
    assert words_in(language).say("Bar is loaded") in page
    assert "Bar is loaded" not in page
    assert drawn(client) == before
    assert len(before) > 5


def test_other_screens_keep_their_own_language(client: TestClient) -> None:
    landed(client, send(client, get(client, "/platforms/1/screen"), "/screen", language="de"))
    client.cookies.clear()
    assert "Bar is loaded" in client.get("/platforms/1/crew").text


def test_no_language_says_an_ordering_word_that_is_too_long_for_its_place() -> None:
    """Off and On stand left of the plates, in a column that holds eight letters."""
    for language in LANGUAGES:
        for word in ("Off", "On"):
            assert len(words_in(language).say(word)) <= 8
    assert re.fullmatch(r"\S+( \S+)+", words_in("fr").say("NO CHANGE"))
    assert "alone" in ROLES
