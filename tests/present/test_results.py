"""Whole sentences and figures of the panels, from invented trials."""

from __future__ import annotations

import pytest

from app.appraisal.model import AppraisalInput, Note, OutcomeInput
from app.appraisal.run import appraise
from app.present.effects import MeasureView
from app.present.people import denominator
from app.present.results import ResultsView, results_view
from app.present.wording import NOTE_SLUGS, Names, note_text, signed_spread
from app.reconstruct.arm import Run
from tests.claims_maker import arm_claims

NAMES = Names("Compression review", "Usual care", "a recurrence", "12 months", fixed_time=True)


def view(first: dict[str, str], second: dict[str, str], names: Names = NAMES, **settings: object) -> ResultsView:
    claims = arm_claims("intervention", **first) + arm_claims("comparator", **second)
    given = OutcomeInput(claims, **{"follow_up": "fixed", "horizon": "12 months", "event_is": "unwanted", **settings})  # type: ignore[arg-type]
    return results_view(appraise(AppraisalInput((given,))).outcomes[0], names)


def counts(a: int, n1: int, c: int, n2: int, **settings: object) -> ResultsView:
    return view({"events": str(a), "total": str(n1)}, {"events": str(c), "total": str(n2)}, **settings)  # type: ignore[arg-type]


def texts(item: MeasureView) -> tuple[str, str, str, str, str]:
    return item.name, item.value, item.interval, item.method, item.beside


def test_one_table() -> None:
    shown = counts(46, 418, 67, 409)
    assert shown.tables is not None
    assert shown.tables.summary == "One table fits."
    assert shown.tables.in_words == (
        "46 of 418 with Compression review had a recurrence within 12 months. "
        "67 of 409 with Usual care had a recurrence within 12 months."
    )
    assert [(r.events, r.non_events, r.total, r.risk, r.interval) for r in shown.tables.rows] == [
        ("46", "372", "418", "11.0%", "8.4 to 14.4%"),
        ("67", "342", "409", "16.4%", "13.1 to 20.3%"),
    ]
    assert [texts(item) for item in shown.absolute] == [
        (
            "Risk difference",
            "5.4 points lower",
            "0.7 to 10.1 lower",
            "Miettinen–Nurminen score",
            "54 fewer per 1000 within 12 months (7 to 101 fewer)",
        ),
        (
            "Number needed to treat",
            "19 to benefit",
            "9.8 to 144",
            "Miettinen–Nurminen score, inverted",
            "against Usual care within 12 months, where the risk is 16.4%. Unrounded 18.6, rounded up; limits outward",
        ),
    ]
    assert [texts(item) for item in shown.relative] == [
        (
            "Risk ratio",
            "0.67",
            "0.47 to 0.95",
            "Miettinen–Nurminen score",
            "of a recurrence, Compression review over Usual care",
        ),
        (
            "Relative risk reduction",
            "33%",
            "5 to 53%",
            "1 − ratio, Miettinen–Nurminen score",
            "67% of the risk with Usual care",
        ),
        (
            "Odds ratio",
            "0.63",
            "0.42 to 0.94",
            "Miettinen–Nurminen score",
            "odds, not risk: at 16.4% with Usual care it is a risk ratio of 0.67",
        ),
    ]
    assert shown.p_values is not None
    assert shown.p_values.first == "P=0.024 by N − 1 chi-squared, the test that agrees with the intervals"
    assert shown.p_values.others[:2] == ("P=0.024 by Pearson chi-squared", "P=0.026 by Fisher exact")
    assert shown.people is not None
    assert shown.people.lead == (
        "On average, for every 19 people with Compression review rather than Usual care, one fewer has a recurrence within 12 months."
    )
    assert shown.people.rest == "The trial fits anything from 7 to 101 fewer in every 1000 (95% interval)."
    assert shown.notes == ()


