"""Numbers to text. All rounding is here.

Texts that stand together (an estimate and its limits) share their decimals, and a figure that would
round onto a value it is not (no effect, 0% or 100%) gains digits until its side shows.
"""

from __future__ import annotations

import math
from collections.abc import Iterable, Sequence
from decimal import ROUND_HALF_UP, Context, Decimal
from fractions import Fraction

MINUS = "\N{MINUS SIGN}"
INFINITE = "∞"
UNDEFINED = "–"
_MOST_EXTRA = 8
_FINEST_RATIO = 8


_EXACT = Context(prec=800)  # room for any float at any number of decimals


def _rounded(value: float, decimals: int) -> Decimal:
    return Decimal(repr(float(value))).quantize(Decimal(1).scaleb(-decimals), ROUND_HALF_UP, context=_EXACT)


def fixed(value: float, decimals: int) -> str:
    """`value` with this many decimals, halves up, true minus sign, thousands grouped from 10,000."""
    if math.isnan(value):
        return UNDEFINED
    if math.isinf(value):
        return INFINITE if value > 0 else MINUS + INFINITE
    rounded = _rounded(value, decimals)
    size = rounded.copy_abs()  # abs() would cut it to the default precision
    text = f"{size:,f}" if size >= 10_000 else f"{size:f}"
    return MINUS + text if rounded < 0 else text


def decimals_showing_sides(values: Iterable[float], decimals: int, marks: Sequence[float]) -> int:
    """Fewest decimals, `decimals` or more, at which no finite value rounds onto a mark it is not."""
    finite = [value for value in values if math.isfinite(value)]
    for extra in range(_MOST_EXTRA):
        if not any(
            not math.isclose(value, mark, rel_tol=1e-12, abs_tol=1e-300)
            and _rounded(value, decimals + extra) == _rounded(mark, decimals + extra)
            for value in finite
            for mark in marks
        ):
            return decimals + extra
    return decimals + _MOST_EXTRA


def ratio_decimals(values: Iterable[float]) -> int:
    """Decimals for ratios that stand together, by the rule of four, the finest of all.

    Three significant digits where the leading digit is below 4, else two: 0.324, 0.67, 1.24, 12.4.
    """
    finest = 0
    for value in values:
        if math.isfinite(value) and value > 0:
            exponent = math.floor(math.log10(value))
            leading = value / 10.0**exponent
            finest = max(finest, (1 if leading >= 4 else 2) - exponent)
    return min(max(finest, 0), _FINEST_RATIO)


def ratios(values: Sequence[float]) -> list[str]:
    """Ratios that stand together: decimals shared, their side of 1 kept."""
    decimals = decimals_showing_sides(values, ratio_decimals(values), (1.0,))
    return [fixed(value, decimals) for value in values]


def percent_decimals(smallest_total: int) -> int:
    """Decimals of a percentage: none below 200 people, one from 200."""
    return 0 if smallest_total < 200 else 1


def percentages(values: Sequence[float], decimals: int) -> list[str]:
    """Probabilities as percentages without the sign; 0 and 100 only where exact."""
    scaled = [100.0 * value for value in values]
    finest = decimals_showing_sides(scaled, decimals, (0.0, 100.0))
    return [fixed(value, finest) for value in scaled]


def sizes(values: Sequence[float], factor: float, decimals: int) -> list[str]:
    """Sizes of differences times a factor, decimals shared, never rounded onto 0."""
    scaled = [factor * abs(value) for value in values]
    finest = decimals_showing_sides(scaled, decimals, (0.0,))
    return [fixed(value, finest) for value in scaled]


def per_1000_decimals(estimates: Sequence[float], limits: Sequence[float]) -> int:
    """Decimals of differences per 1000 that stand together: none, or one where the estimate is below 5."""
    scaled = [1000.0 * value for value in (*estimates, *limits)]
    return decimals_showing_sides(scaled, 0 if max(abs(1000.0 * value) for value in estimates) >= 5 else 1, (0.0,))


def p_value(p: float) -> str:
    """A p value with its sign: three decimals from 0.001 to 0.2, else two; digits gained around 0.05.

    Below 0.001 it is an inequality, never 0.000.
    """
    if p < 0.001:
        return "<0.001"
    decimals = 3 if p < 0.2 else 2
    text = fixed(p, decimals_showing_sides((p,), decimals, (0.05, 1.0)))
    return f"={text}"


def needed(value: Fraction | float, decimals: int) -> str:
    """A rounded number needed to treat."""
    return INFINITE if value == math.inf else fixed(float(value), decimals)


def people(count: int) -> str:
    """A count of people, thousands grouped from 10,000."""
    return fixed(float(count), 0)


def spread(texts: Sequence[str], joiner: str = " to ") -> str:
    """Two ends as "a to b", or one where they are alike."""
    first, last = texts[0], texts[-1]
    return first if first == last else f"{first}{joiner}{last}"


def difference_decimals(values: Sequence[float], least: int) -> int:
    """Decimals of differences in points that stand together: `least`, or two digits of the largest estimate below 1."""
    largest = max((abs(value) for value in values if math.isfinite(value)), default=0.0)
    if largest == 0.0 or largest >= 1.0:
        return least
    return min(_MOST_EXTRA, max(least, 1 - math.floor(math.log10(largest) + 1e-9)))


def step_decimals(step: float) -> int:
    """Decimals that tell the ticks of an axis apart."""
    return max(0, -math.floor(math.log10(step) + 1e-9)) if step > 0.0 else 0
