"""/api/v1/effects: the answer, published tables through it, and every refusal in the one shape."""

from __future__ import annotations

import json
import math
from typing import Any

import pytest
from hypothesis import given
from hypothesis import strategies as st
from starlette.testclient import TestClient

from app import __version__
from app.api.routes import ENDPOINTS
from app.errors import InputProblems
from app.intake.counts import effects_input
from app.measures.registry import RISK_METHODS, TESTS, effect_methods, quick_tests
from tests.checks_reader import rows

EXAMPLE = {"intervention": {"events": 46, "total": 418}, "comparator": {"events": 67, "total": 409}}


def post(client: TestClient, body: Any) -> Any:
    answer = client.post("/api/v1/effects", json=body)
    assert answer.status_code == 200, answer.text
    return answer.json()


def arms(a: int, n1: int, c: int, n2: int, **more: Any) -> dict[str, Any]:
    return {"intervention": {"events": a, "total": n1}, "comparator": {"events": c, "total": n2}, **more}


def limits(measure: dict[str, Any], method: str) -> tuple[Any, Any]:
    return next((i["low"], i["high"]) for i in measure["intervals"] if i["method"] == method)


def test_example_of_the_design(client: TestClient) -> None:
    answer = post(client, EXAMPLE)
    assert answer["risks"]["intervention"]["estimate"] == 46 / 418
    effects = answer["effects"]
    assert effects["risk_difference"]["estimate"] == pytest.approx(-0.0537663340391432, rel=1e-12)
    assert effects["risk_ratio"]["estimate"] == pytest.approx(0.6717846175819467, rel=1e-12)
    assert effects["relative_risk_reduction"]["estimate"] == pytest.approx(1 - 0.6717846175819467, rel=1e-12)
    low, high = limits(effects["risk_ratio"], "miettinen_nurminen")
    assert limits(effects["relative_risk_reduction"], "miettinen_nurminen") == (1 - high, 1 - low)
    needed = effects["number_needed_to_treat"]
    assert (needed["rounded"], needed["rule"], needed["direction"]) == (19, "up", "benefit")
    assert needed["estimate"] == pytest.approx(18.599, abs=1e-3)
    assert [segment["direction"] for segment in needed["intervals"][0]["segments"]] == ["benefit"]
    assert answer["version"] == __version__


def test_every_registered_method_is_in_every_answer(client: TestClient) -> None:
    for body in (EXAMPLE, arms(0, 10, 0, 10), arms(10, 10, 10, 10), arms(5, 50, 0, 50)):
        answer = post(client, body)
        for arm in ("intervention", "comparator"):
            assert [i["method"] for i in answer["risks"][arm]["intervals"]] == [m.key for m in RISK_METHODS]
        for measure in ("risk_difference", "risk_ratio", "odds_ratio"):
            keys = [m.key for m in effect_methods(measure)]
            assert [i["method"] for i in answer["effects"][measure]["intervals"]] == keys
        assert [p["test"] for p in answer["p_values"]] == [t.key for t in quick_tests()]
    asked = post(client, {**EXAMPLE, "exact_unconditional": True})["p_values"]
    assert [p["test"] for p in asked] == [t.key for t in TESTS if t.offered]
    assert {p["test"]: p["p"] for p in asked}["barnard_pooled_z"] == pytest.approx(0.02529, abs=5e-6)


def test_methods_with_an_estimate_of_their_own_carry_it(client: TestClient) -> None:
    intervals = {i["method"]: i for i in post(client, arms(0, 10, 3, 10))["effects"]["odds_ratio"]["intervals"]}
    assert intervals["gart_half"]["estimate"] == pytest.approx((0.5 * 7.5) / (10.5 * 3.5))
    assert intervals["fisher_exact_cond"]["estimate"] == 0
    assert "estimate" not in intervals["woolf_logit"]


def test_case_control_design_refuses_all_that_needs_a_risk(client: TestClient) -> None:
    answer = post(client, {**EXAMPLE, "design": "case_control"})
    assert answer["risks"] is None
    for name in ("risk_difference", "risk_ratio", "relative_risk_reduction", "number_needed_to_treat"):
        assert answer["effects"][name] is None
    assert answer["effects"]["odds_ratio"]["estimate"] == pytest.approx(46 * 342 / (372 * 67))
    assert {refusal["why"] for refusal in answer["refused"]} == {
        "In a case-control study the number of cases and controls was chosen, so the totals hold no risk; only the odds ratio "
        "can be had."
    }
    assert [refusal["measure"] for refusal in answer["refused"]][:2] == ["risks", "risk_difference"]


