"""The other endpoints: worked values from the field, check values, and refusals in the one shape."""

from __future__ import annotations

import json
import math
from typing import Any

import pytest
from starlette.testclient import TestClient

from app.api.routes import ENDPOINTS
from app.measures.registry import RATE_EFFECTS, RATE_METHODS, RATE_TESTS
from tests.checks_reader import misses, rows


def post(client: TestClient, path: str, body: Any) -> Any:
    answer = client.post(f"/api/v1/{path}", json=body)
    assert answer.status_code == 200, answer.text
    return answer.json()


def refusals(client: TestClient, path: str, body: Any) -> list[tuple[str, str]]:
    answer = client.post(f"/api/v1/{path}", json=body)
    assert answer.status_code == 422
    return [(p["field"], p["slug"]) for p in answer.json()["problems"]]


def value(found: Any) -> float:
    """A JSON number as a float: null is nan, "inf" infinite."""
    return math.nan if found is None else float(found)


RATES = {"intervention": {"events": 7, "person_time": 4412.0}, "comparator": {"events": 12, "person_time": 4388.0}}


def test_rates_of_the_design(client: TestClient) -> None:
    answer = post(client, "rates", {**RATES, "per": 100})
    assert answer["rates"]["intervention"]["estimate"] == 7 / 4412
    assert answer["scaled"]["rates"]["intervention"]["estimate"] == pytest.approx(100 * 7 / 4412)
    assert answer["scaled"]["per"] == 100
    assert [i["method"] for i in answer["rates"]["comparator"]["intervals"]] == [m.key for m in RATE_METHODS]
    for measure in ("rate_ratio", "rate_difference"):
        assert [i["method"] for i in answer[measure]["intervals"]] == [m.key for m in RATE_EFFECTS if m.measure == measure]
    assert [p["test"] for p in answer["p_values"]] == [t.key for t in RATE_TESTS]
    assert "number_needed_to_treat" not in answer
    assert "risk" not in str(sorted(answer))
    assert answer["mean_follow_up"] == {"intervention": None, "comparator": None}


def test_rates_show_mean_follow_up_and_person_time_needed(client: TestClient) -> None:
    body = {
        "intervention": {"events": 7, "person_time": 4412.0, "total": 2206},
        "comparator": {"events": 12, "person_time": 4388.0},
    }
    answer = post(client, "rates", body)
    assert answer["mean_follow_up"] == {"intervention": 2.0, "comparator": None}
    needed = answer["person_time_needed"]
    assert needed["estimate"] == pytest.approx(1 / (12 / 4388 - 7 / 4412))
    assert [segment["direction"] for segment in needed["segments"]] == ["fewer", "more"]
    assert needed["assumes"] == "Person-time for one event fewer or more at a constant rate; not a number of people."


def test_one_sided_p_is_half_of_the_two_sided(client: TestClient) -> None:
    body = {"scale": "ratio", "estimate": 0.78, "low": 0.66, "high": 0.92}
    two, one = post(client, "back-calculation", body), post(client, "back-calculation", {**body, "sides": 1})
    assert one["p"] == pytest.approx(two["p"] / 2)
    back = post(client, "back-calculation", {"scale": "ratio", "estimate": 0.78, "p": one["p"], "sides": 1})
    assert back["z"] == pytest.approx(two["z"])


def test_rates_reproduce_the_check_values(client: TestClient) -> None:
    for row in rows("persontime"):
        body = {
            "intervention": {"events": int(row["e1"]), "person_time": float(row["T1"])},
            "comparator": {"events": int(row["e2"]), "person_time": float(row["T2"])},
            "confidence_level": float(row["level"]) / 100,
        }
        answer = post(client, "rates", body)
        place = {
            "rate1": answer["rates"]["intervention"],
            "rate2": answer["rates"]["comparator"],
            "IRR": answer["rate_ratio"],
            "IRD": answer["rate_difference"],
        }[row["measure"]]
        interval = next(i for i in place["intervals"] if i["method"] == row["method"])
        assert not misses(value(interval["low"]), float(row["low"])), row
        assert not misses(value(interval["high"]), float(row["high"])), row
        if row["p"]:
            p = next(p["p"] for p in answer["p_values"] if p["test"] == row["method"])
            assert not misses(p, float(row["p"])), row


