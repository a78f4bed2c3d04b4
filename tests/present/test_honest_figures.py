"""Figures that rounding, rare events or odd names once made say what is not so."""

from __future__ import annotations

import re

import pytest

from app.appraisal.model import AppraisalInput, OutcomeInput
from app.appraisal.run import appraise
from app.errors import PrintedProblem
from app.present.numerals import fixed, p_value
from app.present.results import ResultsView, results_view
from app.present.wording import Names, isolated
from app.printed.number import read_number
from tests.claims_maker import arm_claims

NAMES = Names("drug", "placebo", "an event", "1 year", fixed_time=True)


def shown(a: int, n1: int, c: int, n2: int, **settings: object) -> ResultsView:
    claims = arm_claims("intervention", events=str(a), total=str(n1)) + arm_claims("comparator", events=str(c), total=str(n2))
    given = OutcomeInput(claims, **{"follow_up": "fixed", "horizon": "1 year", "event_is": "unwanted", **settings})  # type: ignore[arg-type]
    return results_view(appraise(AppraisalInput((given,))).outcomes[0], NAMES)


def ticks(svg: object) -> list[str]:
    return re.findall(r"<text[^>]*>([^<]*)</text>", str(svg))


@pytest.mark.parametrize("table", [(20, 3000, 40, 3000), (5, 1000, 0, 1000), (600, 10**6, 100, 10**6), (1, 1000, 7583, 12345)])
def test_ticks_of_an_axis_are_told_apart(table: tuple[int, int, int, int]) -> None:
    view = shown(*table)
    for item in (*view.absolute, *view.relative):
        labels = ticks(item.strip)
        assert len(set(labels)) == len(labels), item.name
        assert not any("e" in label for label in labels), labels


@pytest.mark.parametrize(
    ("table", "value"),
    [
        ((15, 10_000, 20, 10_000), "0.050 points lower"),
        ((94, 43_448, 162, 43_448), "0.16 points lower"),
        ((17, 20_000, 34, 20_000), "0.085 points lower"),
        ((46, 418, 67, 409), "5.4 points lower"),
    ],
)
def test_small_differences_keep_two_digits(table: tuple[int, int, int, int], value: str) -> None:
    assert shown(*table).absolute[0].value == value


def test_a_reduction_is_whole_only_where_nobody_has_the_event() -> None:
    reduction = shown(1, 10_000, 300, 10_000).relative[1]
    assert (reduction.value, reduction.beside) == ("99.7%", "0.3% of the risk with placebo")
    assert shown(0, 10_000, 300, 10_000).relative[1].value == "100%"


def test_a_positive_ratio_is_never_printed_as_none() -> None:
    odds = shown(1, 12_345, 2, 3).relative[2]
    assert float(odds.value) > 0
    others = [other.interval for other in shown(0, 100, 0, 100).relative[0].others]
    assert all(not text.startswith("0 to") for text in others if text[:1].isdigit() and "any" not in text and "0.0" not in text)


@pytest.mark.parametrize("text", ["0.110", "0,123", "0.418"])
def test_a_proportion_is_no_count(text: str) -> None:
    with pytest.raises(PrintedProblem, match="count_with_decimals"):
        read_number(text, "count")


@pytest.mark.parametrize("table", [(4, 20, 5, 20), (1, 9, 1, 8), (3, 3, 49, 50)])
def test_float_noise_gains_no_digits(table: tuple[int, int, int, int]) -> None:
    view = shown(*table)
    assert view.p_values is not None
    assert not any("0000" in text for text in (view.p_values.first, *view.p_values.others))
    assert p_value(0.9999999999999986) == "=1.00"


def test_limits_of_a_difference_end_at_a_hundred_points() -> None:
    for table in ((0, 1, 1, 1), (0, 50, 50, 50)):
        for other in shown(*table).absolute[0].others:
            assert all(float(number) <= 100 for number in re.findall(r"[0-9.]+", other.interval))


def test_needed_to_treat_is_at_least_one() -> None:
    for other in shown(9, 10, 1, 10).absolute[1].others:
        assert all(float(number) >= 1 for number in re.findall(r"[0-9.]+", other.interval))


def test_ends_that_round_alike_are_no_range() -> None:
    view = shown(999_999, 10**9, 123_456, 10**9)
    assert view.people is not None
    assert "anything from" not in view.people.rest


def test_case_control_notes_speak_of_what_is_shown() -> None:
    slugs = {note.slug for note in shown(46, 418, 67, 409, design="case_control", follow_up="not_said", horizon="").notes}
    assert slugs.isdisjoint({"time_not_stated", "naive_follow_up"})


def test_names_cannot_turn_the_sentence_around_them() -> None:
    assert isolated("drug\u202e") == "drug"
    assert isolated("מוות") == "\u2068מוות\u2069"
    assert isolated("Usual care") == "Usual care"


def test_any_number_of_decimals_is_written() -> None:
    assert fixed(1.0, 36) == "1." + "0" * 36
    assert fixed(1e300, 0).startswith("1,000,000")
