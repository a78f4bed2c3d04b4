"""Verdicts one by one: each detector of the requirements finds its fault and does not cry wolf."""

from __future__ import annotations

from typing import Any

import pytest

from app.present.verdicts import because, note_sentence
from app.printed.claims import Claim
from app.reconstruct.judge import check_outcome
from app.reconstruct.verdict import FINDINGS, NOTE_SLUGS, READINGS, REASONS, Judgement, OutcomeCheck
from tests.reconstruct.trials_maker import ARMS, claim


def counts(a: int, n1: int, c: int, n2: int, *, percentages: int | None = 1) -> list[Claim]:
    """Counts and totals of both arms, with percentages to so many decimals."""
    found = []
    for arm, events, total in ((ARMS[0], a, n1), (ARMS[1], c, n2)):
        found.append(claim(f"{arm}-events", "events", str(events), arm))
        found.append(claim(f"{arm}-total", "total", str(total), arm))
        if percentages is not None:
            found.append(claim(f"{arm}-risk", "risk", f"{100 * events / total:.{percentages}f}", arm))
    return found


BASE = counts(46, 418, 67, 409)


def of(check: OutcomeCheck, key: str) -> Judgement:
    return next(j for j in check.judgements if j.claim.id == key)


def judged(*more: Claim, base: list[Claim] = BASE) -> Judgement:
    """The judgement of the last of the further claims beside the usual counts."""
    return of(check_outcome([*base, *more]), more[-1].id)


def name(found: Judgement) -> str:
    return found.reading or found.finding or found.reason or ""


def a(quantity: str, text: str, low: str | None = None, high: str | None = None, **more: Any) -> Claim:
    return claim("x", quantity, text, low=low, high=high, **more)  # type: ignore[arg-type]


AGREE = [
    (
        a("risk_ratio", "0.67", "0.47", "0.95"),
        "0.672 (0.474 to 0.953) by log (Katz); the same by Miettinen–Nurminen score and others.",
    ),
    (
        a("odds_ratio", "0.63", "0.42", "0.94"),
        "0.631 (0.422 to 0.944) by logit (Woolf); the same by Miettinen–Nurminen score and others.",
    ),
    (
        a("risk_difference", "-5.4", "-10.1", "-0.7"),
        "−5.38 (−10.05 to −0.70) by plain (Wald); the same by Miettinen–Nurminen score and others.",
    ),
    (
        a("risk_difference", "5.4", "0.7", "10.1"),
        "5.38 (0.70 to 10.05) by plain (Wald); the same by Miettinen–Nurminen score and others.",
    ),
    (
        a("relative_risk_reduction", "33", "5", "53"),
        "32.8 (4.7 to 52.6) by log (Katz); the same by Miettinen–Nurminen score and others.",
    ),
    (a("number_needed_to_treat", "19", horizon="12 months"), "18.6 before rounding, rounded up or rounded to the nearest."),
    (a("number_needed_to_treat", "18", horizon="12 months"), "18.6 before rounding, rounded down."),
    (a("p_value", "0.024"), "By N − 1 chi-squared or Pearson chi-squared. The usual tests give 0.024 to 0.032."),
    (a("p_value", "0.05", operator="<"), "By N − 1 chi-squared or Pearson chi-squared. The usual tests give 0.024 to 0.032."),
]


@pytest.mark.parametrize(("made", "sentence"), AGREE, ids=lambda x: x.quantity if isinstance(x, Claim) else "")
def test_what_agrees_says_by_what(made: Claim, sentence: str) -> None:
    found = judged(made)
    assert (found.verdict, because(found)) == ("agrees", sentence)