def test_undefined_is_null_and_infinite_is_a_word(client: TestClient) -> None:
    answer = post(client, arms(5, 50, 0, 50))
    ratio = answer["effects"]["risk_ratio"]
    assert ratio["estimate"] == "inf"
    assert limits(ratio, "miettinen_nurminen")[1] == "inf"
    assert limits(ratio, "katz_log") == (None, None)
    assert answer["effects"]["relative_risk_reduction"]["estimate"] == "-inf"
    assert limits(answer["effects"]["relative_risk_reduction"], "miettinen_nurminen")[0] == "-inf"


def test_no_difference(client: TestClient) -> None:
    needed = post(client, arms(5, 50, 5, 50))["effects"]["number_needed_to_treat"]
    assert (needed["estimate"], needed["rounded"], needed["rule"], needed["direction"]) == ("inf", None, None, "none")
    assert [s["direction"] for s in needed["intervals"][0]["segments"]] == ["benefit", "harm"]
    assert needed["intervals"][0]["segments"][0]["high"] == "inf"


def test_wanted_event_and_level(client: TestClient) -> None:
    answer = post(client, {**EXAMPLE, "event_is": "wanted", "confidence_level": 0.9})
    needed = answer["effects"]["number_needed_to_treat"]
    assert (needed["rounded"], needed["rule"], needed["direction"]) == (18, "down", "harm")
    low, _ = limits(answer["effects"]["risk_ratio"], "miettinen_nurminen")
    assert low > limits(post(client, EXAMPLE)["effects"]["risk_ratio"], "miettinen_nurminen")[0]


def test_small_number_needed_keeps_one_decimal(client: TestClient) -> None:
    needed = post(client, arms(1, 10, 4, 13))["effects"]["number_needed_to_treat"]
    assert needed["rounded"] == 4.9
    assert needed["estimate"] == pytest.approx(130 / 27)


def test_log10_of_a_tiny_p(client: TestClient) -> None:
    """0/2000 v 2000/2000: Fisher's p is 1e-1202 (numerics, section 3)."""
    found = {p["test"]: p for p in post(client, arms(0, 2000, 2000, 2000))["p_values"]}
    assert found["fisher_irwin"]["p"] == 0
    assert round(found["fisher_irwin"]["log10_p"]) == -1202


NEWCOMBE = [
    row
    for row in rows("published")
    if row["source"].startswith("Newcombe 1998")
    and row["quantity"].split()[0] in {m.key for m in (*RISK_METHODS, *effect_methods("risk_difference"))}
]


@pytest.mark.parametrize("row", NEWCOMBE, ids=lambda r: r["case_id"])
def test_published_table(client: TestClient, row: dict[str, str]) -> None:
    """Newcombe 1998, Statistics in Medicine 17:857-890, as recorded (with how it is known) in published.csv."""
    method, limit = row["quantity"].split()
    if row["family"] == "single":
        x, n = (int(part) for part in row["inputs"].split()[0].split("/"))
        measure = post(client, arms(x, n, x, n))["risks"]["intervention"]
    else:
        first, _, second = row["inputs"].rsplit(" ", 1)[0].partition(" - ")
        (a, n1), (c, n2) = (map(int, part.split("/")) for part in (first, second))
        measure = post(client, arms(a, n1, c, n2))["effects"]["risk_difference"]
    low, high = limits(measure, method)
    found = low if limit == "low" else high
    assert round(found, 4) == pytest.approx(float(row["printed"]), abs=1e-9)
    assert found == pytest.approx(float(row["recomputed"]), rel=1e-9, abs=1e-12)


REFUSED: list[tuple[Any, list[tuple[str, str, str]]]] = [
    ([], [("", "A JSON object is needed.", "not_an_object")]),
    (
        {},
        [("intervention", "This part is missing.", "missing_field"), ("comparator", "This part is missing.", "missing_field")],
    ),
    ({**EXAMPLE, "alpha": 0.05}, [("alpha", "This field is not known here.", "unknown_field")]),
    (
        {"intervention": {"events": 50, "total": 40, "x": 1}, "comparator": {"events": True, "total": 0}},
        [
            ("intervention.x", "This field is not known here.", "unknown_field"),
            ("intervention.events", "50 events are more than the 40 people.", "count_exceeds_total"),
            ("comparator.events", "A whole number is needed.", "not_a_number"),
            ("comparator.total", "1 or more is needed.", "total_is_zero"),
        ],
    ),
    (arms(-1, 10, 1, 10), [("intervention.events", "0 or more is needed.", "negative")]),
    (
        {**EXAMPLE, "comparator": {"events": "67", "total": 409}},
        [("comparator.events", "A whole number is needed.", "not_a_number")],
    ),
    (
        {**EXAMPLE, "comparator": {"events": 6.5, "total": 409}},
        [("comparator.events", "People are counted whole.", "not_whole")],
    ),
    (
        {**EXAMPLE, "comparator": {"events": None, "total": 409}},
        [("comparator.events", "A whole number is needed.", "not_a_number")],
    ),
    ({**EXAMPLE, "comparator": {"events": 1}}, [("comparator.total", "This number is missing.", "missing_field")]),
    (arms(1, 10**12, 1, 10), [("intervention.total", "More people than this program counts in an arm.", "count_too_large")]),
    (
        {**EXAMPLE, "confidence_level": 95},
        [("confidence_level", "A number from 0.5 to 0.9999 is needed.", "out_of_range")],
    ),
    ({**EXAMPLE, "event_is": "bad"}, [("event_is", "This is none of the choices.", "unknown_choice")]),
]


