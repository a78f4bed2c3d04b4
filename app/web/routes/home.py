"""The first page, and the example."""

from __future__ import annotations

from fastapi import APIRouter, Request
from fastapi.responses import HTMLResponse, RedirectResponse

from app.appraisal.examples import LEG_ULCER
from app.present.templating import render

router = APIRouter(include_in_schema=False)


@router.get("/")
def home_home(request: Request) -> HTMLResponse:
    """The first page."""
    return HTMLResponse(render("home/home.html", request.app.state.desk.home()), headers={"Cache-Control": "no-store"})


@router.post("/example")
def home_example(request: Request) -> RedirectResponse:
    """Open an invented example as a sheet of its own."""
    return RedirectResponse(f"/sheet/{request.app.state.desk.add_example(LEG_ULCER)}", status_code=303)