def test_interval_through_infinity() -> None:
    shown = counts(30, 210, 24, 205)
    difference, needed = shown.absolute
    assert (difference.value, difference.interval) == ("2.6 points higher", "4.0 lower to 9.2 higher")
    assert difference.beside == "26 more per 1000 within 12 months (40 fewer to 92 more)"
    assert (needed.value, needed.interval) == ("38 to harm", "25 to benefit … ∞ … 10 to harm")
    assert needed.unsettled
    assert needed.beside.startswith("Direction not settled; against Usual care")
    assert (shown.relative[1].name, shown.relative[1].value) == ("Relative risk increase", "22%")
    assert shown.people is not None
    assert (
        shown.people.lead == "The trial does not settle the direction: it fits anything from 40 fewer to 92 more in every 1000."
    )
    assert shown.people.rest == (
        "(95% interval.) As seen, for every 38 people with Compression review rather than Usual care, one more has a recurrence "
        "within 12 months."
    )
    assert shown.relative[1].interval == "26% lower to 101% higher"


def test_wanted_event_turns_benefit_and_harm() -> None:
    assert counts(67, 409, 46, 418, event_is="wanted").absolute[1].value == "19 to benefit"
    worse = counts(46, 418, 67, 409, event_is="wanted")
    assert worse.absolute[1].value == "18 to harm"
    assert worse.people is not None
    assert worse.people.lead.endswith("one fewer has a recurrence within 12 months, the unwanted direction.")


def test_nothing_is_called_benefit_or_harm_until_the_reader_says_which() -> None:
    shown = counts(30, 210, 24, 205, event_is="not_said")
    assert (shown.absolute[1].value, shown.absolute[1].interval) == (
        "38 for one more",
        "25 for one fewer … ∞ … 10 for one more",
    )
    assert [note.slug for note in shown.notes] == ["wanted_not_said"]


def test_small_number_needed_speaks_of_a_hundred_people() -> None:
    shown = counts(80, 120, 55, 118, event_is="wanted")
    assert shown.absolute[1].value == "5.0 to benefit"
    assert shown.people is not None
    assert shown.people.lead == (
        "On average, of every 100 people with Compression review rather than Usual care, 20 more have a recurrence within 12 "
        "months, the wanted direction."
    )


def test_case_control_shows_the_odds_ratio_only() -> None:
    shown = counts(46, 418, 67, 409, design="case_control")
    assert shown.absolute == ()
    assert [item.key for item in shown.relative] == ["odds_ratio"]
    assert shown.people is None
    assert shown.tables is not None
    assert [(row.risk, row.interval) for row in shown.tables.rows] == [("–", "–")] * 2
    assert "case_control_refuses" in [note.slug for note in shown.notes]


def test_contradiction_is_said_above_the_table() -> None:
    shown = view({"events": "46", "total": "418", "risk": "14.0"}, {"events": "67", "total": "409"})
    assert shown.tables is not None
    assert shown.tables.summary == "No table fits everything typed. The figures follow the counts."


def test_arm_that_nothing_fits_is_said_above_the_table() -> None:
    shown = view({"risk": "11.0", "total": "37"}, {"events": "67", "total": "409"})
    assert shown.tables is not None
    assert shown.tables.summary == "Compression review: nothing fits what is typed; see the message at that arm."


def test_rare_events_share_their_decimals_and_are_not_drawn() -> None:
    shown = counts(1, 40000, 4, 40000)
    assert shown.tables is not None
    assert [row.risk for row in shown.tables.rows] == ["0.0025%", "0.0100%"]
    assert shown.people is not None
    assert shown.people.arrays == ()
    assert shown.people.drawn == "Too rare to draw: one or nobody in 1000 would be marked."


def test_ratio_open_above_from_below_one() -> None:
    shown = view({"risk": "1", "total": "500"}, {"risk": "0", "total": "510"})
    reduction = shown.relative[1]
    assert reduction.value == "cannot be stated"
    assert reduction.interval.startswith("from ")
    assert reduction.interval.endswith("% lower, with no upper limit")
    assert reduction.beside == "in some of the tables that fit, the comparator has no events"


def test_several_tables_show_ranges() -> None:
    shown = view({"risk": "11", "total": "418"}, {"risk": "16", "total": "409"})
    assert shown.tables is not None
    assert shown.tables.summary == "20 tables fit. Estimates show the range over all of them, intervals the widest over all."
    assert shown.tables.rows[0].events == "44 to 48"
    assert shown.absolute[0].value == "4.2 to 5.9 points lower"
    assert shown.absolute[1].value == "18 to 25 to benefit"
    assert shown.relative[0].value == "0.64 to 0.73"
    assert shown.people is not None
    assert shown.people.drawn == "Drawn for 46 of 418 and 65 of 409, one table of the 20 that fit."


