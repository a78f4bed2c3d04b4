"""The Methods page."""

from __future__ import annotations

from fastapi import APIRouter
from fastapi.responses import HTMLResponse

from app.present.methods import methods_view
from app.present.templating import render

router = APIRouter(include_in_schema=False)


@router.get("/methods")
def methods_methods() -> HTMLResponse:
    """Every registered method."""
    return HTMLResponse(render("methods/methods.html", methods_view()))
