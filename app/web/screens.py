"""The pages that are only read or printed, gathered for :mod:`app.web.main`."""

from __future__ import annotations

from fastapi import APIRouter

from app.web import (
    announcer_page,
    chart_page,
    check_page,
    checklist_page,
    join_page,
    missing_page,
    screen_page,
)

router = APIRouter()
for _page in (check_page, announcer_page, screen_page, chart_page, checklist_page, join_page, missing_page):
    router.include_router(_page.router)
