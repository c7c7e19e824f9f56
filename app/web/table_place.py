"""Where an official sits: which platform, flight and lift the Table looks at, and how it is answered."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Annotated

from fastapi import Depends, Form
from starlette.requests import Request
from starlette.responses import Response

from app.desk.board import Bare, Board, board
from app.desk.entry import Desk
from app.web import htmx
from app.web.house import DeskDep, OfficialDep, frame, page, who
from app.web.table_view import table_view

ROLE = "table"


@dataclass(frozen=True, slots=True)
class Place:
    """One request at one Table."""

    request: Request
    desk: Desk
    platform_id: int
    official: str
    flight: int | None
    lift: int | None

    @property
    def by(self) -> str:
        """Who enters: the official's name, or the page's role."""
        return who(self.official, ROLE)

    def board(self) -> Board | Bare:
        """What is looked at, as it stands."""
        return board(self.desk, self.platform_id, self.flight, self.lift)

    def answer(self, said: str = "") -> Response:
        """After an entry: the new Table into the page, or for a plain form the page itself."""
        if htmx.wants_fragment(self.request):
            return self.render(said)
        looking = f"?flight={self.flight}&lift={self.lift}" if self.flight and self.lift else ""
        return htmx.go_to(self.request, f"/platforms/{self.platform_id}/table{looking}")

    def render(
        self,
        said: str = "",
        refused: str = "",
        status: int = 200,
        at: int = 0,
        typed: str = "",
        reason: str | None = None,
    ) -> Response:
        """The page, or its content for a swap.

        ``refused`` stands on the line of attempt ``at`` with what was typed; with a ``reason`` (perhaps empty)
        that line also asks why it is to be entered all the same.
        """
        one = self.board()
        around = frame(one.now.meet, self.official, one.now.meet_id, one.now.platform_id, "Table")
        if isinstance(one, Bare):
            layout = htmx.layout(self.request)
            return page("table/empty.html", status, frame=around, layout=layout, now=one.now)
        swapped = htmx.wants_fragment(self.request)
        view = table_view(one, self.by, self.desk.clock(), at if refused else 0)
        if refused and at not in {row.attempt_id for row in (*view.order, *view.no_opener)}:
            # Its line is not on this page (any more): said at the top, with what would have been lost.
            at, refused = 0, f"{refused} You had typed “{typed}”."
        return page(
            "table/_now.html" if swapped else "table/page.html",
            status,
            frame=around,
            view=view,
            said=said,
            refused=refused,
            at=at,
            typed=typed,
            reason=reason,
            # The cursor moves when the page is opened and after an entry of one's own, never because of another's.
            first=not swapped,
        )


def _asked(
    request: Request,
    platform_id: int,
    desk: DeskDep,
    official: OfficialDep,
    flight: int | None = None,
    lift: int | None = None,
) -> Place:
    return Place(request, desk, platform_id, official, flight, lift)


def _posted(
    request: Request,
    platform_id: int,
    desk: DeskDep,
    official: OfficialDep,
    flight: Annotated[int | None, Form()] = None,
    lift: Annotated[int | None, Form()] = None,
) -> Place:
    return Place(request, desk, platform_id, official, flight, lift)


Asked = Annotated[Place, Depends(_asked)]
Posted = Annotated[Place, Depends(_posted)]
