from __future__ import annotations

import math
from fractions import Fraction

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from app.measures.interval import Interval
from app.measures.needed import RoundedNeeded, Segment, direction_of, needed_segments, number_needed, rounded_needed


def _interval(low: float, high: float) -> Interval:
    return Interval(np.array(low), np.array(high))


def test_exact_fractions_round_where_floats_would_not() -> None:
    """1/(0.25 - 0.20) is 20.000000000000004 in floating point (requirements R60)."""
    rounded = rounded_needed(1 / (Fraction(25, 100) - Fraction(20, 100)), "benefit")
    assert rounded == RoundedNeeded(Fraction(20), "up", 0)


@pytest.mark.parametrize(
    ("exact", "direction", "limit", "value"),
    [
        (Fraction(186, 10), "benefit", None, Fraction(19)),
        (Fraction(186, 10), "harm", None, Fraction(18)),
        (Fraction(434, 100), "benefit", None, Fraction(44, 10)),
        (Fraction(434, 100), "harm", None, Fraction(43, 10)),
        (Fraction(143, 10), "benefit", "low", Fraction(14)),
        (Fraction(143, 10), "benefit", "high", Fraction(15)),
        (Fraction(988, 100), "harm", "low", Fraction(98, 10)),
        (Fraction(10), "benefit", None, Fraction(10)),
    ],
)
def test_rounding_by_direction_and_outward(exact: Fraction, direction: str, limit: str | None, value: Fraction) -> None:
    assert rounded_needed(exact, direction, limit=limit).value == value  # type: ignore[arg-type]


def test_interval_through_infinity_is_two_segments() -> None:
    """RD -5 to +25 points gives benefit 20 ... inf ... harm 4 for an unwanted event (requirements R56, turned)."""
    first, second = needed_segments(_interval(-0.05, 0.25), event_is_unwanted=True)
    assert first == Segment("benefit", 20.0, math.inf)
    assert second == Segment("harm", 4.0, math.inf)


def test_wanted_event_turns_the_directions() -> None:
    first, second = needed_segments(_interval(-0.05, 0.25), event_is_unwanted=False)
    assert first == Segment("benefit", 4.0, math.inf)
    assert second == Segment("harm", 20.0, math.inf)


def test_limit_of_exactly_zero_runs_to_infinity() -> None:
    assert needed_segments(_interval(0.0, 0.25), True) == (Segment("harm", 4.0, math.inf),)
    assert needed_segments(_interval(-0.25, 0.0), True) == (Segment("benefit", 4.0, math.inf),)


def test_no_width_at_zero_or_undefined_has_no_segment() -> None:
    assert needed_segments(_interval(0.0, 0.0), True) == ()
    assert needed_segments(_interval(math.nan, math.nan), True) == ()


def test_no_difference_is_infinite_and_has_no_direction() -> None:
    assert number_needed(np.array(0.0)) == math.inf
    assert direction_of(Fraction(0), True) == "none"


@given(st.integers(1, 500), st.integers(1, 500), st.integers(0, 500), st.integers(0, 500))
def test_rounding_never_flatters(n1: int, n2: int, a: int, c: int) -> None:
    difference = Fraction(min(a, n1), n1) - Fraction(min(c, n2), n2)
    if difference == 0:
        return
    exact = abs(1 / difference)
    benefit, harm = rounded_needed(exact, "benefit"), rounded_needed(exact, "harm")
    assert harm.value <= exact <= benefit.value
    assert benefit.value - harm.value <= Fraction(1, 10**benefit.decimals)


@pytest.mark.parametrize(
    ("exact", "direction", "limit", "expected"),
    [
        (Fraction(186, 10), "benefit", None, RoundedNeeded(Fraction(19), "up", 0)),
        (Fraction(186, 10), "harm", None, RoundedNeeded(Fraction(18), "down", 0)),
        (Fraction(186, 10), "benefit", "low", RoundedNeeded(Fraction(18), "down", 0)),
        (Fraction(186, 10), "harm", "high", RoundedNeeded(Fraction(19), "up", 0)),
        (Fraction(10), "harm", None, RoundedNeeded(Fraction(10), "down", 0)),
        (Fraction(1004, 100), "benefit", None, RoundedNeeded(Fraction(11), "up", 0)),
        (Fraction(999, 100), "benefit", None, RoundedNeeded(Fraction(10), "up", 1)),
    ],
)
def test_rounding_says_its_rule_and_decimals(
    exact: Fraction, direction: str, limit: str | None, expected: RoundedNeeded
) -> None:
    assert rounded_needed(exact, direction, limit=limit) == expected  # type: ignore[arg-type]


@pytest.mark.parametrize(
    ("difference", "unwanted", "direction"),
    [(-0.2, True, "benefit"), (0.2, True, "harm"), (-0.2, False, "harm"), (0.2, False, "benefit"), (0.0, True, "none")],
)
def test_direction(difference: float, unwanted: bool, direction: str) -> None:
    assert direction_of(difference, unwanted) == direction


def test_interval_with_one_limit_undefined_has_no_segment() -> None:
    assert needed_segments(_interval(math.nan, 0.2), True) == ()
    assert needed_segments(_interval(-0.2, math.nan), True) == ()


def test_segments_of_an_interval_on_one_side() -> None:
    assert needed_segments(_interval(-0.5, -0.25), True) == (Segment("benefit", 2.0, 4.0),)
    assert needed_segments(_interval(0.25, 0.5), True) == (Segment("harm", 2.0, 4.0),)
