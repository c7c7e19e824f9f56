"""A page as a person's browser reads it: a small tree of elements, and the forms that can be sent from it.

Built on ``html.parser``. Tags that do not nest are an error here, so every page a test reads is well formed.
"""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass, field
from html.parser import HTMLParser

VOID = {"meta", "link", "input", "br", "hr", "img", "rect", "path", "circle", "polyline"}


@dataclass
class Element:
    """One element with its attributes and what is inside it, in order."""

    tag: str
    attrs: dict[str, str]
    inside: list[Element | str] = field(default_factory=list)

    def __iter__(self) -> Iterator[Element]:
        """This element and every one below it, in the order of the page."""
        yield self
        for part in self.inside:
            if isinstance(part, Element):
                yield from part

    @property
    def classes(self) -> set[str]:
        """The words of its class attribute."""
        return set(self.attrs.get("class", "").split())

    @property
    def text(self) -> str:
        """Everything written in it, white space run together."""
        words = [part if isinstance(part, str) else part.text for part in self.inside]
        return " ".join(" ".join(words).split())

    def all(self, tag: str = "", klass: str = "", **attrs: str) -> list[Element]:
        """The elements below with this tag, class and attributes (``data_state`` for ``data-state``)."""
        wanted = {name.rstrip("_").replace("_", "-"): value for name, value in attrs.items()}
        return [
            one
            for one in self
            if (not tag or one.tag == tag)
            and (not klass or klass in one.classes)
            and all(one.attrs.get(name) == value for name, value in wanted.items())
        ]

    def one(self, tag: str = "", klass: str = "", **attrs: str) -> Element:
        """The only such element."""
        found = self.all(tag, klass, **attrs)
        assert len(found) == 1, f"{len(found)} of {tag}.{klass} {attrs} in {self.text[:400]}"
        return found[0]

    def texts(self, tag: str = "", klass: str = "", **attrs: str) -> list[str]:
        """What is written in each such element."""
        return [one.text for one in self.all(tag, klass, **attrs)]


class _Reader(HTMLParser):
    def __init__(self) -> None:
        super().__init__()
        self.open = [Element("", {})]

    def handle_starttag(self, tag: str, attrs: list[tuple[str, str | None]]) -> None:
        made = Element(tag, {name: value or "" for name, value in attrs})
        self.open[-1].inside.append(made)
        if tag not in VOID:
            self.open.append(made)

    def handle_startendtag(self, tag: str, attrs: list[tuple[str, str | None]]) -> None:
        self.open[-1].inside.append(Element(tag, {name: value or "" for name, value in attrs}))

    def handle_endtag(self, tag: str) -> None:
        if tag in VOID:
            return
        assert self.open[-1].tag == tag, f"</{tag}> closes <{self.open[-1].tag}>"
        self.open.pop()

    def handle_data(self, data: str) -> None:
        self.open[-1].inside.append(data)


def read(html: str) -> Element:
    """The page as a tree; fails on tags that do not nest."""
    reader = _Reader()
    reader.feed(html)
    reader.close()
    assert len(reader.open) == 1, f"<{reader.open[-1].tag}> is never closed"
    return reader.open[0]


@dataclass(frozen=True)
class Form:
    """A form as a browser would send it."""

    action: str
    fields: dict[str, list[str]]

    def filled(self, **typed: str | list[str]) -> dict[str, list[str]]:
        """The fields with something typed over them; a field the form does not have is an error."""
        for name in typed:
            assert name in self.fields, f"the form has no field {name}: {sorted(self.fields)}"
        return self.fields | {k: v if isinstance(v, list) else [v] for k, v in typed.items()}


def forms(page: Element) -> list[tuple[Form, Element]]:
    """Every form that posts, with its fields as they stand (buttons left out)."""
    return [
        (Form(one.attrs["action"], _fields(one)), one)
        for one in page.all("form")
        if one.attrs.get("method") == "post"
    ]


def form(page: Element, action: str, **holds: str) -> Form:
    """The form that posts to an address ending so and whose fields, or buttons, hold these values."""
    found = [
        one for one, element in forms(page) if one.action.endswith(action) and _holds(element, one, holds)
    ]
    # The same word may stand in two places of a page; then either form says the same.
    assert found, f"no form to {action} with {holds}"
    assert all(one == found[0] for one in found), f"{len(found)} different forms to {action} with {holds}"
    return found[0]


def _holds(element: Element, one: Form, holds: dict[str, str]) -> bool:
    buttons = {(x.attrs.get("name"), x.attrs.get("value")) for x in element.all("button")}
    return all(v in one.fields.get(k, []) or (k, v) in buttons for k, v in holds.items())


def _fields(element: Element) -> dict[str, list[str]]:
    found: dict[str, list[str]] = {}
    for one in element:
        name = one.attrs.get("name")
        if not name or one.attrs.get("type") == "file":
            continue
        if one.tag == "input":
            found.setdefault(name, []).append(one.attrs.get("value", ""))
        elif one.tag == "textarea":
            found.setdefault(name, []).append("".join(x for x in one.inside if isinstance(x, str)))
        elif one.tag == "select":
            options = one.all("option")
            chosen = [x for x in options if "selected" in x.attrs] or options[:1]
            found.setdefault(name, []).extend(x.attrs.get("value", x.text) for x in chosen)
    return found
