"""``POST /api/plan``: the planner's contract over HTTP. One JSON object, or one a line."""

from __future__ import annotations

from fastapi import APIRouter
from starlette.concurrency import run_in_threadpool
from starlette.requests import Request
from starlette.responses import JSONResponse, Response

from app.desk.plan_text import answers

router = APIRouter()
MOST_BYTES = 2_000_000


@router.post("/api/plan")
async def plan_route(request: Request) -> Response:
    """Answers 200, or 422 with the reason; JSON Lines give a line of answer for each line asked."""
    data = b""
    async for chunk in request.stream():
        data += chunk
        if len(data) > MOST_BYTES:
            because = "The request is larger than 2 MB."
            return JSONResponse({"error": {"code": "bad-request", "because": because}}, status_code=413)
    # Planning is work for a processor: it must not hold up the streams of the other pages.
    text, budget = data.decode("utf-8", errors="replace"), request.app.state.plan_budget
    made = await run_in_threadpool(lambda: list(answers(text, budget)))
    return Response(
        "\n".join(line for line, _ in made) + "\n",
        status_code=200 if all(good for _, good in made) else 422,
        media_type="application/json" if len(made) == 1 else "application/jsonl",
    )
