"""Paired and crossover counts: only the pairs that differ inform a difference."""

from __future__ import annotations

import numpy as np
from numpy.typing import ArrayLike
from scipy import special

from app.measures.fourfold import Floats, whole_numbers
from app.measures.pvalues import chi_squared_p


def _discordant(first_only: ArrayLike, second_only: ArrayLike) -> tuple[Floats, Floats]:
    b = whole_numbers("first_only", first_only).astype(np.float64)
    c = whole_numbers("second_only", second_only).astype(np.float64)
    b, c = np.broadcast_arrays(b, c)
    return b, c


def mcnemar_statistic(first_only: ArrayLike, second_only: ArrayLike) -> Floats:
    """(b - c)^2 / (b + c); nan with no discordant pair.

    References
    ----------
    mcnemar_1947.
    """
    b, c = _discordant(first_only, second_only)
    with np.errstate(invalid="ignore"):
        return np.asarray((b - c) ** 2 / (b + c))


def mcnemar(first_only: ArrayLike, second_only: ArrayLike) -> Floats:
    """P of McNemar's chi-squared; nan with no discordant pair.

    References
    ----------
    mcnemar_1947.
    """
    return chi_squared_p(mcnemar_statistic(first_only, second_only))


def mcnemar_cc_statistic(first_only: ArrayLike, second_only: ArrayLike) -> Floats:
    """The same with continuity correction, clipped at 0.

    References
    ----------
    mcnemar_1947.
    """
    b, c = _discordant(first_only, second_only)
    with np.errstate(invalid="ignore"):
        return np.asarray(np.maximum(0.0, np.abs(b - c) - 1.0) ** 2 / (b + c))


def mcnemar_cc(first_only: ArrayLike, second_only: ArrayLike) -> Floats:
    """P of McNemar's chi-squared with continuity correction.

    References
    ----------
    mcnemar_1947.
    """
    return chi_squared_p(mcnemar_cc_statistic(first_only, second_only))


def mcnemar_exact(first_only: ArrayLike, second_only: ArrayLike) -> Floats:
    """Exact p: twice the smaller binomial tail of the discordant pairs, at most 1; 1 with none.

    References
    ----------
    fagerland_2013.
    """
    b, c = _discordant(first_only, second_only)
    less, n = np.minimum(b, c), b + c
    tail = np.where(less < n, special.betaincc(less + 1.0, np.maximum(n - less, 1.0), 0.5), 1.0)
    return np.asarray(np.minimum(1.0, 2.0 * tail))


def mcnemar_midp(first_only: ArrayLike, second_only: ArrayLike) -> Floats:
    """Mid-P: the exact p less the probability of the observed split (less half of it where both are equal).

    Edge cases
    ----------
    No pair that differs: 1, as by the exact test; halving a sure event would read as evidence.

    References
    ----------
    fagerland_2013.
    """
    b, c = _discordant(first_only, second_only)
    n = b + c
    log_point = special.gammaln(n + 1.0) - special.gammaln(b + 1.0) - special.gammaln(c + 1.0) - n * np.log(2.0)
    point = np.exp(log_point)
    return np.asarray(np.where(n == 0.0, 1.0, np.where(b == c, 1.0 - 0.5 * point, mcnemar_exact(b, c) - point)))
