"""The endpoints of /api/v1: JSON in, intake, the core, JSON out. All are of one form."""

from __future__ import annotations

import json
from collections.abc import Callable
from dataclasses import dataclass
from typing import Annotated, Any

from fastapi import APIRouter, Depends, Request
from fastapi.responses import JSONResponse

from app.api import answers, apply, apply_schemas, balance, check_schemas, checks, schemas
from app.api.answers import Json
from app.api.shapes import Problems, Shape
from app.appraisal.effects import effects_of
from app.appraisal.rates import rates_of
from app.errors import FieldProblem, InputProblems
from app.intake import apply as intake_apply
from app.intake import balance as intake_balance
from app.intake import claims, counts, estimates

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


def _once(pairs: list[tuple[str, Any]]) -> dict[str, Any]:
    """An object none of whose names stands twice."""
    found = dict(pairs)
    if len(found) < len(pairs):
        raise ValueError("a name stands twice in one object")
    return found


async def json_body(request: Request) -> Any:
    """The body as JSON, strictly: no NaN, no lone surrogate, declared as JSON."""
    kind = request.headers.get("content-type", "").partition(";")[0].strip().lower()
    if kind != "application/json":
        hint = "Send Content-Type: application/json."
        raise InputProblems([FieldProblem("", "The body is not declared as JSON.", hint, "not_json")])
    body = await request.body()
    try:
        found = json.loads(body.decode("utf-8"), parse_constant=_refuse_constant, object_pairs_hook=_once)
        json.dumps(found, ensure_ascii=False).encode("utf-8")
    except (ValueError, RecursionError) as refused:
        hint = "Check brackets, quotes and numbers; NaN, Infinity and a name given twice are refused."
        raise InputProblems([FieldProblem("", "The body is not JSON.", hint, "not_json")]) from refused
    return found


@dataclass(frozen=True, slots=True)
class Endpoint:
    """One endpoint: its path and summary, the documented shapes, and body -> answer."""

    path: str
    summary: str
    asks: type[Shape]
    answers: type[Shape]
    answer: Callable[[Any], Json]


def _effects(body: Any) -> Json:
    given = counts.effects_input(body)
    found = effects_of(given.table, given.confidence_level, exact_unconditional=given.exact_unconditional)
    return answers.effects_answer(found, given)


def _rates(body: Any) -> Json:
    given = counts.rates_input(body)
    return answers.rates_answer(rates_of(given.data, given.confidence_level), given)


ENDPOINTS: tuple[Endpoint, ...] = (
    Endpoint(
        "/read",
        "The printed numbers of a passage as claims.",
        check_schemas.ReadRequest,
        check_schemas.ReadAnswer,
        lambda body: checks.read_answer(claims.read_input(body)),
    ),
    Endpoint(
        "/check",
        "Every table that prints so, and a verdict for each printed number.",
        check_schemas.CheckRequest,
        check_schemas.CheckAnswer,
        lambda body: checks.check_answer(claims.claims_input(body)),
    ),
    Endpoint(
        "/effects",
        "Every measure, interval and p value that one fourfold table gives.",
        schemas.EffectsRequest,
        schemas.EffectsAnswer,
        _effects,
    ),
    Endpoint(
        "/rates",
        "Rates, their ratio and difference, from events over person-time.",
        schemas.RatesRequest,
        schemas.RatesAnswer,
        _rates,
    ),
    Endpoint(
        "/strata",
        "Mantel-Haenszel estimates and tests over strata.",
        schemas.StrataRequest,
        schemas.StrataAnswer,
        lambda body: answers.strata_answer(counts.strata_input(body)),
    ),
    Endpoint(
        "/apply",
        "An effect carried to other starting risks, under each scale that may stay the same.",
        apply_schemas.ApplyRequest,
        apply_schemas.ApplyAnswer,
        lambda body: apply.apply_answer(intake_apply.apply_input(body)),
    ),
    Endpoint(
        "/balance",
        "Outcomes of one trial in the same form, benefit beside harm.",
        apply_schemas.BalanceRequest,
        apply_schemas.BalanceAnswer,
        lambda body: balance.balance_answer(intake_balance.balance_input(body)),
    ),
    Endpoint(
        "/hazard",
        "A hazard ratio as risk, difference and number needed to treat at a time.",
        schemas.HazardRequest,
        schemas.HazardAnswer,
        lambda body: answers.hazard_answer(estimates.hazard_input(body)),
    ),
    Endpoint(
        "/back-calculation",
        "From an interval to its standard error and p, or from p to the interval.",
        schemas.BackRequest,
        schemas.BackAnswer,
        lambda body: answers.back_answer(estimates.back_input(body)),
    ),
    Endpoint(
        "/translate",
        "An odds ratio or risk ratio as a risk at starting risks.",
        schemas.TranslateRequest,
        schemas.TranslateAnswer,
        lambda body: answers.translate_answer(estimates.translate_input(body)),
    ),
    Endpoint(
        "/e-value",
        "E-values of an observational estimate.",
        schemas.EValueRequest,
        schemas.EValueAnswer,
        lambda body: answers.e_value_answer(estimates.e_value_input(body)),
    ),
    Endpoint(
        "/interaction",
        "Whether two independent estimates differ.",
        schemas.InteractionRequest,
        schemas.InteractionAnswer,
        lambda body: answers.interaction_answer(estimates.interaction_input(body)),
    ),
    Endpoint(
        "/cluster",
        "Counts of a cluster-randomised trial cut down by the design effect.",
        schemas.ClusterRequest,
        schemas.ClusterAnswer,
        lambda body: answers.cluster_answer(counts.cluster_input(body)),
    ),
    Endpoint(
        "/paired",
        "Tests of no difference within pairs.",
        schemas.PairedRequest,
        schemas.PairedAnswer,
        lambda body: answers.paired_answer(counts.paired_input(body)),
    ),
    Endpoint(
        "/probability",
        "Posterior probability that the intervention's risk is the lower one.",
        schemas.ProbabilityRequest,
        schemas.ProbabilityAnswer,
        lambda body: answers.probability_answer(counts.probability_input(body)),
    ),
)


def _mount(endpoint: Endpoint) -> None:
    def answer(body: Annotated[Any, Depends(json_body)]) -> JSONResponse:
        return JSONResponse(endpoint.answer(body))

    # The request model only documents: intake alone refuses.
    schema = {"$ref": f"#/components/schemas/{endpoint.asks.__name__}"}
    router.add_api_route(
        endpoint.path,
        answer,
        methods=["POST"],
        name=endpoint.path.strip("/").replace("-", "_"),
        summary=endpoint.summary,
        response_model=endpoint.answers,
        openapi_extra={"requestBody": {"required": True, "content": {"application/json": {"schema": schema}}}},
    )


for _endpoint in ENDPOINTS:
    _mount(_endpoint)
