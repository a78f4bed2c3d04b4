"""The `truth` of a collected passage as claims, for the tests of the verdicts.

`tests/checks/passages.jsonl` says what each passage prints; phrasebook notes in `tests/checks/README.md` say how its words map.
"""

from __future__ import annotations

import json
from pathlib import Path
from typing import Any

from app.printed.claims import Arm, Claim, PrintedInterval, Quantity, RiskKind, default_unit, number_kind
from app.printed.number import PrintedNumber, read_number

PASSAGES = Path(__file__).parents[1] / "checks" / "passages.jsonl"

LABELS: dict[str, Quantity] = {
    "RR": "risk_ratio",
    "OR": "odds_ratio",
    "aOR": "odds_ratio",
    "HR": "hazard_ratio",
    "RD": "risk_difference",
    "ARR": "risk_difference",
    "RRR": "relative_risk_reduction",
    "NNT": "number_needed_to_treat",
    "IRR": "rate_ratio",
}
UNITS = {"pp": "points", "%": "percent"}


def rows() -> list[dict[str, Any]]:
    """Every passage of the collection."""
    return [json.loads(line) for line in PASSAGES.read_text(encoding="utf-8").splitlines()]


def _place(text: str, *needles: str | None) -> tuple[int, int] | None:
    for needle in needles:
        if needle and (at := text.find(needle)) >= 0:
            return at, at + len(needle)
    return None


def _number(text: str, quantity: Quantity) -> PrintedNumber:
    return read_number(text, number_kind(quantity))


def _arm_claims(arm: dict[str, Any], text: str) -> list[Claim]:
    role: Arm = arm["role"]
    found = []
    texts: dict[Quantity, str | None] = {
        "events": None if arm["events"] is None else str(arm["events"]),
        "total": None if arm["n"] is None else str(arm["n"]),
        "risk": arm["percent"],
    }
    for quantity, printed in texts.items():
        if printed is None:
            continue
        kind: RiskKind | None = "kaplan_meier" if quantity == "risk" and arm.get("percent_kind") == "KM" else None
        place = _place(text, printed, f"{int(printed):,}") if quantity == "events" else None
        found.append(
            Claim(
                f"{role}-{quantity}",
                quantity,
                role,
                _number(printed, quantity),
                default_unit(quantity),
                risk_kind=kind,
                span=place,
            )
        )
    if arm["rate"]:
        found.append(Claim(f"{role}-rate", "rate", role, _number(arm["rate"], "rate"), "per_10000_person_years"))
    return found


def _basis(measure: dict[str, Any]) -> str:
    model = measure.get("model") or ""
    if measure["adjusted"] or "adjusted" in model:
        return "adjusted"
    if "cluster" in model:
        return "clustered"
    return "time_to_event" if "cox" in model or "1-RR" in model else "unstated"


def _measure_claim(measure: dict[str, Any], key: str) -> Claim:
    quantity = LABELS[measure["label"]]
    if measure["label"] == "ARR" and measure["adjusted"]:
        quantity = "risk_ratio"
    interval = None
    if measure["low"] is not None:
        low, high = (_number(measure[end], quantity) for end in ("low", "high"))
        kind = "credible" if measure.get("interval_kind") == "credible" else "confidence"
        interval = PrintedInterval(low, high, confidence_level=(measure["level"] or 95) / 100, kind=kind)  # type: ignore[arg-type]
    unit = UNITS.get(measure["unit"] or "", default_unit(quantity))
    return Claim(key, quantity, None, _number(measure["value"], quantity), unit, interval=interval, basis=_basis(measure))  # type: ignore[arg-type]


_TESTS = {"noninferiority": "noninferiority", "logrank": "logrank"}


def outcomes(row: dict[str, Any]) -> list[tuple[str, list[Claim]]]:
    """The outcomes of a passage, each with its claims."""
    found = []
    for outcome in row["truth"]["outcomes"]:
        claims = [claim for arm in outcome["arms"] for claim in _arm_claims(arm, row["text"])]
        claims += [_measure_claim(m, f"measure-{i}") for i, m in enumerate(outcome["measures"])]
        p = outcome["p"]
        if p and p["op"] in ("<", "="):
            claims.append(
                Claim("p", "p_value", None, _number(p["value"], "p_value"), "proportion", p["op"], test=_TESTS.get(p["kind"]))  # type: ignore[arg-type]
            )
        found.append((outcome["name"], claims))
    return found
