"""The endpoints of /api/v1."""

from __future__ import annotations

import json
from typing import Annotated, Any

from fastapi import APIRouter, Depends, Request
from fastapi.responses import JSONResponse

from app.api.answers import effects_answer
from app.api.schemas import EffectsAnswer, EffectsRequest, Problems
from app.appraisal.effects import effects_of
from app.errors import FieldProblem, InputProblems
from app.intake.effects import effects_input

_REFUSALS: dict[int | str, dict[str, Any]] = {
    status: {"model": Problems, "description": description}
    for status, description in {
        400: "Not a request this server answers",
        413: "Body too large",
        415: "Not JSON",
        422: "Refused, with every reason",
        500: "A fault of the program",
    }.items()
}

router = APIRouter(prefix="/api/v1", responses=_REFUSALS)


def _refuse_constant(name: str) -> float:
    raise ValueError(f"{name} is not JSON")


async def json_body(request: Request) -> Any:
    """The body as JSON, strictly: no NaN, no lone surrogate, declared as JSON."""
    kind = request.headers.get("content-type", "").partition(";")[0].strip().lower()
    if kind != "application/json":
        raise InputProblems(
            [FieldProblem("", "The body is not declared as JSON.", "Send Content-Type: application/json.", "not_json")]
        )
    body = await request.body()
    try:
        found = json.loads(body.decode("utf-8"), parse_constant=_refuse_constant)
        json.dumps(found, ensure_ascii=False).encode("utf-8")
    except (ValueError, RecursionError) as refused:
        hint = "Check brackets, quotes and numbers; NaN and Infinity are not JSON."
        raise InputProblems([FieldProblem("", "The body is not JSON.", hint, "not_json")]) from refused
    return found


def documented(model: str) -> dict[str, Any]:
    """OpenAPI of a JSON body that intake, not the framework, checks."""
    schema = {"$ref": f"#/components/schemas/{model}"}
    return {"requestBody": {"required": True, "content": {"application/json": {"schema": schema}}}}


DOCUMENTED_ONLY = (EffectsRequest,)
"""Request models that only the documentation needs."""


@router.post("/effects", response_model=EffectsAnswer, openapi_extra=documented("EffectsRequest"))
def effects(body: Annotated[Any, Depends(json_body)]) -> JSONResponse:
    """Every measure, interval and p value that one fourfold table gives."""
    given = effects_input(body)
    return JSONResponse(effects_answer(effects_of(given.table, given.confidence_level), given.event_is))
