"""Which values print as a printed number does: exactly, or within one unit of its last digit."""

from __future__ import annotations

from fractions import Fraction
from typing import NamedTuple

import numpy as np

from app.measures.fourfold import Flags, Floats
from app.printed.number import PrintedNumber

_EDGE = 1e-11  # share of a value by which a float may miss the closed end of a window


class Window(NamedTuple):
    """Values from `low` to `high`, both included but for the rounding of floats."""

    low: float
    high: float

    def holds(self, values: Floats) -> Flags:
        """Whether each value lies in the window; nan never does."""
        with np.errstate(invalid="ignore"):
            return np.asarray((values >= self.low - _edge(self.low)) & (values <= self.high + _edge(self.high)))

    def meets(self, other: Window) -> bool:
        """Whether the two share a value."""
        return self.low <= other.high + _edge(other.high) and other.low <= self.high + _edge(self.high)

    def mirrored(self) -> Window:
        """The window of the negative values."""
        return Window(-self.high, -self.low)


def _edge(end: float) -> float:
    return abs(end) * _EDGE + 1e-300


def rounding(number: PrintedNumber, factor: Fraction = Fraction(1), units: Fraction = Fraction(1, 2)) -> Window:
    """What lies within so many units of the last printed digit: half a unit is what rounds so."""
    away = number.unit_in_last_place * units
    return Window(float((number.exact - away) * factor), float((number.exact + away) * factor))


def exact(number: PrintedNumber, factor: Fraction = Fraction(1)) -> Window:
    """What rounds to the number, half-up or half-even."""
    return rounding(number, factor)


def near(number: PrintedNumber, factor: Fraction = Fraction(1)) -> Window:
    """What rounds at most one unit of the last digit away; holds what is cut off to the number, too."""
    return rounding(number, factor, Fraction(3, 2))


def whole_unit(number: PrintedNumber, factor: Fraction = Fraction(1)) -> Window:
    """What comes to the number by rounding up, down or to nearest: less than one unit away."""
    away = number.unit_in_last_place * (1 - Fraction(1, 10**9))
    return Window(float((number.exact - away) * factor), float((number.exact + away) * factor))


def same_side(values: Floats, printed: float, no_effect: float) -> Flags:
    """Whether each value lies on the printed side of no effect (either may lie on it)."""
    with np.errstate(invalid="ignore"):
        return np.asarray((values - no_effect) * (printed - no_effect) >= 0.0)


def significant_digits(number: PrintedNumber) -> int:
    """Digits printed from the first that is not 0."""
    return len(str(abs(number.exact * Fraction(10) ** number.decimals).numerator)) if number.exact else 1