def test_strata_reproduce_the_check_values(client: TestClient) -> None:
    tables: dict[str, list[dict[str, Any]]] = {}
    for row in rows("stratified_tables"):
        stratum = {
            "intervention": {"events": int(row["a"]), "total": int(row["n1"])},
            "comparator": {"events": int(row["c"]), "total": int(row["n2"])},
        }
        tables.setdefault(row["case_id"], []).append(stratum)
    names = {"OR": "odds_ratio", "RR": "risk_ratio", "RD": "risk_difference"}
    for row in rows("stratified"):
        answer = post(client, "strata", {"strata": tables[row["case_id"]], "confidence_level": float(row["level"] or 95) / 100})
        if row["measure"] == "test":
            test = next(t for t in answer["tests"] if t["test"] == row["method"])
            assert not misses(value(test["statistic"]), float(row["statistic"])), row
            assert not misses(value(test["p"]), float(row["p"])), row
            assert test["df"] == int(row["df"])
        else:
            measure = answer[names[row["measure"]]]
            interval = next(i for i in measure["intervals"] if i["method"] == row["method"])
            assert not misses(value(measure["estimate"]), float(row["estimate"])), row
            assert not misses(value(interval["low"]), float(row["low"])), row
            assert not misses(value(interval["high"]), float(row["high"])), row


def test_hazard_ratio_worked_value(client: TestClient) -> None:
    """HR 0.75 at a comparator risk of 50% gives 40.5%, not 37.5% (requirements R68, computed there)."""
    body = {"hazard_ratio": {"estimate": 0.75, "low": 0.6, "high": 0.94}, "comparator_risk": 0.5}
    answer = post(client, "hazard", body)
    assert round(100 * answer["risk_with"]["estimate"], 1) == 40.5
    assert answer["number_needed_to_treat"]["direction"] == "benefit"
    assert answer["assumes"] == "The ratio of the hazards is the same at all times up to this one."


def test_hazard_ratio_for_being_free_of_the_event_is_turned_round(client: TestClient) -> None:
    event = {"hazard_ratio": {"estimate": 0.8, "low": 0.64, "high": 1.25}, "comparator_risk": 0.3}
    free = {
        "hazard_ratio": {"estimate": 1.25, "low": 0.8, "high": 1.5625},
        "comparator_survival": 0.7,
        "ratio_is_for": "event_free",
    }
    first, second = post(client, "hazard", event), post(client, "hazard", free)
    for part in ("estimate", "low", "high"):
        assert first["risk_with"][part] == pytest.approx(second["risk_with"][part])


def test_hazard_reproduces_the_check_values(client: TestClient) -> None:
    kinds = {"NNTB": "benefit", "NNTH": "harm"}
    for row in rows("nnt_hr"):
        limits = {"estimate": float(row["hr"]), "low": float(row["hr_low"]), "high": float(row["hr_high"])}
        answer = post(client, "hazard", {"hazard_ratio": limits, "comparator_survival": float(row["control_survival"])})
        assert not misses(1 - answer["risk_with"]["estimate"], float(row["treated_survival"])), row
        assert not misses(-answer["risk_difference"]["high"] + 0.0, float(row["arr_low"])), row
        assert not misses(value(answer["number_needed_to_treat"]["estimate"]), float(row["nnt"])), row
        segments = answer["number_needed_to_treat"]["segments"]
        if row["form"] == "through_inf":
            assert [s["direction"] for s in segments] == ["benefit", "harm"]
            assert not misses(segments[0]["low"], float(row["best"]))
            assert not misses(segments[1]["low"], float(row["worst"]))
        elif row["form"] in kinds:
            (only,) = segments
            assert only["direction"] == kinds[row["form"]]
        else:
            assert segments == []


def test_odds_ratio_to_risk_worked_values(client: TestClient) -> None:
    """Handbook 5.1, 12.5.4: OR 0.73 at 300 in 1000 gives 62 fewer, NNT 17; RR 0.92 gives 24 fewer, NNT 42 (R39)."""
    for name, ratio, fewer, needed in (("odds_ratio", 0.73, 62, 17), ("risk_ratio", 0.92, 24, 42)):
        (row,) = post(client, "translate", {name: ratio, "starting_risks": [0.3]})["risks"]
        assert round(-1000 * row["difference"]) == fewer
        assert math.ceil(-1 / row["difference"]) == needed


