"""Errors to answers: one JSON shape under /api, one page elsewhere, one alert for a fragment."""

from __future__ import annotations

import logging
import secrets

from fastapi import FastAPI, Request
from fastapi.exceptions import RequestValidationError
from fastapi.responses import HTMLResponse
from starlette.exceptions import HTTPException
from starlette.requests import ClientDisconnect
from starlette.responses import Response

from app import __version__
from app.api.problems import problems_response
from app.errors import FieldProblem, InputProblems, NotOnShelf, ShelfBusy, UnreadablePages
from app.present.pages import ProblemView
from app.present.templating import render
from app.web.htmx import Htmx

_LOG = logging.getLogger("armslength")

_SENTENCES: dict[str, tuple[str, str]] = {
    "unknown_host": ("This server answers only to this computer’s own name.", "Open the address it printed."),
    "other_origin": ("A change asked for by another site is refused.", "Open Armslength itself and type there."),
    "body_too_large": ("More was sent than this program takes at once.", "Shorten it."),
    "not_found": ("There is nothing at this address.", "Check the address, or go back to Papers."),
    "method_not_allowed": ("This address does not answer that kind of request.", "See /openapi.json for what it takes."),
    "not_a_form": ("A sheet is saved from its form.", "Send the form of the page."),
    "no_file": ("No file was chosen.", "Choose a PDF and send it again."),
    "pages_broken": ("This file could not be read as a PDF.", "Open it elsewhere and copy the passage instead."),
    "pages_locked": ("This PDF is locked with a password.", "Save it without one, or copy the passage instead."),
    "pages_without_text": (
        "This PDF holds pictures of pages and no text.",
        "Have its text recognised first, or type the numbers.",
    ),
    "too_many_pages": ("This PDF has more than 150 pages.", "Keep the pages that print the result."),
    "bad_request": ("The request could not be read.", "Check it and send it again."),
    "program_fault": (
        "The program met a fault of its own (number {number}); what was saved before is safe.",
        "The window where it runs shows the same number.",
    ),
}
_BY_STATUS = {404: "not_found", 405: "method_not_allowed", 413: "body_too_large", 415: "not_a_form"}
_TITLES = {404: "Not found", 413: "Too much at once", 500: "A fault of the program", 503: "The shelf is busy"}


def answer(request: Request, status: int, slug: str, message: str, hint: str) -> Response:
    """One problem in the form that the request can show."""
    if request.url.path.startswith("/api/"):
        return problems_response([FieldProblem("", message, hint, slug)], status)
    if Htmx.of(request).partial:
        headers = {"HX-Retarget": "#not-saved", "HX-Reswap": "outerHTML"}
        return HTMLResponse(render("_alert.html", ProblemView("", message, hint, __version__)), status, headers=headers)
    title = _TITLES.get(status, "Refused")
    return HTMLResponse(render("problem.html", ProblemView(title, message, hint, __version__)), status)


def refusal(request: Request, status: int, slug: str, **evidence: str) -> Response:
    """A refusal by its slug."""
    message, hint = _SENTENCES[slug]
    return answer(request, status, slug, message.format(**evidence), hint)


def install(app: FastAPI) -> None:
    """Register the handlers."""

    @app.exception_handler(InputProblems)
    def input_problems(request: Request, problem: InputProblems) -> Response:
        status = 415 if problem.problems[0].hint.startswith("Send Content-Type") else 422
        return problems_response(problem.problems, status)

    @app.exception_handler(NotOnShelf)
    def not_on_shelf(request: Request, problem: NotOnShelf) -> Response:
        return answer(request, 404, "not_on_shelf", str(problem), "It may lie on another computer.")

    @app.exception_handler(UnreadablePages)
    def unreadable_pages(request: Request, problem: UnreadablePages) -> Response:
        return refusal(request, 422, problem.slug)

    @app.exception_handler(ShelfBusy)
    def shelf_busy(request: Request, problem: ShelfBusy) -> Response:
        return answer(request, 503, "shelf_busy", str(problem), "Try again in a moment.")

    @app.exception_handler(HTTPException)
    def http(request: Request, problem: HTTPException) -> Response:
        return refusal(request, problem.status_code, _BY_STATUS.get(problem.status_code, "bad_request"))

    @app.exception_handler(RequestValidationError)
    def validation(request: Request, problem: RequestValidationError) -> Response:
        return refusal(request, 422, "bad_request")

    @app.exception_handler(ClientDisconnect)
    def left(request: Request, problem: ClientDisconnect) -> Response:
        return Response(status_code=400)  # nobody is there to read it

    @app.exception_handler(Exception)
    def fault(request: Request, problem: Exception) -> Response:
        number = secrets.token_hex(3)
        _LOG.error("fault %s", number, exc_info=problem)
        return refusal(request, 500, "program_fault", number=number)
