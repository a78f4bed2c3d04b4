"""Starting risks as typed."""

from __future__ import annotations

import pytest

from app.appraisal.sheet import TypedRisk
from app.intake.risks import read_risk


@pytest.mark.parametrize(
    ("text", "low", "high"),
    [
        ("8", 0.08, 0.08),
        ("8%", 0.08, 0.08),
        ("8.5 %", 0.085, 0.085),
        ("80 per 1000", 0.08, 0.08),
        ("80 in 1,000", 0.08, 0.08),
        ("8/100", 0.08, 0.08),
        ("5 to 10%", 0.05, 0.10),
        ("5%–10%", 0.05, 0.10),
        ("12 per 10000", 0.0012, 0.0012),
        ("0", 0.0, 0.0),
        ("100%", 1.0, 1.0),
    ],
)
def test_forms(text: str, low: float, high: float) -> None:
    risk, problems = read_risk(0, TypedRisk("1", " low ", text, " register "))
    assert problems == []
    assert risk is not None
    assert (risk.low, risk.high) == pytest.approx((low, high))
    assert (risk.name, risk.source) == ("low", "register")


@pytest.mark.parametrize(
    ("text", "message"),
    [
        ("high", "This is not a risk."),
        ("1.2.3", "This is not a risk."),
        ("120%", "A risk lies between 0 and 100%, the lower end first."),
        ("10 to 5%", "A risk lies between 0 and 100%, the lower end first."),
    ],
)
def test_error_in_risk(text: str, message: str) -> None:
    risk, problems = read_risk(2, TypedRisk("3", "", text))
    assert risk is None
    assert [(p.field, p.message) for p in problems] == [("outcome-2-risk-3-risk", message)]


def test_an_empty_box_is_no_risk() -> None:
    assert read_risk(0, TypedRisk("1")) == (None, [])
