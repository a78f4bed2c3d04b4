from __future__ import annotations

import math
from fractions import Fraction

from app.appraisal.model import AppraisalInput, OutcomeAppraisal, OutcomeInput
from app.appraisal.run import appraise
from tests.claims_maker import arm_claims


def one(first: dict[str, str], second: dict[str, str], **settings: object) -> OutcomeAppraisal:
    claims = arm_claims("intervention", **first) + arm_claims("comparator", **second)
    given = OutcomeInput(claims, **{"event_is": "unwanted", **settings})  # type: ignore[arg-type]
    return appraise(AppraisalInput((given,))).outcomes[0]


def slugs(outcome: OutcomeAppraisal) -> list[str]:
    return [note.slug for note in outcome.notes]


def test_nothing_typed() -> None:
    outcome = one({}, {})
    assert (outcome.both, outcome.intervention, outcome.comparator) == (None, None, None)
    assert outcome.notes == ()


def test_one_arm_alone_has_its_risk() -> None:
    outcome = one({"events": "46", "total": "418"}, {})
    assert outcome.intervention is not None
    assert outcome.intervention.estimate.low == 46 / 418
    assert outcome.both is None


def test_several_tables_give_ranges() -> None:
    outcome = one({"risk": "11", "total": "418"}, {"risk": "16", "total": "409"})
    assert outcome.both is not None
    assert outcome.both.fits.count == 20
    difference = outcome.both.measures["risk_difference"].estimate
    assert difference.low == (44 * 409 - 67 * 418) / (418 * 409)
    assert difference.high == (48 * 409 - 64 * 418) / (418 * 409)
    assert outcome.both.needed.exact == (
        1 / (Fraction(67, 409) - Fraction(44, 418)),
        1 / (Fraction(64, 409) - Fraction(48, 418)),
    )


def test_tables_that_differ_in_direction_have_no_one_number_needed() -> None:
    outcome = one({"risk": "11", "total": "418"}, {"risk": "11", "total": "409"})
    assert outcome.both is not None
    assert outcome.both.needed.direction == "either"
    assert outcome.both.needed.rounded is None
    p = {test.key: p for test, p in outcome.both.tests}["n_minus_1"]
    assert p.high == 1.0


def test_equal_arms_have_no_direction() -> None:
    outcome = one({"events": "5", "total": "50"}, {"events": "5", "total": "50"})
    assert outcome.both is not None
    assert outcome.both.needed.direction == "none"
    assert len(outcome.both.needed.segments) == 2


def test_level_is_carried() -> None:
    wide, narrow = (
        one({"events": "46", "total": "418"}, {"events": "67", "total": "409"}, confidence_level=level) for level in (0.99, 0.9)
    )
    assert wide.both is not None
    assert narrow.both is not None
    assert wide.both.measures["risk_ratio"].default.low.low < narrow.both.measures["risk_ratio"].default.low.low


def test_notes_of_a_plain_sheet() -> None:
    assert slugs(one({"events": "46", "total": "418"}, {"events": "67", "total": "409"})) == [
        "naive_follow_up",
        "time_not_stated",
    ]
    settled = one({"events": "46", "total": "418"}, {"events": "67", "total": "409"}, follow_up="fixed", horizon="1 year")
    assert slugs(settled) == []


def test_notes_of_empty_cells() -> None:
    fixed = {"follow_up": "fixed", "horizon": "1 year"}
    assert slugs(one({"events": "0", "total": "50"}, {"events": "0", "total": "50"}, **fixed)) == ["no_events_at_all"]
    assert slugs(one({"events": "5", "total": "50"}, {"events": "0", "total": "50"}, **fixed)) == ["no_events_in_comparator"]
    assert slugs(one({"events": "0", "total": "50"}, {"events": "5", "total": "50"}, **fixed)) == ["no_events_in_intervention"]
    assert slugs(one({"events": "50", "total": "50"}, {"events": "50", "total": "50"}, **fixed)) == ["all_have_the_event"]


def test_no_events_gives_the_exact_upper_limit() -> None:
    """0 of 100: exact one-sided 97.5% upper limit 3.6% (requirements R42, computed there)."""
    note = one({"events": "0", "total": "100"}, {"events": "0", "total": "50"}).notes[0]
    assert [round(100 * upper, 1) for upper in note.evidence["upper"]] == [3.6, 7.1]  # type: ignore[attr-defined]


def test_odds_are_noted_where_they_part() -> None:
    """At a comparator risk of 50% and risk ratio 0.75 the odds ratio is 0.60 (requirements R38, computed there)."""
    outcome = one({"events": "375", "total": "1000"}, {"events": "500", "total": "1000"}, follow_up="fixed", horizon="1 year")
    assert slugs(outcome) == ["odds_part_from_risk"]
    assert math.isclose(outcome.notes[0].evidence["odds_ratio"].low, 0.60)  # type: ignore[attr-defined]
    rare = one({"events": "15", "total": "1000"}, {"events": "20", "total": "1000"}, follow_up="fixed", horizon="1 year")
    assert slugs(rare) == []


def test_contradiction_within_an_arm_is_a_note_not_an_error() -> None:
    outcome = one({"events": "46", "total": "418", "risk": "12.0"}, {"events": "67", "total": "409"})
    assert [j.finding for j in outcome.check.judgements[:3]] == ["contradict_each_other"] * 3
    assert [choice.slug for choice in outcome.check.choices] == ["if_counts", "if_percentages"]
    assert outcome.both is not None