ODDS = a("odds_ratio", "0.63", "0.42", "0.94")
OTHERWISE = [
    (
        "arms_swapped",
        a("risk_ratio", "1.49", "1.05", "2.11"),
        "It is what the arms give exchanged: comparator over intervention. The counts give 0.672 (0.474 to 0.953) by log (Katz). Changes the direction.",
    ),
    (
        "complement_outcome",
        a("risk_ratio", "1.06", "1.01", "1.12"),
        "It is what those without the event give. The counts give 0.672 (0.474 to 0.953) by log (Katz). Changes the direction.",
    ),
    (
        "odds_ratio_called_risk_ratio",
        a("risk_ratio", "0.63", "0.42", "0.94"),
        "It is the odds ratio, or comes from it. The counts give 0.672 (0.474 to 0.953) by log (Katz). Changes the size.",
    ),
    (
        "risk_ratio_called_odds_ratio",
        a("odds_ratio", "0.67", "0.47", "0.95"),
        "It is the risk ratio. The counts give 0.631 (0.422 to 0.944) by logit (Woolf). Changes the size.",
    ),
    (
        "ratio_read_as_reduction",
        a("relative_risk_reduction", "67", "47", "95"),
        "It is the ratio as a percentage, not the reduction. The counts give 32.8 (4.7 to 52.6)% by log (Katz). Changes the size.",
    ),
    (
        "reduction_read_as_ratio",
        a("risk_ratio", "0.33", "0.05", "0.53"),
        "It is the relative change, not the ratio. The counts give 0.672 (0.474 to 0.953) by log (Katz). Changes the size.",
    ),
    (
        "points_called_percent",
        a("relative_risk_reduction", "5.4", "0.7", "10.1"),
        "It is the difference in percentage points, not a relative change. The counts give 32.82 (4.70 to 52.64)% by log (Katz). Changes the size.",
    ),
    (
        "percent_called_points",
        a("risk_difference", "32.8", "4.7", "52.6"),
        "It is the relative change in per cent, not a difference in points. The counts give −5.38 (−10.05 to −0.70) points by plain (Wald). Changes the direction.",
    ),
    (
        "per_thousand_called_percent",
        a("risk_difference", "-53.8", "-100.5", "-7.0"),
        "It fits per 1000. The counts give −5.38 (−10.05 to −0.70) points by plain (Wald). Changes the size.",
    ),
    ("opposite_sign", a("risk_difference", "-5.4", "-10.1", "-0.7"), "It fits with the opposite sign."),
    ("other_confidence_level", a("risk_ratio", "0.67", "0.50", "0.90"), "It is a 90% interval."),
    ("one_sided_p", a("p_value", "0.012"), "It is half the two-sided P."),
    ("unusual_method", a("p_value", "0.0228"), "Only a method that is seldom printed gives this."),
]


@pytest.mark.parametrize(("reading", "made", "sentence"), OTHERWISE, ids=[row[0] for row in OTHERWISE])
def test_another_reading_is_named(reading: str, made: Claim, sentence: str) -> None:
    base = counts(67, 409, 46, 418) if reading == "opposite_sign" else BASE
    found = judged(made, base=base)
    assert (found.verdict, found.reading) == ("agrees_under_another_reading", reading)
    told = because(found)
    consequence = {"direction": " Changes the direction.", "size": " Changes the size."}.get(found.consequence, "")
    assert (told + consequence).startswith(sentence) or told == sentence


def test_a_reading_without_enough_evidence_is_only_possible() -> None:
    """67% alone is two digits; the odds ratio 0.63 alone is two digits."""
    for made, possible in (
        (a("relative_risk_reduction", "67", basis="crude"), "ratio_read_as_reduction"),
        (a("risk_ratio", "0.63", basis="crude"), "odds_ratio_called_risk_ratio"),
    ):
        found = judged(made)
        assert found.verdict == "does_not_agree"
        assert possible in found.possible
    named = judged(claim("ratio", "risk_ratio", "0.67"), a("relative_risk_reduction", "67"))
    assert named.reading == "ratio_read_as_reduction"


def test_swapped_arms_and_the_other_face_cannot_be_told_apart_for_odds() -> None:
    found = judged(a("odds_ratio", "1.58", "1.06", "2.37"))
    assert found.readings == ("arms_swapped", "complement_outcome")
    assert because(found).startswith(
        "The arms are exchanged, or those without the event counted; an odds ratio cannot tell which."
    )


