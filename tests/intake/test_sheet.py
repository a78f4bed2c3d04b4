"""Every bad box has a message that says what is wrong and what would be right, all at once."""

from __future__ import annotations

from dataclasses import replace

import pytest
from hypothesis import given
from hypothesis import strategies as st

from app.appraisal.fields import TEXT_LIMIT
from app.appraisal.run import appraise
from app.appraisal.sheet import Sheet, TypedArm, TypedOutcome
from app.intake.sheet import gather, needs, sheet_from_form

EVENTS, NON_EVENTS, TOTAL, PERCENTAGE = (f"outcome-0-arm-0-{part}" for part in ("events", "non_events", "total", "percentage"))


def sheet(**arm: str) -> Sheet:
    return Sheet(outcomes=(TypedOutcome(arms=(TypedArm(**arm), TypedArm(events="67", total="409"))),))


def problems(given_sheet: Sheet) -> list[tuple[str, str, str]]:
    return [(p.field, p.message, p.hint) for p in gather(given_sheet).problems]


CASES: list[tuple[dict[str, str], list[tuple[str, str, str]]]] = [
    (
        {"events": "50", "total": "40"},
        [(EVENTS, "50 here are more than the 40 analysed.", "Check both numbers, and which box each belongs in.")],
    ),
    (
        {"non_events": "50", "total": "40"},
        [(NON_EVENTS, "50 here are more than the 40 analysed.", "Check both numbers, and which box each belongs in.")],
    ),
    (
        {"events": "46", "non_events": "372", "total": "420"},
        [(TOTAL, "46 with and 372 without make 418, not 420.", "Check the three numbers, or leave one of them empty.")],
    ),
    ({"events": "-3", "total": "40"}, [(EVENTS, "A negative number cannot stand here.", "Type 0 or more, such as 46.")]),
    (
        {"events": "4.5", "total": "40"},
        [
            (
                EVENTS,
                "People are counted whole; “4.5” has decimals.",
                "Type a whole number such as 46, or a percentage under Per cent.",
            )
        ],
    ),
    ({"events": "abc", "total": "40"}, [(EVENTS, "“abc” is not a number.", "Type digits, such as 46.")]),
    (
        {"events": "11%", "total": "40"},
        [
            (
                EVENTS,
                "A percentage stands where people are counted.",
                "Type it under Per cent, or type how many people, such as 46.",
            )
        ],
    ),
    (
        {"percentage": "101", "total": "40"},
        [(PERCENTAGE, "A percentage of people cannot be above 100.", "Check the decimal mark; type a number from 0 to 100.")],
    ),
    (
        {"events": "0", "total": "0"},
        [(TOTAL, "Nobody was analysed: no risk can be stated.", "Type how many people were analysed, such as 418.")],
    ),
    (
        {"events": "0", "non_events": "0"},
        [(EVENTS, "Nobody was analysed: no risk can be stated.", "Type how many people were analysed, such as 418.")],
    ),
    (
        {"events": "1", "total": "1000000000000"},
        [(TOTAL, "More people than this program counts in an arm.", "Type at most 1,000,000,000; check for a digit too many.")],
    ),
    (
        {"events": "9" * 2000, "total": "40"},
        [(EVENTS, "This is too long to be one number.", "Type the number alone, such as 46.")],
    ),
    (
        {"events": "<script>alert(1)</script>", "total": "40"},
        [(EVENTS, "“<script>alert(1)</script” is not a number.", "Type digits, such as 46.")],
    ),
    (
        {"events": "46/418", "total": "418"},
        [
            (
                EVENTS,
                "“46/418” holds more than one number.",
                "Type one number here, such as 46, and the others in their own boxes.",
            )
        ],
    ),
    ({"events": "NaN", "total": "40"}, [(EVENTS, "“NaN” is not a number.", "Type digits, such as 46.")]),
    ({"events": "\x00\u202e", "total": "40"}, [(EVENTS, "“��” is not a number.", "Type digits, such as 46.")]),
]


@pytest.mark.parametrize(("arm", "expected"), CASES)
def test_error_in_box(arm: dict[str, str], expected: list[tuple[str, str, str]]) -> None:
    assert problems(sheet(**arm)) == expected


