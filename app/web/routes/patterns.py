"""The pattern page: every component once. Mounted by the tests' settings only."""

from __future__ import annotations

from fastapi import APIRouter
from fastapi.responses import HTMLResponse

from app.present.patterns import patterns_view
from app.present.templating import render

router = APIRouter(include_in_schema=False)


@router.get("/patterns")
def patterns_patterns() -> HTMLResponse:
    """Every component once."""
    return HTMLResponse(render("patterns/patterns.html", patterns_view()))
