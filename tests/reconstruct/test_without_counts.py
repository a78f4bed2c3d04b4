"""What print says of print: no counts, or no totals, or rates; and print of unusual shape."""

from __future__ import annotations

from dataclasses import replace
from typing import Any

import pytest

from app.appraisal.model import AppraisalInput, OutcomeInput
from app.appraisal.run import appraise
from app.printed.claims import Claim
from app.reconstruct.interval_p import p_range, symmetric
from app.reconstruct.judge import check_outcome
from app.reconstruct.narrowing import ranges
from app.reconstruct.tables import MOST_JOINED
from app.reconstruct.verdict import Judgement
from app.reconstruct.window import Window
from tests.reconstruct.trials_maker import ARMS, claim

CRUDE: dict[str, Any] = {"basis": "crude"}


def verdicts(*claims: Claim) -> dict[str, tuple[str, str]]:
    return {j.claim.id: (j.verdict, j.reading or j.finding or j.reason or "") for j in check_outcome(claims).judgements}


def one(*claims: Claim) -> Judgement:
    """The judgement of the last claim."""
    return next(j for j in check_outcome(claims).judgements if j.claim.id == claims[-1].id)


def percent(first: str, second: str) -> list[Claim]:
    return [claim("r1", "risk", first, ARMS[0]), claim("r2", "risk", second, ARMS[1])]


@pytest.mark.parametrize(
    ("partner", "made", "expected"),
    [
        (claim("p", "risk_ratio", "0.74"), claim("x", "relative_risk_reduction", "26"), ("agrees_within_rounding", "")),
        (claim("p", "risk_ratio", "1.49"), claim("x", "relative_risk_increase", "49"), ("agrees_within_rounding", "")),
        (claim("p", "relative_risk_reduction", "26"), claim("x", "risk_ratio", "0.74"), ("agrees_within_rounding", "")),
        (
            claim("p", "risk_ratio", "0.74"),
            claim("x", "relative_risk_reduction", "36"),
            ("does_not_agree", "estimate_does_not_fit"),
        ),
        (
            claim("p", "hazard_ratio", "0.81"),
            claim("x", "relative_risk_reduction", "81"),
            ("agrees_under_another_reading", "ratio_read_as_reduction"),
        ),
        (
            claim("p", "hazard_ratio", "0.81"),
            claim("x", "risk_ratio", "0.81"),
            ("agrees_under_another_reading", "hazard_ratio_called_risk_ratio"),
        ),
        (claim("p", "risk_difference", "5.4"), claim("x", "number_needed_to_treat", "19"), ("agrees_within_rounding", "")),
        (
            claim("p", "risk_difference", "5.4"),
            claim("x", "number_needed_to_treat", "40"),
            ("does_not_agree", "needed_does_not_fit"),
        ),
        (
            claim("p", "risk_difference", "0.0"),
            claim("x", "number_needed_to_treat", "40"),
            ("does_not_agree", "needed_does_not_fit"),
        ),
        (claim("p", "margin", "2"), claim("x", "risk_ratio", "0.81"), ("cannot_be_checked", "too_little")),
    ],
)
def test_one_printed_figure_against_another(partner: Claim, made: Claim, expected: tuple[str, str]) -> None:
    assert verdicts(partner, made)["x"] == expected


@pytest.mark.parametrize(
    ("made", "expected"),
    [
        (claim("x", "risk_difference", "5.4"), ("agrees_within_rounding", "")),
        (claim("x", "risk_ratio", "0.67"), ("agrees_within_rounding", "")),
        (claim("x", "number_needed_to_treat", "19"), ("agrees_within_rounding", "")),
        (claim("x", "relative_risk_reduction", "33"), ("agrees_within_rounding", "")),
        (claim("x", "odds_ratio", "0.63"), ("agrees_within_rounding", "")),
        (claim("x", "risk_ratio", "0.631"), ("agrees_under_another_reading", "odds_ratio_called_risk_ratio")),
        (claim("x", "relative_risk_reduction", "5.4"), ("agrees_under_another_reading", "points_called_percent")),
        (claim("x", "risk_ratio", "0.85", **CRUDE), ("does_not_agree", "estimate_does_not_fit")),
        (claim("x", "risk_ratio", "0.72", low="0.50", high="1.04"), ("cannot_be_checked", "adjusted")),
        (claim("x", "risk_ratio", "0.72", low="0.80", high="1.04"), ("does_not_agree", "estimate_outside_interval")),
    ],
)
def test_percentages_alone(made: Claim, expected: tuple[str, str]) -> None:
    assert verdicts(*percent("11.0", "16.4"), made)["x"] == expected


