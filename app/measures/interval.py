"""What all interval methods share: the pair of limits and the normal quantile of a level."""

from __future__ import annotations

from typing import NamedTuple

from scipy import special

from app.measures.fourfold import Floats


class Interval(NamedTuple):
    """Lower and upper limit, arrays of one shape, as the formula gives them (never clipped)."""

    low: Floats
    high: Floats


def normal_quantile(confidence_level: float) -> float:
    """Two-sided standard normal quantile of a confidence level (0.95 gives 1.959963984540054).

    Raises
    ------
    ValueError
        The level is not strictly between 0 and 1.
    """
    if not 0.0 < confidence_level < 1.0:
        raise ValueError("confidence_level must lie strictly between 0 and 1")
    return float(-special.ndtri((1.0 - confidence_level) / 2.0))