def test_translate_reproduces_the_check_values(client: TestClient) -> None:
    for row in rows("translate"):
        name = "odds_ratio" if row["direction"] == "OR_to_risk" else "risk_ratio"
        (found,) = post(client, "translate", {name: float(row["ratio"]), "starting_risks": [float(row["baseline_risk"])]})[
            "risks"
        ]
        expected = float(row["risk_treated"])
        assert found["possible"] == (expected <= 1)
        if found["possible"]:
            assert not misses(found["risk_with"], expected)
        else:
            assert found["risk_with"] is None
        if row["zhang_yu_rr"]:
            assert not misses(value(found["risk_ratio"]), float(row["zhang_yu_rr"]))


def test_back_calculation_reproduces_the_check_values(client: TestClient) -> None:
    for row in rows("backcalc"):
        if row["method"] != "exact_normal":
            continue
        body = {"scale": row["scale"], "estimate": float(row["estimate"]), "confidence_level": float(row["level"]) / 100}
        if row["task"] == "p_to_ci":
            answer = post(client, "back-calculation", {**body, "p": float(row["given_p"])})
            assert not misses(answer["low"], float(row["low"]))
            assert not misses(answer["high"], float(row["high"]))
        else:
            limits = {"low": float(row["given_low"]), "high": float(row["given_high"])}
            answer = post(client, "back-calculation", {**body, **limits})
            assert not misses(answer["p"], float(row["p"]))
        assert not misses(answer["z"], float(row["z"]))
        assert not misses(answer["standard_error"], float(row["se"]))


def test_e_value_reproduces_the_check_values(client: TestClient) -> None:
    for row in rows("evalue"):
        limits = {name: float(row[name]) for name in ("estimate", "low", "high")}
        answer = post(client, "e-value", {"reported": row["scale"], **limits})
        assert not misses(answer["risk_ratio"], float(row["rr_used"]))
        assert not misses(answer["e_value"], float(row["evalue_estimate"]))
        assert not misses(answer["e_value_of_limit"], float(row["evalue_limit"]))


def test_interaction_reproduces_the_check_values(client: TestClient) -> None:
    for row in rows("interaction"):
        body = {"scale": row["scale"]}
        estimates = {
            name: {"estimate": float(row[f"est{i}"]), "low": float(row[f"low{i}"]), "high": float(row[f"high{i}"])}
            for i, name in ((1, "first"), (2, "second"))
        }
        answer = post(client, "interaction", {**body, **estimates})
        for found, column in (
            (answer["contrast"]["estimate"], "contrast"),
            (answer["contrast"]["low"], "contrast_low"),
            (answer["contrast"]["high"], "contrast_high"),
            (answer["z"], "z"),
            (answer["p"], "p"),
            (answer["standard_error"], "se_d"),
        ):
            assert not misses(found, float(row[column])), row


def test_cluster_reproduces_the_check_values(client: TestClient) -> None:
    for row in rows("cluster"):
        body = {
            "intervention": {"events": int(row["a"]), "total": int(row["n1"])},
            "comparator": {"events": int(row["c"]), "total": int(row["n2"])},
            "cluster_size": float(row["mean_cluster_size"]),
            "intracluster_correlation": float(row["icc"]),
        }
        answer = post(client, "cluster", body)
        assert not misses(answer["design_effect"], float(row["design_effect"]))
        assert not misses(answer["intervention"]["events"], float(row["eff_a"]))
        assert not misses(answer["comparator"]["total"], float(row["eff_n2"]))
        assert not misses(answer["risk_ratio"]["low"], float(row["rr_low95"]))
        assert not misses(answer["risk_ratio"]["high"], float(row["rr_high95"]))


def test_paired_reproduces_the_check_values(client: TestClient) -> None:
    for row in rows("paired"):
        answer = post(client, "paired", {"first_only": int(row["b"]), "second_only": int(row["c"])})
        found = next(p["p"] for p in answer["p_values"] if p["test"] == row["method"])
        assert not misses(value(found), float(row["p"])), row


