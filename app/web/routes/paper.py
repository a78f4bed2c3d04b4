"""A paper's pages: the parts that print results, and bringing one to a sheet."""

from __future__ import annotations

from typing import Annotated

from fastapi import APIRouter, Depends, Request
from fastapi.responses import HTMLResponse, RedirectResponse
from starlette.datastructures import UploadFile

from app.errors import UnreadablePages
from app.present.templating import render
from app.web.desk import Posted
from app.web.routes.sheet import posted

router = APIRouter(include_in_schema=False)


async def uploaded(request: Request) -> tuple[str, bytes]:
    """The name and content of the file of a form."""
    async with request.form() as form:
        file = form.get("paper")
        if not isinstance(file, UploadFile) or not file.filename:
            raise UnreadablePages("no_file")
        return file.filename, await file.read()


@router.post("/sheet/{sheet_id}/paper")
def paper_read(request: Request, sheet_id: str, file: Annotated[tuple[str, bytes], Depends(uploaded)]) -> HTMLResponse:
    """The parts of a PDF that print results."""
    view = request.app.state.desk.paper(sheet_id, *file)
    return HTMLResponse(render("paper/paper.html", view), headers={"Cache-Control": "no-store"})


@router.post("/sheet/{sheet_id}/take")
def paper_take(request: Request, sheet_id: str, form: Annotated[Posted, Depends(posted)]) -> RedirectResponse:
    """Put one part of a paper into the passage of a sheet."""
    shown = request.app.state.desk.take(sheet_id, form)
    return RedirectResponse(f"/sheet/{sheet_id}?outcome={shown}", status_code=303)