def rates(events: bool = True) -> list[Claim]:
    found = [
        claim("t1", "person_time", "402", ARMS[0], unit="person_years"),
        claim("r1", "rate", "11.4", ARMS[0], unit="per_100_person_years"),
        claim("t2", "person_time", "371", ARMS[1], unit="person_years"),
        claim("r2", "rate", "18.1", ARMS[1], unit="per_100_person_years"),
    ]
    if events:
        found += [claim("e1", "events", "46", ARMS[0]), claim("e2", "events", "67", ARMS[1])]
        found += [claim("n1", "total", "418", ARMS[0]), claim("n2", "total", "409", ARMS[1])]
    return found


@pytest.mark.parametrize(
    ("made", "expected"),
    [
        (claim("x", "rate_ratio", "0.63", low="0.44", high="0.92"), "agrees"),
        (claim("x", "risk_ratio", "0.63", low="0.44", high="0.92"), "agrees"),
        (claim("x", "rate_difference", "-6.6", unit="per_100_person_years"), "agrees"),
        (claim("x", "rate_ratio", "0.83", low="0.57", high="1.21", **CRUDE), "does_not_agree"),
        (claim("x", "p_value", "0.018"), "agrees"),
    ],
)
def test_rates_over_person_time(made: Claim, expected: str) -> None:
    """46 in 402 against 67 in 371 person-years: 0.634 (0.435 to 0.922) by the log method."""
    assert one(*rates(), made).verdict in (expected, "agrees_within_rounding" if expected == "agrees" else expected)


def test_rates_alone() -> None:
    bare = [c for c in rates(events=False) if c.quantity == "rate"]
    assert verdicts(*bare, claim("x", "rate_ratio", "0.63"))["x"] == ("agrees_within_rounding", "")
    assert verdicts(*bare, claim("x", "rate_difference", "6.7", unit="per_100_person_years"))["x"] == (
        "agrees_within_rounding",
        "",
    )
    assert verdicts(*bare, claim("x", "rate_ratio", "0.63"))["r1"] == ("agrees", "")
    assert verdicts(*bare)["r1"] == ("cannot_be_checked", "too_little")


def test_person_time_and_rate_settle_the_events() -> None:
    totals = [claim("n1", "total", "418", ARMS[0]), claim("n2", "total", "409", ARMS[1])]
    check = check_outcome([*rates(events=False), *totals, claim("x", "rate_ratio", "0.63", low="0.44", high="0.92")])
    assert check.tables.tables is not None
    assert int(check.tables.tables.events_intervention[0]) == 46
    assert int(check.tables.tables.events_comparator[0]) == 67


BASE = [
    claim("e1", "events", "46", ARMS[0]),
    claim("n1", "total", "418", ARMS[0]),
    claim("e2", "events", "67", ARMS[1]),
    claim("n2", "total", "409", ARMS[1]),
]


def test_an_interval_without_its_estimate() -> None:
    made = claim("x", "risk_ratio", "0.67", low="0.47", high="0.95")
    assert one(*BASE, replace(made, number=None)).verdict == "agrees"
    assert (
        one(*BASE, replace(claim("x", "risk_ratio", "0.67", low="0.57", high="0.80", **CRUDE), number=None)).verdict
        == "does_not_agree"
    )