def test_probability_reproduces_the_check_values(client: TestClient) -> None:
    for row in rows("bayes"):
        body = {
            "intervention": {"events": int(row["a"]), "total": int(row["n1"])},
            "comparator": {"events": int(row["c"]), "total": int(row["n2"])},
            "prior": "uniform" if row["prior"].startswith("uniform") else "jeffreys",
        }
        found = post(client, "probability", body)["probability_lower"]
        # Below 1e-20 the reference's own quadrature holds absolutely only (its note gives the size).
        assert abs(found - float(row["probability"])) <= 1e-9 * float(row["probability"]) + 1e-22


REFUSED: list[tuple[str, Any, list[tuple[str, str]]]] = [
    (
        "rates",
        {"intervention": {"events": 1, "person_time": 0}, "comparator": RATES["comparator"]},
        [("intervention.person_time", "out_of_range")],
    ),
    ("rates", {**RATES, "per": -1}, [("per", "out_of_range")]),
    ("strata", {"strata": []}, [("strata", "missing_field")]),
    (
        "strata",
        {"strata": [{"intervention": {"events": 5, "total": 4}, "comparator": {"events": 1, "total": 4}}]},
        [("strata[0].intervention.events", "count_exceeds_total")],
    ),
    ("hazard", {"comparator_risk": 0.5}, [("hazard_ratio", "missing_field")]),
    (
        "hazard",
        {"hazard_ratio": {"estimate": 0.5, "low": 0.6, "high": 0.9}, "comparator_risk": 1.5, "ratio_is_for": "x"},
        [
            ("hazard_ratio.estimate", "estimate_outside_interval"),
            ("ratio_is_for", "unknown_choice"),
            ("comparator_risk", "out_of_range"),
        ],
    ),
    ("translate", {"starting_risks": [0.1, 2]}, [("risk_ratio", "missing_field"), ("starting_risks.1", "out_of_range")]),
    ("translate", {"odds_ratio": 1, "risk_ratio": 1, "starting_risks": [0.1]}, [("risk_ratio", "unknown_field")]),
    ("back-calculation", {"scale": "ratio", "estimate": 0.7, "p": 0}, [("p", "out_of_range")]),
    ("back-calculation", {"scale": "ratio", "estimate": 0.7, "p": 0.1, "low": 0.5}, [("low", "unknown_field")]),
    ("back-calculation", {"scale": "x", "estimate": 0.7, "low": 0.5, "high": 0.9}, [("scale", "unknown_choice")]),
    ("e-value", {"reported": "RR", "estimate": 0, "low": 0.5, "high": 2}, [("estimate", "out_of_range")]),
    ("interaction", {"scale": "difference", "first": {"estimate": 1, "low": 0, "high": 2}}, [("second", "missing_field")]),
    (
        "cluster",
        {"intervention": {"events": 1, "total": 4}, "comparator": {"events": 1, "total": 4}, "cluster_size": 0.5},
        [("cluster_size", "out_of_range"), ("intracluster_correlation", "missing_field")],
    ),
    ("paired", {"first_only": 1.5}, [("first_only", "not_whole"), ("second_only", "missing_field")]),
    (
        "probability",
        {"prior": "flat"},
        [("intervention", "missing_field"), ("comparator", "missing_field"), ("prior", "unknown_choice")],
    ),
]


@pytest.mark.parametrize(("path", "body", "expected"), REFUSED)
def test_error_in_body(client: TestClient, path: str, body: Any, expected: list[tuple[str, str]]) -> None:
    assert refusals(client, path, body) == expected


@pytest.mark.parametrize("endpoint", ENDPOINTS, ids=lambda e: e.path)
@pytest.mark.parametrize("body", [[], None, "x", 3, {}, {"zzz": 1}])
def test_error_in_anything_else(client: TestClient, endpoint: Any, body: Any) -> None:
    answer = client.post(f"/api/v1{endpoint.path}", content=json.dumps(body), headers={"Content-Type": "application/json"})
    assert answer.status_code == 422
    assert all(set(problem) == {"field", "message", "hint", "slug"} for problem in answer.json()["problems"])
