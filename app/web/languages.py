"""The crew's words in the language of the screen: gettext, read from the ``.po`` files beside this module.

The catalogues are compiled when the first screen asks for them, so a fresh clone needs no build step and a
translator changes one text file. English is the language of the source; a word that a catalogue lacks stays English.
"""

from __future__ import annotations

import io
from collections.abc import Callable
from dataclasses import dataclass
from functools import lru_cache
from gettext import GNUTranslations, NullTranslations
from pathlib import Path

from babel.messages.mofile import write_mo
from babel.messages.pofile import read_po

LOCALES = Path(__file__).parent / "locales"
LANGUAGES = {
    "en": "English",
    "de": "Deutsch",
    "fr": "Français",
    "es": "Español",
    "it": "Italiano",
    "pl": "Polski",
}

Say = Callable[[str], str]


@dataclass(frozen=True, slots=True)
class Words:
    """What a template needs to speak: ``_`` for a word, ``n_`` for a counted one, and the language's own name."""

    language: str
    say: Say
    count: Callable[[str, str, int], str]

    def context(self) -> dict[str, object]:
        """Names for a template."""
        return {"_": self.say, "n_": self.count, "language": self.language}


@lru_cache
def words_in(language: str) -> Words:
    """The words of a language; English for one that is not known."""
    catalogue = _catalogue(language)
    known = language if language in LANGUAGES else "en"
    return Words(known, catalogue.gettext, catalogue.ngettext)


def _catalogue(language: str) -> NullTranslations:
    path = LOCALES / f"{language}.po"
    if language not in LANGUAGES or not path.is_file():
        return NullTranslations()
    compiled = io.BytesIO()
    with path.open("rb") as source:
        write_mo(compiled, read_po(source, locale=language))
    compiled.seek(0)
    return GNUTranslations(compiled)


ENGLISH = words_in("en")
TEMPLATE_GLOBALS = ENGLISH.context()
