"""What a request must satisfy beyond the shape of its keys; run on every request, however it was made."""

from __future__ import annotations

from collections import Counter

from app.loading.equipment import Plate
from app.loading.mass import show_mass
from app.planning.refusal import bad_request
from app.planning.request import Aim, ComfortBy, Order, PlanRequest


def check_request(request: PlanRequest) -> None:
    """Raise a ``bad-request`` refusal when the request contradicts itself or leaves out a needed size."""
    if request.limit is not None and request.aim is not Aim.TOTAL:
        raise bad_request(
            "limit", "'limit' goes with the aim total; the aim worst already has the least one."
        )
    _check_start(request)
    _check_sizes(request)


def _check_start(request: PlanRequest) -> None:
    for face, wanted in Counter(request.start).items():
        plate = request.equipment.plate(face)
        if plate is None:
            raise bad_request("start", f"'start' has a {show_mass(face)}, which is not among 'plates'.")
        if wanted > request.equipment.pieces_per_end(plate):
            raise bad_request(
                "start",
                f"'start' has {wanted} of the {show_mass(face)} on each end; the stock allows"
                f" {request.equipment.pieces_per_end(plate)}.",
            )


def _check_sizes(request: PlanRequest) -> None:
    rules = {rule.by for rule in request.comfort}
    equipment = request.equipment
    room = equipment.implement.usable_mm is not None
    if room and equipment.collar and equipment.collar.width_mm is None:
        raise bad_request("width_mm", "'usable_mm' needs the collar's 'width_mm'.")
    thick = room or bool(rules & {ComfortBy.THICKNESS, ComfortBy.BALANCE})
    wide = request.order in {Order.WIDEST_INSIDE, Order.NO_VALLEY} or bool(
        rules & {ComfortBy.RIMS, ComfortBy.THREADING}
    )
    wide = wide or request.thread_s > 0
    for plate in equipment.plates:
        if equipment.pieces_per_end(plate):
            _check_plate(plate, thick=thick, wide=wide)


def _check_plate(plate: Plate, *, thick: bool, wide: bool) -> None:
    if thick and plate.thickness_mm is None:
        raise bad_request(
            "thickness_mm",
            f"The room or comfort asked for needs 'thickness_mm' of the {show_mass(plate.face)}.",
        )
    if wide and plate.diameter_mm is None:
        raise bad_request(
            "diameter_mm",
            f"The order, comfort or threading asked for needs 'diameter_mm' of the {show_mass(plate.face)}.",
        )
