"""One sheet: the page, and saving it as typed."""

from __future__ import annotations

from typing import Annotated

from fastapi import APIRouter, Depends, HTTPException, Request
from fastapi.responses import HTMLResponse, RedirectResponse, Response

from app.present.templating import render
from app.web.desk import Posted
from app.web.htmx import Htmx

router = APIRouter(include_in_schema=False)


async def posted(request: Request) -> Posted:
    """The posted form: text fields only, the last of a name, lone surrogates replaced."""
    kind = request.headers.get("content-type", "").partition(";")[0].strip().lower()
    if kind not in ("application/x-www-form-urlencoded", "multipart/form-data"):
        raise HTTPException(415)
    form = await request.form()
    texts = {name: value for name, value in form.multi_items() if isinstance(value, str)}
    return Posted({name: value.encode("utf-8", "replace").decode("utf-8") for name, value in texts.items()})


@router.get("/sheet/{sheet_id}")
def sheet_sheet(request: Request, sheet_id: str, outcome: str = "0") -> HTMLResponse:
    """The page of a sheet."""
    view = request.app.state.desk.open(sheet_id, Posted({"outcome": outcome}).shown)
    return HTMLResponse(render("sheet/sheet.html", view), headers={"Cache-Control": "no-store"})


@router.post("/sheet/{sheet_id}")
def sheet_save(request: Request, sheet_id: str, form: Annotated[Posted, Depends(posted)]) -> Response:
    """Save a sheet as typed; a fragment for htmx, else back to the page."""
    view, conflict = request.app.state.desk.save(sheet_id, form)
    status = 409 if conflict else 200
    if Htmx.of(request).partial:
        address = {} if conflict else {"HX-Replace-Url": f"/sheet/{sheet_id}?outcome={view.shown}"}
        return HTMLResponse(render("sheet/_sheet.html", view), status, headers={"Cache-Control": "no-store", **address})
    if conflict:
        return HTMLResponse(render("sheet/sheet.html", view), status, headers={"Cache-Control": "no-store"})
    return RedirectResponse(f"/sheet/{sheet_id}?outcome={view.shown}", status_code=303)