CRUDE = {"basis": "crude"}
FOUND = [
    ("estimate_outside_interval", a("risk_ratio", "1.06", "1.15", "1.51")),
    ("interval_off_centre", a("risk_ratio", "0.67", "0.05", "0.95", **CRUDE)),
    ("estimate_does_not_fit", a("risk_ratio", "0.85", "0.60", "1.20", **CRUDE)),
    ("interval_does_not_fit", a("risk_ratio", "0.67", "0.56", "0.80", **CRUDE)),
    ("impossible_p", a("p_value", "0.000")),
    ("impossible_p", a("p_value", "1.2")),
    ("p_against_counts", a("p_value", "0.0019", **CRUDE)),
    ("needed_does_not_fit", a("number_needed_to_treat", "14", **CRUDE)),
    ("direction_word_against_numbers", a("risk_ratio", "0.67", "0.47", "0.95", sense="higher")),
    ("totals_do_not_add", a("total", "854")),
]


@pytest.mark.parametrize(("finding", "made"), FOUND, ids=[f"{row[0]}-{i}" for i, row in enumerate(FOUND)])
def test_what_is_found_against_a_number(finding: str, made: Claim) -> None:
    found = judged(made)
    assert (found.verdict, found.finding) == ("does_not_agree", finding)
    told = because(found)
    assert told.endswith("Check what was typed first.")
    assert not any(word in told.lower() for word in ("wrong", "error", "suspicious", "mistake"))


@pytest.mark.parametrize(
    ("key", "text", "finding", "fits"),
    [
        ("intervention-events", "64", "count_does_not_fit", "46"),
        ("comparator-total", "490", "total_does_not_fit", "408 to 409"),
        ("intervention-risk", "11.9", "percentage_does_not_fit", "11.0%"),
        ("intervention-risk", "11.1", "percentage_does_not_fit", None),
    ],
)
def test_the_majority_says_which_count_is_off(key: str, text: str, finding: str, fits: str | None) -> None:
    claims = [claim(key, c.quantity, text, c.arm) if c.id == key else c for c in BASE]
    found = of(check_outcome([*claims, a("risk_ratio", "0.67", "0.47", "0.95")]), key)
    if fits is None:  # one unit of the last digit
        assert found.verdict == "agrees_within_rounding"
        return
    assert (found.verdict, found.findings[-1]) == ("does_not_agree", finding)
    assert f"The other 6 agree with each other; {fits} would fit." in because(found)


def test_count_above_its_total() -> None:
    claims = [claim("intervention-events", "events", "460", ARMS[0]) if c.id == "intervention-events" else c for c in BASE]
    found = of(check_outcome([*claims, a("risk_ratio", "0.67", "0.47", "0.95")]), "intervention-events")
    assert found.findings == ("count_exceeds_total", "count_does_not_fit")


def test_a_percentage_that_no_count_gives() -> None:
    base = [claim("n1", "total", "233", ARMS[0]), claim("n2", "total", "267", ARMS[1]), claim("r2", "risk", "19.1", ARMS[1])]
    found = judged(claim("r1", "risk", "32.4", ARMS[0]), base=base)
    assert found.finding == "impossible_percentage"
    assert (
        because(found)
        == "No whole number of people gives this percentage. 75 of 233 is 32.19%; 76 of 233 is 32.62%. Check what was typed first."
    )
    assert judged(claim("r1", "risk", "32.6", ARMS[0]), base=base).verdict == "agrees"


def test_no_majority_blames_none_and_offers_the_choice() -> None:
    claims = [claim(c.id, c.quantity, "14.0", c.arm) if c.id == "intervention-risk" else c for c in BASE]
    check = check_outcome(claims)
    tied = [j.claim.id for j in check.judgements if j.findings == ("contradict_each_other",)]
    assert tied == ["intervention-total", "intervention-risk"]
    assert [(c.slug, c.set_aside) for c in check.choices] == [
        ("if_counts", ("intervention-risk",)),
        ("if_percentages", ("intervention-total",)),
    ]
    chosen = check_outcome(claims, trust="percentages")
    assert chosen.set_aside == ("intervention-total",)
    assert chosen.choices == ()


