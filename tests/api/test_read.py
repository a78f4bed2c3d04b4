"""POST /read, and /check of a passage."""

from __future__ import annotations

import pytest
from starlette.testclient import TestClient

PASSAGE = (
    "Ulcers recurred in 46 of 418 participants (11.0%) with active review and 67 of 409 (16.4%) with usual care, a 67% reduction "
    "(relative risk 0.67, 95% CI 0.47 to 0.95; P=0.024)."
)


def test_read_gives_claims_with_their_places(client: TestClient) -> None:
    answer = client.post("/api/v1/read", json={"passage": PASSAGE}).json()
    (outcome,) = answer["outcomes"]
    assert [(c["quantity"], c["arm"], c["printed"]) for c in outcome["claims"]][:3] == [
        ("events", "intervention", "46"),
        ("total", "intervention", "418"),
        ("risk", "intervention", "11.0"),
    ]
    assert all(PASSAGE[slice(*c["span"])] == c["printed"] for c in outcome["claims"])
    assert answer["unread"] == answer["questions"] == []


def test_check_of_a_passage_names_what_a_number_is(client: TestClient) -> None:
    answer = client.post("/api/v1/check", json={"passage": PASSAGE}).json()
    (outcome,) = answer["outcomes"]
    verdicts = {c["quantity"]: (c["verdict"], c["reading"]) for c in outcome["claims"]}
    assert verdicts["relative_risk_reduction"] == ("agrees_under_another_reading", "ratio_read_as_reduction")
    assert verdicts["risk_ratio"] == verdicts["p_value"] == ("agrees", None)
    assert outcome["tables"]["list"] == [[46, 418, 67, 409]]


@pytest.mark.parametrize(
    ("body", "field", "slug"),
    [
        ({}, "passage", "missing_field"),
        ({"passage": 4}, "passage", "missing_field"),
        ({"passage": "x" * 200_001}, "passage", "too_long"),
        ({"passage": "x", "more": 1}, "more", "unknown_field"),
    ],
)
def test_error_in_passage(client: TestClient, body: dict[str, object], field: str, slug: str) -> None:
    answer = client.post("/api/v1/read", json=body)
    assert answer.status_code == 422
    assert [(p["field"], p["slug"]) for p in answer.json()["problems"]] == [(field, slug)]


def test_error_a_passage_and_claims(client: TestClient) -> None:
    answer = client.post("/api/v1/check", json={"passage": "x", "claims": [{"quantity": "p_value", "printed": "0.04"}]})
    assert [(p["field"], p["slug"]) for p in answer.json()["problems"]] == [("passage", "unknown_field")]


@pytest.mark.parametrize("quantity", ["risk", "rate", "person_time", "events"])
def test_error_a_number_of_an_arm_needs_its_number(client: TestClient, quantity: str) -> None:
    claim = {"quantity": quantity, "arm": "intervention", "printed": None, "interval": {"low": "1", "high": "2"}}
    answer = client.post("/api/v1/check", json={"claims": [claim]})
    assert answer.status_code == 422
    assert answer.json()["problems"][0]["slug"] == "missing_field"


def test_an_arm_said_of_a_measure_is_let_pass(client: TestClient) -> None:
    claim = {"quantity": "risk_ratio", "arm": "intervention", "printed": "0.67", "interval": {"low": "0.70", "high": "0.95"}}
    (outcome,) = client.post("/api/v1/check", json={"claims": [claim]}).json()["outcomes"]
    assert [c["finding"] for c in outcome["claims"]] == ["estimate_outside_interval"]
