from __future__ import annotations

import math
from fractions import Fraction

import pytest
from hypothesis import given
from hypothesis import strategies as st

from app.present.numerals import fixed, needed, p_value, people, percentages, ratio_decimals, ratios, sizes, spread


@pytest.mark.parametrize(
    ("value", "decimals", "text"),
    [
        (0.285, 2, "0.29"),
        (12.5, 0, "13"),
        (-0.054, 2, "−0.05"),
        (-0.001, 2, "0.00"),
        (1234.0, 0, "1234"),
        (12345.0, 0, "12,345"),
        (math.inf, 1, "∞"),
        (-math.inf, 1, "−∞"),
        (math.nan, 1, "–"),
    ],
)
def test_fixed(value: float, decimals: int, text: str) -> None:
    assert fixed(value, decimals) == text


@pytest.mark.parametrize(
    ("values", "decimals"),
    [([0.324], 3), ([0.67], 2), ([1.24], 2), ([12.4], 1), ([45.0], 0), ([0.67, 0.039], 4), ([math.inf], 0)],
)
def test_rule_of_four(values: list[float], decimals: int) -> None:
    """Cole 2015, as restated in requirements R47."""
    assert ratio_decimals(values) == decimals


def test_estimate_and_limits_share_decimals_and_keep_their_side() -> None:
    assert ratios([0.672, 0.474, 0.951]) == ["0.67", "0.47", "0.95"]
    assert ratios([0.84, 0.70, 0.9963]) == ["0.840", "0.700", "0.996"]
    assert ratios([1.0]) == ["1.00"]


def test_percentages_reach_the_ends_only_exactly() -> None:
    assert percentages([0.0, 1.0], 0) == ["0", "100"]
    assert percentages([0.002, 0.5], 0) == ["0.2", "50.0"]
    assert percentages([0.9996], 0) == ["99.96"]


def test_sizes_never_hide_a_difference() -> None:
    assert sizes([-0.0001, 0.02], 100.0, 1) == ["0.01", "2.00"]


@pytest.mark.parametrize(
    ("p", "text"),
    [
        (0.0241, "=0.024"),
        (0.44, "=0.44"),
        (0.0496, "=0.0496"),
        (0.05004, "=0.05004"),
        (0.00099, "<0.001"),
        (0.0, "<0.001"),
        (1.0, "=1.00"),
        (0.9999, "=0.9999"),
    ],
)
def test_p_value(p: float, text: str) -> None:
    assert p_value(p) == text


def test_needed_people_and_spread() -> None:
    assert needed(Fraction(98, 10), 1) == "9.8"
    assert needed(math.inf, 0) == "∞"
    assert people(10386) == "10,386"
    assert spread(["4", "4"]) == "4"
    assert spread(["4", "7"]) == "4 to 7"


@given(st.lists(st.floats(1e-6, 1e6), min_size=1, max_size=4))
def test_no_ratio_rounds_onto_one(values: list[float]) -> None:
    for value, text in zip(values, ratios(values), strict=True):
        shown = float(text.replace(",", ""))
        if abs(value - 1) > 1e-7:
            assert (shown > 1) == (value > 1)