def test_a_percentage_of_another_printed_total() -> None:
    claims = [claim(c.id, c.quantity, "10.0", c.arm) if c.id == "intervention-risk" else c for c in BASE]
    more = claim("all", "total", "462", ARMS[0], total_kind="randomised")
    found = of(check_outcome([*claims, more, a("risk_ratio", "0.67", "0.47", "0.95")]), "intervention-risk")
    assert (found.verdict, found.reading) == ("agrees_under_another_reading", "other_denominator")


def test_more_analysed_than_randomised() -> None:
    found = judged(claim("all", "total", "400", ARMS[0], total_kind="randomised"))
    assert (found.verdict, found.finding) == ("does_not_agree", "totals_do_not_add")
    assert judged(claim("all", "total", "427", ARMS[0], total_kind="randomised")).verdict == "cannot_be_checked"


REASONED = [
    ("adjusted", a("risk_ratio", "0.70", "0.50", "0.98", basis="adjusted")),
    ("adjusted", a("risk_ratio", "0.70", "0.50", "0.98", basis="matched")),
    ("time_to_event", a("hazard_ratio", "0.65", "0.45", "0.94")),
    ("clustered", a("risk_ratio", "0.67", "0.40", "1.12", basis="clustered")),
    ("imputed", a("risk_ratio", "0.70", "0.50", "0.98", basis="imputed")),
    ("too_little", a("p_value", "0.003", test="noninferiority")),
    ("adjusted", a("risk_ratio", "0.71", "0.50", "1.00")),
]


@pytest.mark.parametrize(("reason", "made"), REASONED, ids=[f"{row[0]}-{i}" for i, row in enumerate(REASONED)])
def test_what_cannot_be_checked_says_why(reason: str, made: Claim) -> None:
    found = judged(made)
    assert (found.verdict, found.reason) == ("cannot_be_checked", reason)


def test_an_unstated_basis_near_the_crude_value_becomes_a_question() -> None:
    check = check_outcome([*BASE, a("risk_ratio", "0.71", "0.50", "1.00")])
    assert check.questions == ("crude_or_adjusted",)
    assert (
        because(of(check, "x"))
        == "It fits only if adjusted or stratified. The counts give 0.672 (0.474 to 0.953) by log (Katz)."
    )
    assert check.set_aside == ()


def test_an_adjusted_estimate_is_still_held_against_itself() -> None:
    outside = judged(a("odds_ratio", "1.20", "1.30", "1.80", basis="adjusted"))
    assert (outside.verdict, outside.finding) == ("does_not_agree", "estimate_outside_interval")
    p = judged(a("odds_ratio", "0.70", "0.50", "0.98", basis="adjusted"), claim("p", "p_value", "0.0001"))
    assert (p.verdict, p.finding) == ("does_not_agree", "p_against_interval")
    fine = judged(a("odds_ratio", "0.70", "0.50", "0.98", basis="adjusted"), claim("p", "p_value", "0.04"))
    assert fine.verdict == "agrees"


@pytest.mark.parametrize(
    ("interval", "low", "high"),
    [
        (("0.78", "0.66", "0.92"), 0.0023, 0.0044),
        (("0.98", "0.96", "1.00"), 0.0093, 0.14),
        (("0.5", "0.3", "0.9"), 0.0074, 0.035),
    ],
)
def test_p_against_an_interval_is_searched_jointly(interval: tuple[str, str, str], low: float, high: float) -> None:
    """Worked values of requirement R113: the p that all (estimate, width) printing so allow."""
    made = a("hazard_ratio", *interval)
    found = judged(made, claim("p", "p_value", f"{(low * high) ** 0.5:.4f}"), base=[])
    assert found.verdict == "agrees"
    joint = found.evidence["joint"]
    assert [float(f"{end:.2g}") for end in joint] == [low, high]  # type: ignore[attr-defined]


def test_places_that_differ_are_noted() -> None:
    first = claim("again", "risk_ratio", "0.67", low="0.47", high="0.95", place="abstract")
    found = judged(first, a("risk_ratio", "0.76", "0.47", "0.95", place="table", **CRUDE))
    assert "differs_between_places" in [note.slug for note in found.notes]
    same = judged(first, a("risk_ratio", "0.672", "0.474", "0.953", place="table", **CRUDE))
    assert same.notes == ()


