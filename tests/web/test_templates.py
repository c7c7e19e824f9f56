"""A net over all templates and scripts: the next file is covered before anyone thinks of it."""

from __future__ import annotations

import re
from pathlib import Path

import pytest
from jinja2 import nodes

from app.web.house import PROJECT, templates

FOLDER = PROJECT / "templates"
ALL = sorted(str(path.relative_to(FOLDER)) for path in FOLDER.rglob("*.html"))
SOURCES = {name: (FOLDER / name).read_text(encoding="utf-8") for name in ALL}
PAGE_TEMPLATES = [name for name in ALL if "{% extends" in SOURCES[name]]
SCRIPTS = sorted((PROJECT / "static").glob("*.js"))


@pytest.mark.parametrize("name", ALL)
def test_template_compiles(name: str) -> None:
    assert templates.get_template(name).name == name


@pytest.mark.parametrize("name", PAGE_TEMPLATES)
def test_page_template_sets_a_title(name: str) -> None:
    """A page without a title cannot be told from its neighbour in a row of tabs."""
    tree = templates.parse(SOURCES[name])
    titles = [block for block in tree.find_all(nodes.Block) if block.name == "title"]
    assert len(titles) == 1
    assert titles[0].body


@pytest.mark.parametrize("name", ALL)
def test_template_begins_by_saying_what_it_is_or_is_a_whole_document(name: str) -> None:
    assert SOURCES[name].lstrip().startswith(("{#", "<!doctype html>"))


@pytest.mark.parametrize("name", ALL)
def test_template_has_no_inline_style_script_or_handler(name: str) -> None:
    """The content policy forbids them, so they would silently do nothing."""
    source = re.sub(r"\{#.*?#\}", "", SOURCES[name], flags=re.DOTALL)
    assert not re.findall(
        r"<style|\sstyle\s*=|<script(?![^>]*\ssrc=)|\son[a-z]+\s*=|hx-on|javascript:", source
    )


@pytest.mark.parametrize("name", ALL)
def test_template_switches_no_escaping_off(name: str) -> None:
    assert not re.findall(r"\|\s*safe|autoescape\s+false|Markup", SOURCES[name])


@pytest.mark.parametrize("name", ALL)
def test_template_loads_nothing_from_elsewhere(name: str) -> None:
    assert not re.findall(r"""(?:src|href|action)=["'](?:https?:)?//""", SOURCES[name])


@pytest.mark.parametrize("name", ALL)
def test_static_files_that_a_template_names_are_there(name: str) -> None:
    named = re.findall(r'"/static/([^"]+)"', SOURCES[name])
    assert [file for file in named if not (PROJECT / "static" / file).is_file()] == []


@pytest.mark.parametrize("path", SCRIPTS, ids=lambda path: path.name)
def test_script_writes_no_html_and_sets_no_style(path: Path) -> None:
    source = path.read_text(encoding="utf-8")
    assert not re.findall(r"innerHTML\s*=|insertAdjacentHTML|document\.write|\beval\(|\.style\b", source)
