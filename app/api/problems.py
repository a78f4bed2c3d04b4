"""The one error shape: {"problems": [{"field", "message", "hint", "slug"}]}."""

from __future__ import annotations

from collections.abc import Iterable
from dataclasses import asdict

from fastapi.responses import JSONResponse

from app.errors import FieldProblem


def problems_response(problems: Iterable[FieldProblem], status: int) -> JSONResponse:
    """Problems as an answer of this status."""
    return JSONResponse({"problems": [asdict(problem) for problem in problems]}, status)