@pytest.mark.parametrize(("arm", "expected"), CASES)
def test_the_other_arm_stays_alive(arm: dict[str, str], expected: list[tuple[str, str, str]]) -> None:
    outcome = appraise(gather(sheet(**arm)).input).outcomes[0]
    assert outcome.comparator is not None
    assert outcome.comparator.estimate.low == 67 / 409


def test_all_problems_come_at_once() -> None:
    bad = Sheet(
        title="x" * (TEXT_LIMIT + 1),
        outcomes=(TypedOutcome(arms=(TypedArm(events="x", total="y"), TypedArm(events="9", total="3"))),),
    )
    assert [p.field for p in gather(bad).problems] == ["title", EVENTS, TOTAL, "outcome-0-arm-1-events"]


NEEDS: list[tuple[dict[str, str], tuple[str, str, str]]] = [
    ({}, (EVENTS, "This arm is still empty.", "Type any two of its numbers.")),
    ({"events": "4"}, (TOTAL, "One more number is needed.", "Type how many were analysed, or the percentage.")),
    ({"non_events": "4"}, (TOTAL, "One more number is needed.", "Type how many were analysed, or the percentage.")),
    ({"total": "4"}, (EVENTS, "One more number is needed.", "Type how many had the event, or the percentage.")),
    ({"percentage": "4"}, (TOTAL, "One more number is needed.", "Type how many were analysed, or how many had the event.")),
    (
        {"events": "46", "total": "418", "percentage": "14.0"},
        (PERCENTAGE, "46 of 418 is 11.00%, not 14.0.", "Check the three numbers; the figures below follow the counts."),
    ),
    (
        {"total": "37", "percentage": "11.0"},
        (
            PERCENTAGE,
            "No whole number of people gives this percentage.",
            "Check the total and the percentage; the note says which counts and totals come near.",
        ),
    ),
    (
        {"total": "418", "percentage": "0.11"},
        (
            PERCENTAGE,
            "No whole number of people gives this percentage.",
            "If 0.11 is a proportion, type it as a percentage, 11.00.",
        ),
    ),
    ({"events": "0", "percentage": "0"}, (TOTAL, "These two allow almost any total.", "Type how many were analysed.")),
]


@pytest.mark.parametrize(("arm", "expected"), NEEDS)
def test_what_an_arm_still_needs(arm: dict[str, str], expected: tuple[str, str, str]) -> None:
    typed = sheet(**arm)
    assert [(p.field, p.message, p.hint) for p in needs(typed, 0, gather(typed))] == [expected]


def test_an_empty_sheet_is_asked_for_nothing() -> None:
    assert needs(Sheet(), 0, gather(Sheet())) == ()


def test_a_refused_arm_is_not_asked_for_more() -> None:
    typed = sheet(events="abc")
    assert needs(typed, 0, gather(typed)) == ()


def test_grouping_is_read_and_told() -> None:
    gathered = gather(sheet(events="1.046", total="10,418"))
    assert {name: int(number.value) for name, number in gathered.read_as.items()} == {EVENTS: 1046, TOTAL: 10418}


def test_a_form_changes_only_what_it_posts() -> None:
    before = Sheet(title="Kept", outcomes=(TypedOutcome(name="First"), TypedOutcome(name="Second")))
    after = sheet_from_form({"outcome-1-name": "Changed", "outcome-1-arm-0-events": "4", "outcome-9-name": "none"}, before)
    expected = replace(before.outcomes[1], name="Changed", arms=(TypedArm(events="4"), TypedArm()))
    assert after == replace(before, outcomes=(before.outcomes[0], expected))


def test_a_choice_that_is_none_leaves_the_old_one() -> None:
    after = sheet_from_form({"confidence_level": "42", "outcome-0-event_is": "<b>"}, Sheet())
    assert (after.confidence_level, after.outcomes[0].event_is) == ("95", "not_said")


@given(
    st.builds(TypedArm, *[st.text(max_size=50)] * 4),
    st.builds(TypedArm, *[st.from_regex(r"[0-9.,%]{0,6}", fullmatch=True)] * 4),
)
def test_anything_typed_is_answered(first: TypedArm, second: TypedArm) -> None:
    typed = Sheet(outcomes=(TypedOutcome(arms=(first, second)),))
    gathered = gather(typed)
    appraise(gathered.input)
    needs(typed, 0, gathered)