def test_a_one_sided_bound_may_carry_its_own_level() -> None:
    made = claim("x", "risk_ratio", "0.67", low="0.47", high="0.95", level=0.975)
    assert made.interval is not None
    upper = replace(made, interval=replace(made.interval, low=None))
    assert one(*BASE, upper).verdict == "agrees"


@pytest.mark.parametrize(
    ("operator", "text", "verdict"),
    [(">", "0.01", "agrees"), (">", "0.2", "does_not_agree"), ("<=", "0.05", "agrees"), ("<", "0.01", "does_not_agree")],
)
def test_bounds_of_p(operator: str, text: str, verdict: str) -> None:
    assert one(*BASE, claim("x", "p_value", text, operator=operator, **CRUDE)).verdict == verdict


@pytest.mark.parametrize(
    ("operator", "text", "verdict"),
    [(">", "0.01", "agrees"), ("<", "0.001", "does_not_agree"), ("<", "0.05", "agrees"), (">", "0.4", "does_not_agree")],
)
def test_bounds_of_p_against_an_interval(operator: str, text: str, verdict: str) -> None:
    hazard = claim("hr", "hazard_ratio", "0.67", low="0.47", high="0.95")
    assert one(hazard, claim("x", "p_value", text, operator=operator)).verdict == verdict


def test_a_p_on_the_other_side_of_a_threshold_is_asked_about() -> None:
    hazard = claim("hr", "hazard_ratio", "0.70", low="0.50", high="0.98")
    check = check_outcome([hazard, claim("x", "p_value", "0.055")])
    assert check.questions == ("which_test_gave_p",)
    logrank = one(claim("x", "p_value", "0.04", test="logrank"))
    assert (logrank.verdict, logrank.reason) == ("cannot_be_checked", "time_to_event")
    assert one(claim("x", "p_value", "0.04")).reason == "too_little"


def test_p_behind_intervals_of_odd_shape() -> None:
    at_zero = Window(-0.005, 0.005), Window(0.9, 1.1)
    assert p_range(None, *at_zero, "ratio", 0.95, 1.0) is None
    assert symmetric(Window(0.5, 0.6), *at_zero, "ratio")
    middle = p_range(None, Window(0.46, 0.48), Window(0.94, 0.96), "ratio", 0.95, 1.0)
    assert middle is not None
    assert 0.01 < middle.joint.low < middle.joint.high < 0.05
    assert p_range(None, Window(1.0, 1.0), Window(0.5, 0.5), "difference", 0.95, 0.0) is None


def test_very_many_joined_tables_are_spread_with_their_extremes() -> None:
    claims = (
        claim("n1", "total", "3000", ARMS[0]),
        claim("n2", "total", "3000", ARMS[1]),
        claim("x", "risk_ratio", "0.672", low="0.604", high="0.747"),
    )
    (outcome,) = appraise(AppraisalInput((OutcomeInput(claims),))).outcomes
    assert outcome.both is not None
    found = outcome.check.tables.tables
    assert found is not None
    assert outcome.both.fits.tables.events_intervention.size <= MOST_JOINED + 16
    ratio = ranges(found)["risk_ratio"]
    assert outcome.both.measures["risk_ratio"].estimate == ratio
    assert 0.66 <= ratio[0] <= ratio[1] <= 0.68


def test_one_arm_alone_is_held_against_itself() -> None:
    base = [claim("e1", "events", "46", ARMS[0]), claim("n1", "total", "418", ARMS[0]), claim("r1", "risk", "14.0", ARMS[0])]
    check = check_outcome([*base, claim("r2", "risk", "16", ARMS[1])])
    assert {j.claim.id for j in check.judgements if j.finding == "contradict_each_other"} >= {"r1"}
    assert check.tables.tables is None


def test_two_claims_of_one_count_that_differ() -> None:
    check = check_outcome([*BASE, claim("again", "events", "64", ARMS[0]), claim("r1", "risk", "11.0", ARMS[0])])
    assert check.set_aside == ("again",)