@pytest.mark.parametrize(("body", "expected"), REFUSED)
def test_error_in_body(client: TestClient, body: Any, expected: list[tuple[str, str, str]]) -> None:
    answer = client.post("/api/v1/effects", json=body)
    assert answer.status_code == 422
    assert [(p["field"], p["message"], p["slug"]) for p in answer.json()["problems"]] == expected
    assert all(p["hint"] for p in answer.json()["problems"])


@pytest.mark.parametrize(
    "text",
    [
        "",
        "{",
        '{"a": NaN}',
        '{"intervention": Infinity}',
        "[" * 100_000,
        '{"a": ' + "9" * 5000 + "}",
        '{"\\ud800": 1}',
        '{"event_is": "\\udfff"}',
        "\ufeff{}",
    ],
)
def test_error_in_json(client: TestClient, text: str) -> None:
    answer = client.post("/api/v1/effects", content=text.encode(), headers={"Content-Type": "application/json"})
    assert answer.status_code == 422
    (problem,) = answer.json()["problems"]
    assert (problem["message"], problem["slug"]) == ("The body is not JSON.", "not_json")


def test_too_large_a_number_is_refused_in_its_field(client: TestClient) -> None:
    text = json.dumps(EXAMPLE).replace("46", "1e999")
    answer = client.post("/api/v1/effects", content=text, headers={"Content-Type": "application/json"})
    assert [p["field"] for p in answer.json()["problems"]] == ["intervention.events"]


def test_openapi_documents_what_is_asked_and_refused(client: TestClient) -> None:
    document = client.get("/openapi.json").json()
    post_effects = document["paths"]["/api/v1/effects"]["post"]
    assert post_effects["requestBody"]["content"]["application/json"]["schema"] == {
        "$ref": "#/components/schemas/EffectsRequest"
    }
    assert post_effects["responses"]["422"]["content"]["application/json"]["schema"] == {
        "$ref": "#/components/schemas/Problems"
    }
    assert "HTTPValidationError" not in json.dumps(document["paths"])
    assert set(document["paths"]) == {f"/api/v1{endpoint.path}" for endpoint in ENDPOINTS}
    for endpoint in ENDPOINTS:
        assert {endpoint.asks.__name__, endpoint.answers.__name__} <= set(document["components"]["schemas"])


JSON = st.recursive(
    st.none() | st.booleans() | st.integers() | st.floats(allow_nan=False) | st.text(max_size=8),
    lambda inner: st.lists(inner, max_size=3) | st.dictionaries(st.text(max_size=12), inner, max_size=3),
    max_leaves=6,
)


@given(
    JSON
    | st.fixed_dictionaries({"intervention": JSON, "comparator": JSON}, optional={"confidence_level": JSON, "event_is": JSON})
)
def test_any_json_is_taken_or_refused_with_reasons(body: Any) -> None:
    try:
        given_input = effects_input(body)
    except InputProblems as refused:
        assert refused.problems
        assert all(problem.message and problem.hint and problem.slug for problem in refused.problems)
    else:
        assert not math.isnan(given_input.confidence_level)


@pytest.mark.parametrize(
    ("change", "field"),
    [({"per": "banana"}, "per"), ({"missing": {"intervention": -1}}, "missing.intervention")],
)
def test_what_changes_no_figure_is_still_read(client: TestClient, change: dict[str, object], field: str) -> None:
    body = {"intervention": {"events": 46, "total": 418}, "comparator": {"events": 67, "total": 409}}
    answer = client.post("/api/v1/effects", json={**body, **change})
    assert answer.status_code == 422
    assert [problem["field"] for problem in answer.json()["problems"]] == [field]


def test_a_name_given_twice_is_refused(client: TestClient) -> None:
    text = '{"intervention":{"events":46,"events":4,"total":418},"comparator":{"events":67,"total":409}}'
    answer = client.post("/api/v1/effects", content=text, headers={"content-type": "application/json"})
    assert answer.status_code == 422
    assert answer.json()["problems"][0]["slug"] == "not_json"
