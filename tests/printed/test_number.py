from __future__ import annotations

from decimal import Decimal
from fractions import Fraction

import pytest
from hypothesis import given
from hypothesis import strategies as st

from app.errors import PrintedProblem
from app.printed.number import LONGEST, Kind, read_number

ACCEPTED: list[tuple[str, Kind, str, int]] = [
    ("46", "count", "46", 0),
    (" 46 ", "count", "46", 0),
    ("+46", "count", "46", 0),
    ("1,234", "count", "1234", 0),
    ("1.234", "count", "1234", 0),
    ("1 234", "count", "1234", 0),
    ("1\u2009234", "count", "1234", 0),
    ("1\u202f234", "count", "1234", 0),
    ("1\u00a0234\u00a0567", "count", "1234567", 0),
    ("1'234", "count", "1234", 0),
    ("10386", "count", "10386", 0),
    ("11.0", "percentage", "11.0", 1),
    ("11·0", "percentage", "11.0", 1),
    ("11\u22190", "percentage", "11.0", 1),
    ("11,0", "percentage", "11.0", 1),
    ("11,0 %", "percentage", "11.0", 1),
    ("11.0%", "percentage", "11.0", 1),
    ("11 per cent", "percentage", "11", 0),
    ("11 percent", "percentage", "11", 0),
    (".5", "percentage", "0.5", 1),
    ("·66", "percentage", "0.66", 2),
    ("11.", "percentage", "11", 0),
    ("0.80", "percentage", "0.80", 2),
    ("1,234", "percentage", "1.234", 3),
    ("1.234", "percentage", "1.234", 3),
    ("1.234,5", "percentage", "1234.5", 1),
]
REFUSED: list[tuple[str, Kind, str]] = [
    ("", "count", "not_a_number"),
    ("   ", "count", "not_a_number"),
    (".", "percentage", "not_a_number"),
    ("abc", "count", "not_a_number"),
    ("4x5", "count", "not_a_number"),
    ("NaN", "count", "not_a_number"),
    ("inf", "percentage", "not_a_number"),
    ("1e5", "count", "not_a_number"),
    ("0x10", "count", "not_a_number"),
    ("1_000", "count", "not_a_number"),
    ("٣٤", "count", "not_a_number"),
    ("1 2", "count", "several_numbers"),
    ("46/418", "count", "several_numbers"),
    ("46 (11.0%)", "count", "several_numbers"),
    ("71 of 412", "count", "several_numbers"),
    ("4<b>6", "count", "not_a_number"),
    ("<b>46</b>", "count", "not_a_number"),
    ("\ud800", "count", "not_a_number"),
    ("\x00", "count", "not_a_number"),
    ("-3", "count", "negative"),
    ("\u22123", "percentage", "negative"),
    ("\u20133", "percentage", "negative"),
    ("46.5", "count", "count_with_decimals"),
    ("46,5", "count", "count_with_decimals"),
    ("11%", "count", "percent_sign_on_count"),
    ("9" * (LONGEST + 1), "count", "too_long"),
]


@pytest.mark.parametrize(("text", "kind", "value", "decimals"), ACCEPTED)
def test_read_number(text: str, kind: Kind, value: str, decimals: int) -> None:
    number = read_number(text, kind)
    assert (number.text, number.value, number.decimals) == (text, Decimal(value), decimals)
    assert str(number.value) == value


@pytest.mark.parametrize(("text", "kind", "slug"), REFUSED)
def test_error_in_number(text: str, kind: Kind, slug: str) -> None:
    with pytest.raises(PrintedProblem) as refused:
        read_number(text, kind)
    assert refused.value.slug == slug


def test_grouping_is_told() -> None:
    assert read_number("1,234", "count").grouped
    assert not read_number("1234", "count").grouped
    assert not read_number("1,234", "percentage").grouped


def test_trailing_zeros_carry_the_unit() -> None:
    assert read_number("0.80", "percentage").rounds_from().high == Fraction(805, 1000)
    assert read_number("0.8", "percentage").rounds_from().high == Fraction(85, 100)


def test_truncation_holds_its_lower_end_only() -> None:
    span = read_number("1.4", "percentage").truncates_from()
    assert span.holds(Fraction(14, 10))
    assert not span.holds(Fraction(15, 10))


@given(st.text(max_size=60), st.sampled_from(["count", "percentage"]))
def test_any_text_is_read_or_refused(text: str, kind: Kind) -> None:
    try:
        number = read_number(text, kind)
    except PrintedProblem:
        return
    assert number.value >= 0


@given(st.integers(0, 10**9), st.sampled_from([",", ".", " ", "\u2009", "\u202f", "'"]))
def test_grouped_counts_read_back(count: int, separator: str) -> None:
    assert read_number(f"{count:,}".replace(",", separator), "count").value == count


@given(st.integers(0, 10000), st.sampled_from([".", ",", "·"]))
def test_percentages_read_back(hundredths: int, mark: str) -> None:
    text = f"{hundredths // 100}{mark}{hundredths % 100:02d}"
    assert read_number(text, "percentage").value == Decimal(hundredths) / 100


def test_the_longest_text_is_still_read() -> None:
    assert read_number("0" * (LONGEST - 1) + "7", "count").value == 7


def test_tabs_and_line_ends_are_trimmed() -> None:
    assert read_number("\t46\r\n", "count").value == 46


def test_one_number_with_something_odd_is_not_several() -> None:
    with pytest.raises(PrintedProblem) as refused:
        read_number("46/", "count")
    assert refused.value.slug == "not_a_number"
