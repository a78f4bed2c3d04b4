"""/apply: worked values of the field, what is impossible, and refusals."""

from __future__ import annotations

from typing import Any

import pytest
from starlette.testclient import TestClient


def ask(client: TestClient, **body: Any) -> Any:
    return client.post("/api/v1/apply", json=body)


def scales(client: TestClient, **body: Any) -> dict[str, Any]:
    answer = ask(client, **body)
    assert answer.status_code == 200, answer.text
    return {row["scale"]: row for row in answer.json()["baselines"][0]["scales"]}


def ratio(measure: str, estimate: float) -> dict[str, Any]:
    return {"measure": measure, "estimate": estimate, "low": estimate, "high": estimate}


@pytest.mark.parametrize(
    ("measure", "value", "fewer", "needed"),
    [("odds_ratio", 0.73, 62, 17), ("risk_ratio", 0.92, 24, 42)],
)
def test_worked_values_of_the_handbook(client: TestClient, measure: str, value: float, fewer: int, needed: int) -> None:
    """Cochrane Handbook for Systematic Reviews of Interventions, chapter 15, at 300 per 1000."""
    row = scales(client, effect=ratio(measure, value), baseline_risks=[0.3])[measure]
    assert round(-1000 * row["difference"]) == fewer
    assert (row["number_needed_to_treat"]["rounded"], row["number_needed_to_treat"]["direction"]) == (needed, "benefit")


def test_hazard_ratio_at_a_risk(client: TestClient) -> None:
    row = scales(client, effect=ratio("hazard_ratio", 0.75), baseline_risks=[0.5])["hazard_ratio"]
    assert row["risk_with"] == pytest.approx(0.405396442498639, rel=1e-12)  # 1 - 0.5^0.75
    free = {"measure": "hazard_ratio", "estimate": 4 / 3, "low": 1.2, "high": 1.5}
    row = scales(client, effect=free, face="complement", baseline_risks=[0.5])["hazard_ratio"]
    assert row["risk_with"] == pytest.approx(0.405396442498639, rel=1e-12)


def test_thirty_against_twenty_per_cent_elsewhere(client: TestClient) -> None:
    """Computed by hand: at 5% 17 and 20 fewer, the difference impossible; at 80% 267, 100 and 100."""
    body = {"effect": ratio("risk_difference", -0.1), "comparator_risk": 0.3}
    at5, at80 = (scales(client, **body, baseline_risks=[risk]) for risk in (0.05, 0.8))
    fewer = [[row["difference"] and round(-1000 * row["difference"]) for row in at.values()] for at in (at5, at80)]
    assert fewer[0][:2] + fewer[0][3:] == [17, 20, None]
    assert at5["risk_difference"]["possible"] is False
    assert at5["risk_difference"]["number_needed_to_treat"] is None
    assert fewer[1][:2] + fewer[1][3:] == [267, 100, 100]


def test_counts_give_each_scale_its_own_default_interval(client: TestClient) -> None:
    counts = {"intervention": {"events": 46, "total": 418}, "comparator": {"events": 67, "total": 409}}
    found = scales(client, counts=counts, baseline_risks=[0.08])
    assert [(s, row["converted"]) for s, row in found.items()] == [
        ("risk_ratio", False),
        ("odds_ratio", False),
        ("hazard_ratio", True),
        ("risk_difference", False),
    ]
    assert [round(-1000 * found["risk_ratio"][end]) for end in ("difference", "high", "low")] == [26, 4, 42]
    assert found["risk_difference"]["low"] is None
    effects = client.post("/api/v1/effects", json=counts).json()["effects"]["risk_difference"]["intervals"]
    default = next(i for i in effects if i["default"])
    assert found["risk_difference"]["high"] == pytest.approx(default["high"])