NOTED = [
    ("needed_incomplete", a("number_needed_to_treat", "19")),
    ("needed_interval_through_zero", a("number_needed_to_treat", "100", "28", "61", horizon="1 year")),
    ("hazard_against_counts", a("hazard_ratio", "1.20", "0.90", "1.60")),
    ("p_mirrors_threshold", a("p_value", "0.03", operator="<")),
    ("interval_narrower_than_counts", a("risk_ratio", "0.67", "0.56", "0.80", **CRUDE)),
    ("interval_symmetric_on_plain_scale", a("risk_ratio", "0.67", "0.37", "0.97", **CRUDE)),
    ("times_more_wording", a("risk_ratio", "0.67", "0.47", "0.95", label="0.67 times more likely")),
    ("more_digits_than_people", claim("more", "risk", "11.00", ARMS[0])),
]


@pytest.mark.parametrize(("slug", "made"), NOTED, ids=[row[0] for row in NOTED])
def test_advice_never_changes_a_verdict(slug: str, made: Claim) -> None:
    base = counts(60, 600, 66, 600) if slug == "needed_interval_through_zero" else BASE
    found = judged(made, base=base)
    assert slug in [note.slug for note in found.notes]
    assert all(note_sentence(note) for note in found.notes)


def test_needed_to_treat_beside_a_hazard_ratio_is_noted() -> None:
    hazard = claim("hr", "hazard_ratio", "0.65", low="0.45", high="0.94")
    found = judged(hazard, a("number_needed_to_treat", "19", horizon="12 months"))
    assert [note.slug for note in found.notes] == ["needed_incomplete", "needed_from_rates"]
    alone = judged(a("number_needed_to_treat", "19", "10", "144", horizon="12 months"))
    assert alone.notes == ()


def test_rates_and_person_time() -> None:
    base = [
        claim("e1", "events", "46", ARMS[0]),
        claim("t1", "person_time", "402", ARMS[0], unit="person_years"),
        claim("r1", "rate", "11.4", ARMS[0], unit="per_100_person_years"),
        claim("e2", "events", "67", ARMS[1]),
        claim("t2", "person_time", "371", ARMS[1], unit="person_years"),
        claim("r2", "rate", "18.2", ARMS[1], unit="per_100_person_years"),
    ]
    ratio = a("rate_ratio", "0.63", "0.43", "0.92")
    check = check_outcome([*base, ratio])
    assert of(check, "r1").verdict == "agrees"
    assert of(check, "r2").verdict == "agrees_within_rounding"  # 67 / 371 is 18.06
    assert of(check, "x").verdict in ("agrees", "agrees_within_rounding")
    long = [
        claim("t1", "person_time", "900", ARMS[0], unit="person_years", horizon="2 years"),
        claim("n1", "total", "418", ARMS[0]),
    ]
    impossible = of(check_outcome(long), "t1")
    assert (impossible.verdict, impossible.finding) == ("does_not_agree", "impossible_person_time")


def test_comparator_first_in_the_text_turns_the_ratio_round() -> None:
    """Where the comparator's numbers stand first, a ratio in that order agrees."""
    spans = {"comparator": (0, 2), "intervention": (20, 22)}
    base = [
        claim(c.id, c.quantity, c.said.text, c.arm, span=spans[str(c.arm)] if c.quantity == "events" else None) for c in BASE
    ]
    assert judged(a("risk_ratio", "1.49", "1.05", "2.11"), base=base).verdict == "agrees"
    assert judged(a("risk_ratio", "1.49", "1.05", "2.11")).reading == "arms_swapped"


def test_every_slug_is_known_to_the_sentences() -> None:
    from app.present import verdicts

    assert set(verdicts._READINGS) == set(READINGS)
    assert set(verdicts._FINDINGS) == set(FINDINGS)
    assert set(verdicts._REASONS) == set(REASONS)
    special = {"needed_incomplete", "hazard_against_counts", "more_digits_than_people", "parts_do_not_add"}
    assert set(verdicts._NOTES) | special == set(NOTE_SLUGS)
