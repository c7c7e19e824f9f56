"""Everything that knows about htmx: nothing else in the app reads or writes an ``HX-…`` header."""

from __future__ import annotations

from starlette.requests import Request
from starlette.responses import RedirectResponse, Response


def wants_fragment(request: Request) -> bool:
    """True when htmx will swap the answer into part of a page (htmx 4 says so itself)."""
    return request.headers.get("HX-Request-Type") == "partial"


def layout(request: Request, page: str = "layout/page.html") -> str:
    """The full page around the content, or the content alone."""
    return "layout/fragment.html" if wants_fragment(request) else page


def go_to(request: Request, url: str) -> Response:
    """Send the browser to another page, with or without htmx."""
    if "HX-Request" in request.headers:
        # A 303 would be followed inside the request and its page swapped into the fragment.
        return Response(status_code=204, headers={"HX-Redirect": url})
    return RedirectResponse(url, status_code=303)
