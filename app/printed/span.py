"""Intervals of exact fractions: the true values that a printed number may stand for."""

from __future__ import annotations

from dataclasses import dataclass
from fractions import Fraction


@dataclass(frozen=True, slots=True)
class Span:
    """All values from `low` to `high`; `high` itself only if `closed`."""

    low: Fraction
    high: Fraction
    closed: bool = True

    def holds(self, value: Fraction) -> bool:
        """Whether `value` lies in the span."""
        return self.low <= value and (value <= self.high if self.closed else value < self.high)

    def scaled(self, factor: Fraction) -> Span:
        """The span with both ends times a positive factor."""
        return Span(self.low * factor, self.high * factor, self.closed)

    def mirrored(self) -> Span:
        """The span of 1 minus each value (closed spans only)."""
        return Span(1 - self.high, 1 - self.low)

    def whole(self, most: int) -> tuple[int, int]:
        """First and last whole number from 0 to `most` in the span; first > last where there is none."""
        first = max(0, -(-self.low.numerator // self.low.denominator))
        last = self.high.numerator // self.high.denominator
        if not self.closed and last == self.high:
            last -= 1
        return first, min(last, most)