def test_no_events_in_comparator_cannot_be_stated() -> None:
    shown = counts(5, 50, 0, 50)
    ratio, reduction, odds = shown.relative
    assert (ratio.value, ratio.interval, ratio.beside) == ("cannot be stated", "1.35 or more", "no events in the comparator")
    assert (reduction.value, reduction.interval) == ("cannot be stated", "35% higher or more")
    assert (odds.value, odds.interval) == ("cannot be stated", "1.38 or more")
    by_method = {other.method: other.interval for other in ratio.others}
    assert by_method["Koopman score"] == "1.36 or more"
    assert by_method["log (Katz)"] == "cannot be stated"


def test_no_events_at_all() -> None:
    shown = counts(0, 40, 0, 40)
    assert shown.absolute[0].value == "no difference"
    assert shown.absolute[1].value == "none"
    assert shown.relative[0].interval == "any ratio"
    assert shown.p_values is not None
    assert shown.p_values.first == "P cannot be computed by N − 1 chi-squared"
    assert shown.p_values.others[1] == "P=1.00 by Fisher exact"
    assert shown.people is not None
    assert shown.people.lead == "Nobody in either arm had a recurrence."


def test_limit_near_no_effect_keeps_its_side() -> None:
    shown = counts(100, 1000, 128, 1000)
    assert shown.absolute[0].interval == "0.01 to 5.61 lower"
    assert shown.relative[0].interval == "0.611 to 0.999"


def test_naive_follow_up_is_marked() -> None:
    shown = counts(46, 418, 67, 409, follow_up="varies")
    assert [item.naive for item in shown.absolute] == ["naive: follow-up varies"] * 2
    assert shown.people is not None
    assert shown.people.lead.startswith("Counted as if all were followed equally long: on average, for every 19 people")
    assert [note.head for note in shown.notes] == ["Follow-up varies: naive figures"]


@pytest.mark.parametrize(
    ("risks", "out_of"),
    [
        ((0.11, 0.16), 100),
        ((0.1649, 0.1151), 1000),
        ((0.004, 0.02), 1000),
        ((0.112, 0.114), 1000),
        ((0.143, 0.117), 1000),
        ((0.996, 0.9), 1000),
        ((0.0, 0.1), 100),
        ((0.1, 0.1), 100),
    ],
)
def test_denominator(risks: tuple[float, float], out_of: int) -> None:
    assert denominator(*risks) == out_of


def test_people_of_a_rarer_and_of_a_commoner_event() -> None:
    fewer, more = counts(46, 418, 67, 409).people, counts(67, 409, 46, 418).people
    assert fewer is not None
    assert more is not None
    assert fewer.arrays[0].caption == "16 of 100 with a recurrence (16.4), 84 without"
    assert [(line.icon, line.count, line.text) for line in fewer.arrays[1].lines] == [
        ("with-event", "11", "with it"),
        ("net-fewer", "5", "fewer than with Usual care, on balance"),
        ("no-event", "84", "without, either way on balance"),
    ]
    assert more.arrays[1].caption == "16 of 100 with a recurrence (16.4), 84 without"
    assert [(line.icon, line.count, line.text) for line in more.arrays[1].lines] == [
        ("with-event", "11", "with it, either way on balance"),
        ("net-more", "5", "more than with Usual care, on balance"),
        ("no-event", "84", "without"),
    ]


@pytest.mark.parametrize("typed", ["12 weeks", "at 12 weeks", "within 12 weeks", "By 12 weeks"])
def test_time_is_said_once(typed: str) -> None:
    assert Names("A", "B", "c", typed, fixed_time=True).within == " within 12 weeks"


