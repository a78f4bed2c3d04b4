"""Collected passages: what a careful reader concluded of each number is what the program concludes."""

from __future__ import annotations

from typing import Any

import pytest

from app.reconstruct.judge import check_outcome
from app.reconstruct.verdict import Judgement
from tests.reconstruct.passage_claims import outcomes, rows

ROWS = {row["id"]: row for row in rows()}

FINE = {"agrees", "agrees_within_rounding"}

FOUND: dict[str, dict[str, tuple[str, str]]] = {
    "b25": {"p": ("does_not_agree", "p_against_interval")},
    "b54": {"p": ("does_not_agree", "p_against_counts")},
    "b90": {"measure-0": ("does_not_agree", "interval_off_centre")},
    "e02": {"measure-0": ("agrees_under_another_reading", "odds_ratio_called_risk_ratio")},
    "e07": {"measure-1": ("agrees_under_another_reading", "ratio_read_as_reduction")},
    "e15": {"intervention-risk": ("does_not_agree", "impossible_percentage")},
    "e19": {"measure-0": ("does_not_agree", "estimate_outside_interval")},
    "e23": {"p": ("does_not_agree", "p_against_counts")},
    "e27": {"measure-1": ("does_not_agree", "needed_does_not_fit")},
    "e31": {"intervention-total": ("does_not_agree", "total_does_not_fit")},
}
"""What is found, in the first outcome of each passage: claim id -> verdict and its name. Nothing else is."""

NOT_CHECKABLE: dict[str, set[str]] = {
    "b25": {"measure-0"},
    "b34": {"measure-0"},  # said to agree, but no method prints 2.13 for the limit; see below
    "b47": {"measure-0"},
    "b57": {"measure-0"},
    "b95": {"measure-0", "measure-1", "p"},
    "b96": {"measure-0", "p"},
    "b105": {"measure-0"},
    "b124": {"measure-0"},
    "b135": {"measure-0", "measure-1", "intervention-risk", "comparator-risk"},
}
"""Claims that counts cannot settle, besides bare counts that nothing else is printed of."""


def _judged(row: dict[str, Any]) -> list[tuple[int, Judgement]]:
    return [(i, judged) for i, (_, claims) in enumerate(outcomes(row)) for judged in check_outcome(claims).judgements]


@pytest.mark.parametrize("key", ROWS)
def test_conclusions_of_a_careful_reader(key: str) -> None:
    expected = FOUND.get(key, {})
    for place, judged in _judged(ROWS[key]):
        claim = judged.claim
        if place == 0 and claim.id in expected:
            verdict, name = expected[claim.id]
            assert (judged.verdict, judged.reading or judged.finding) == (verdict, name)
        elif judged.verdict == "cannot_be_checked":
            bare = judged.reason == "too_little" and claim.quantity in ("events", "total")
            assert bare or claim.id in NOT_CHECKABLE.get(key, set()), (key, claim.id, judged.reason)
        else:
            assert judged.verdict in FINE, (key, claim.id, judged.findings, judged.readings)


def test_what_would_fit_is_said() -> None:
    """738 for 378: the percentage, the ratio and its interval agree on the other total."""
    judged = next(j for _, j in _judged(ROWS["e31"]) if j.claim.id == "intervention-total")
    assert judged.evidence["would_fit"] == (378, 378)


def test_both_readings_of_a_limit_that_no_method_prints() -> None:
    """49/271 v 61/270, -4.5% (-11.3 to 2.13): the careful reader lets it pass as near Wald's; here it is left open."""
    judged = next(j for _, j in _judged(ROWS["b34"]) if j.claim.id == "measure-0")
    assert (judged.verdict, judged.reason) == ("cannot_be_checked", "adjusted")
    assert judged.possible == ("opposite_sign",)