def test_the_scale_given_does_not_hang_on_the_trials_risk(client: TestClient) -> None:
    rows = [
        scales(client, effect=ratio("risk_ratio", 0.7), baseline_risks=[0.2], comparator_risk=risk)["risk_ratio"]
        for risk in (0.0, 0.4, 1.0)
    ]
    assert rows[0] == rows[1] == rows[2]


@pytest.mark.parametrize(
    ("change", "field", "message"),
    [
        ({"effect": None}, "effect", "This part is missing."),
        ({"effect": {**ratio("risk_ratio", 0.7), "low": 0.8}}, "effect.estimate", "The estimate must lie within its interval."),
        ({"effect": ratio("risk_difference", 1.2)}, "effect.estimate", "A number from -1 to 1 is needed."),
        ({"baseline_risks": []}, "baseline_risks", "A list of 1 to 1000 risks is needed."),
        ({"baseline_risks": [1.5]}, "baseline_risks.[0]", "A number from 0 to 1 is needed."),
        ({"face": "both"}, "face", "This is none of the choices."),
    ],
)
def test_error_in_body(client: TestClient, change: dict[str, Any], field: str, message: str) -> None:
    answer = ask(client, **{"effect": ratio("risk_ratio", 0.7), "baseline_risks": [0.2], **change})
    assert answer.status_code == 422
    assert (field, message) in [(p["field"], p["message"]) for p in answer.json()["problems"]]


def test_a_difference_too_small_for_a_number_needed(client: TestClient) -> None:
    row = scales(client, effect={"measure": "risk_difference", "estimate": 5e-324, "low": 0, "high": 0.1}, baseline_risks=[0.0])
    needed = row["risk_difference"]["number_needed_to_treat"]
    assert (needed["estimate"], needed["rounded"]) == ("inf", None)


def test_benefit_and_harm_each_with_its_own_risk(client: TestClient) -> None:
    trial = [
        {"name": "Recurrence", "intervention": {"events": 46, "total": 418}, "comparator": {"events": 67, "total": 409}},
        {"name": "Irritation", "intervention": {"events": 51, "total": 418}, "comparator": {"events": 23, "total": 409}},
    ]
    outcomes = [{**trial[0], "horizon": "12 months", "baseline_risk": 0.08}, {**trial[1], "horizon": "12 months"}]
    answer = client.post("/api/v1/balance", json={"outcomes": outcomes})
    assert answer.status_code == 200
    body = answer.json()
    assert (body["per"], body["one_horizon"]) == (1000, True)
    rows = [
        {key: row[key] if isinstance(row[key], str) else round(row[key]) for key in row if key != "event_is"}
        for row in body["outcomes"]
    ]
    assert [
        (r["name"], r["starting_risk"], r["held"], r["without"], r["with"], r["change"], r["low"], r["high"]) for r in rows
    ] == [
        ("Recurrence", "given", "risk_ratio", 80, 54, -26, -42, -4),
        ("Irritation", "trial", "risk_difference", 56, 122, 66, 27, 106),
    ]


def test_outcomes_of_different_times_say_so(client: TestClient) -> None:
    arms = {"intervention": {"events": 1, "total": 9}, "comparator": {"events": 2, "total": 9}}
    answer = client.post("/api/v1/balance", json={"outcomes": [{**arms, "horizon": "1 year"}, arms], "per": 100})
    assert answer.json()["one_horizon"] is False


def test_error_in_balance(client: TestClient) -> None:
    arms = {"intervention": {"events": 10, "total": 9}, "comparator": {"events": 2, "total": 9}}
    answer = client.post("/api/v1/balance", json={"outcomes": [{**arms, "name": 7, "held": "nothing"}], "per": 0})
    assert [(p["field"], p["message"]) for p in answer.json()["problems"]] == [
        ("per", "1 or more is needed."),
        ("outcomes[0].intervention.events", "10 events are more than the 9 people."),
        ("outcomes[0].held", "This is none of the choices."),
        ("outcomes[0].name", "Text of at most 400 characters is needed."),
    ]