@pytest.mark.parametrize(
    ("values", "texts", "expected"),
    [
        ((-10.1, -0.7), ("10.1", "0.7"), "0.7 to 10.1 lower"),
        ((0.7, 10.1), ("0.7", "10.1"), "0.7 to 10.1 higher"),
        ((-1.2, 3.4), ("1.2", "3.4"), "1.2 lower to 3.4 higher"),
        ((-1.2, 0.0), ("1.2", "0.0"), "0.0 to 1.2 lower"),
        ((0.0, 0.0), ("0", "0"), "0"),
        ((2.0, 2.0), ("2", "2"), "2 higher"),
    ],
)
def test_signed_spread(values: tuple[float, float], texts: tuple[str, str], expected: str) -> None:
    assert signed_spread(values, texts, (" lower", " higher")) == expected


EVIDENCE: dict[str, tuple[dict[str, object], str, str]] = {
    "no_count_fits": (
        {"arm": "comparator", "total": 40, "nearest": (4, 5), "other_totals": (39, 44), "if_truncated": None},
        "No count fits",
        "Usual care: no count among 40 rounds to this percentage; 4 is 10.00% or 5 is 12.50%. A total of 39 or 44 would fit: "
        "was another number analysed? Check what was typed first.",
    ),
    "more_if_truncated": (
        {"arm": "comparator", "total": 409, "run": Run(409, 68, 69)},
        "More counts if digits were cut off",
        "Usual care: 68 to 69 of 409 would print so only if further digits were cut off instead of rounded. Not used here.",
    ),
    "total_taken_over": (
        {"arm": "comparator", "total": 409},
        "People analysed taken over",
        "Usual care: 409, as at the other outcomes of this sheet. Type the number if it is another here.",
    ),
    "naive_follow_up": (
        {"follow_up": "varies"},
        "Follow-up varies: naive figures",
        "Follow-up varies or people are censored: the figures from counts are naive. Use risks at a fixed time where the paper "
        "gives them.",
    ),
    "odds_part_from_risk": (
        {"odds_ratio": (0.6, 0.6), "risk_ratio": (0.75, 0.75)},
        "Do not read the odds ratio as a risk ratio",
        "The event is common enough that the two differ: an odds ratio of 0.60 stands beside a risk ratio of 0.75. The first "
        "speaks of odds only.",
    ),
    "too_many_tables": (
        {"count": 123456},
        "Too many tables to compute on all",
        "123,456 tables fit. The ranges shown come from some of them, spread evenly, and may fall a little short. Type how many "
        "were analysed to narrow them.",
    ),
    "no_events_at_all": (
        {"upper": [0.036, 0.071], "confidence_level": 0.95},
        "No events in either arm",
        "The trial holds no information on the ratio, only an upper limit of each risk: 3.6% with Compression review, 7.1% with "
        "Usual care (upper end of the exact two-sided 95% interval). The rule of thumb for a one-sided 95% limit is 3 divided by "
        "the number analysed.",
    ),
    "no_events_in_comparator": (
        {},
        "No events in the comparator",
        "The risk ratio and odds ratio cannot be stated, only a lower limit. No half event is added to the empty cell.",
    ),
    "no_events_in_intervention": (
        {},
        "No events in the intervention arm",
        "The ratios are 0 and only their upper limits inform: none seen is not proof of none. No half event is added to the "
        "empty cell.",
    ),
    "all_have_the_event": (
        {},
        "Everybody has the event",
        "The odds ratio cannot be stated. Of the other methods for the risk ratio, the log interval has no width here.",
    ),
    "wanted_not_said": (
        {},
        "Wanted or unwanted?",
        "Say under “The event is” whether fewer or more of it is better. Until then nothing is called benefit or harm.",
    ),
    "case_control_refuses": (
        {},
        "Case-control: odds ratio only",
        "The numbers of cases and controls were chosen, so these totals hold no risk: no risk difference, risk ratio, relative "
        "reduction or number needed to treat can be had from them. Cases stand as the intervention, controls as the comparator, "
        "the exposed as those with the event.",
    ),
    "time_not_stated": (
        {},
        "Time not stated",
        "An absolute difference belongs to a time. Type the time that the counts refer to.",
    ),
}


def test_every_note_has_its_sentence_asserted() -> None:
    assert set(EVIDENCE) == NOTE_SLUGS


@pytest.mark.parametrize("slug", EVIDENCE)
def test_note(slug: str) -> None:
    evidence, head, body = EVIDENCE[slug]
    shown = note_text(Note(slug, evidence), NAMES)
    assert (shown.head, shown.body) == (head, body)
