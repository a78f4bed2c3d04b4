from __future__ import annotations

from fractions import Fraction

from hypothesis import given
from hypothesis import strategies as st

from app.printed.span import Span


@given(st.fractions(0, 20), st.fractions(0, 20), st.booleans(), st.integers(0, 25))
def test_whole_is_a_scan(low: Fraction, width: Fraction, closed: bool, most: int) -> None:
    span = Span(low, low + width, closed)
    first, last = span.whole(most)
    assert [k for k in range(most + 1) if span.holds(Fraction(k))] == list(range(first, last + 1))


def test_mirrored_and_scaled() -> None:
    span = Span(Fraction(1, 4), Fraction(1, 3))
    assert span.mirrored() == Span(Fraction(2, 3), Fraction(3, 4))
    assert span.scaled(Fraction(12)) == Span(Fraction(3), Fraction(4))
