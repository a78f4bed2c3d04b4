"""Terms of exact likelihoods that would cancel if written plainly."""

from __future__ import annotations

import numpy as np
from scipy import special

from app.measures.fourfold import Floats


def stirling_rest(n: Floats) -> Floats:
    """Ln n! less Stirling's (n + 1/2) ln n - n + ln(2 pi)/2, to full precision; 0 at n = 0 by convention."""
    with np.errstate(divide="ignore", invalid="ignore"):
        small = special.gammaln(n + 1.0) - (n + 0.5) * np.log(n) + n - 0.5 * np.log(2.0 * np.pi)
        square = n * n
        series = (1 / 12 - (1 / 360 - (1 / 1260 - (1 / 1680 - 1 / 1188 / square) / square) / square) / square) / n
    return np.where(n == 0.0, 0.0, np.where(n < 16.0, small, series))


def deviance(observed: Floats, expected: Floats, difference: Floats) -> Floats:
    """Observed ln(observed / expected) - difference, without cancellation when the two are close."""
    with np.errstate(divide="ignore", invalid="ignore"):
        x = difference / expected
        plain = special.xlogy(observed, observed / expected) - difference
        # Series of (1+x) ln(1+x) - x for small x: x^2/2 - x^3/6 + x^4/12 - ...
        series = np.zeros_like(x)
        for power in range(14, 1, -1):
            series = x * series + (-1.0) ** power / (power * (power - 1.0))
    return np.where(np.abs(x) < 0.05, expected * x * x * series, plain)
