"""Asking the app for pages and sending it forms, as a browser with and without htmx does."""

from __future__ import annotations

from collections.abc import Iterator
from contextlib import contextmanager

from httpx2 import Response
from starlette.testclient import TestClient

from app.web.main import create_app
from tests.web.pages import Element, form, read
from tests.web.ready import Meet

HTMX = {"HX-Request": "true", "HX-Request-Type": "partial"}


@contextmanager
def app_over(
    meet: Meet, headers: dict[str, str] | None = None, *, faults: bool = False
) -> Iterator[TestClient]:
    """A running app; a fault inside it fails the test unless ``faults`` lets it answer as it would to a person."""
    app = create_app(f"sqlite:///{meet.file}")
    with TestClient(
        app, headers=headers or {}, follow_redirects=False, raise_server_exceptions=not faults
    ) as client:
        yield client


def swaps(client: TestClient) -> bool:
    """Whether this client asks as htmx does."""
    return "HX-Request" in client.headers


def get(client: TestClient, path: str) -> Element:
    """A page that must be there."""
    answer = client.get(path)
    assert answer.status_code == 200, (path, answer.status_code, answer.text[-500:])
    return read(answer.text)


def landed(client: TestClient, answer: Response) -> Element:
    """Where an accepted entry leads: the swapped fragment, or the page that the answer sends to."""
    if answer.status_code == 200:
        return read(answer.text)
    if swaps(client):
        assert answer.status_code == 204, (answer.status_code, answer.text[-500:])
        return get(client, answer.headers["HX-Redirect"])
    assert answer.status_code == 303, (answer.status_code, answer.text[-500:])
    return get(client, answer.headers["location"])


def refusal(answer: Response, status: int) -> str:
    """The sentence of an entry that was refused."""
    assert answer.status_code == status, (answer.status_code, answer.text[-500:])
    page = read(answer.text)
    return " ".join([*page.texts(klass="error"), *page.texts(klass="wrong")])


def send(
    client: TestClient, page: Element, action: str, button: str = "", /, **typed: str | list[str]
) -> Response:
    """Send the page's own form to ``action``; ``button`` is ``name=value`` of the one pressed."""
    name, _, value = button.partition("=")
    pressed = {name: value} if button else {}
    known = {k: v for k, v in typed.items() if k in ("attempt", "shown") and isinstance(v, str)}
    chosen = form(page, action, **pressed, **known)
    return client.post(chosen.action, data=chosen.filled(**typed) | pressed)
