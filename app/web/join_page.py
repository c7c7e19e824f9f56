"""Join: a QR code and the address in words for each screen of a platform."""

from __future__ import annotations

import io
import socket
from dataclasses import dataclass

import segno
from fastapi import APIRouter, Depends
from starlette.requests import Request
from starlette.responses import Response

from app.store.engine import reading
from app.store.picture import NotFound, picture
from app.web import htmx
from app.web.house import DeskDep, OfficialDep, frame, page
from app.web.live import known_platform

router = APIRouter(prefix="/platforms/{platform_id}/join")

SCREENS = {
    "crew": ("Crew", "A tablet or TV at each plate tree."),
    "check": ("Check", "A tablet beside the chief referee."),
    "announcer": ("Announcer", "At the microphone."),
    "table": ("Table", "Where weights and results are entered. Not for everyone."),
    "screen": ("This screen", "Distance, size and language of the device that opens it."),
}
ONLY_HERE = ("127.0.0.1", "localhost", "::1")
QUIET_MODULES = 4  # the white border that the QR standard asks for (ISO/IEC 18004)


@dataclass(frozen=True, slots=True)
class Door:
    """One screen to join."""

    key: str
    title: str
    where: str
    address: str


@router.get("")
def show_join(request: Request, platform_id: int, desk: DeskDep, official: OfficialDep) -> Response:
    """A code for each screen, made of the address at which this page itself was asked for."""
    with reading(desk.engine) as session:
        now = picture(session, platform_id)
    host = request.url.hostname or ""
    return page(
        "join/page.html",
        frame=frame(now.meet, official, now.meet_id, platform_id, "Join"),
        layout=htmx.layout(request),
        now=now,
        doors=[
            Door(key, title, where, _address(request, platform_id, key))
            for key, (title, where) in SCREENS.items()
        ],
        only_here=host in ONLY_HERE or host.startswith("127."),
        likely=_likely_address(),
        port=request.url.port,
    )


@router.get("/{screen}.svg", dependencies=[Depends(known_platform)])
def qr_code(request: Request, platform_id: int, screen: str) -> Response:
    """The code as a drawing, black on white in every theme: a camera needs the contrast."""
    if screen not in SCREENS:
        raise NotFound("screen")
    made = segno.make(_address(request, platform_id, screen), error="m")
    out = io.BytesIO()
    made.save(out, kind="svg", border=QUIET_MODULES, dark="#000", light="#fff", omitsize=True, xmldecl=False)
    return Response(out.getvalue(), media_type="image/svg+xml", headers={"Cache-Control": "no-store"})


def _address(request: Request, platform_id: int, screen: str) -> str:
    return f"{request.url.scheme}://{request.url.netloc}/platforms/{platform_id}/{screen}"


def _likely_address() -> str:
    """This machine's address in its network, "" when it has none. Nothing is sent: UDP only chooses a way."""
    with socket.socket(socket.AF_INET, socket.SOCK_DGRAM) as probe:
        try:
            probe.connect(("10.255.255.255", 1))
            address = str(probe.getsockname()[0])
        except OSError:
            return ""
    return "" if address.startswith(("127.", "0.")) else address
