"""P values of no difference between two risks, two-sided."""

from __future__ import annotations

import numpy as np
from scipy import special

from app.measures.fourfold import Floats, Fourfold


def chi_squared_p(statistic: Floats) -> Floats:
    """Upper tail of chi-squared with one degree of freedom."""
    return np.asarray(special.erfc(np.sqrt(statistic / 2.0)))


def log_chi_squared_p(statistic: Floats) -> Floats:
    """Natural log of that tail, still right where the tail itself is too small for a float."""
    return np.asarray(np.log(2.0) + special.log_ndtr(-np.sqrt(statistic)))


def pearson_statistic(table: Fourfold) -> Floats:
    """Pearson's chi-squared, nan where nobody or everybody has the event.

    References
    ----------
    pearson_1900.
    """
    a, n1, c, n2 = table.floats()
    events = a + c
    total = n1 + n2
    determinant = table.determinant
    with np.errstate(invalid="ignore"):
        return np.asarray(determinant / (n1 * n2) * determinant * total / (events * (total - events)))


def pearson(table: Fourfold) -> Floats:
    """P by Pearson's chi-squared without correction; nan where nobody or everybody has the event.

    References
    ----------
    pearson_1900.
    """
    return chi_squared_p(pearson_statistic(table))


def log_pearson(table: Fourfold) -> Floats:
    """Natural log of `pearson`."""
    return log_chi_squared_p(pearson_statistic(table))


def n_minus_1_statistic(table: Fourfold) -> Floats:
    """Pearson's chi-squared times (N - 1)/N.

    References
    ----------
    campbell_2007.
    """
    _, n1, _, n2 = table.floats()
    return np.asarray(pearson_statistic(table) * (1.0 - 1.0 / (n1 + n2)))


def n_minus_1(table: Fourfold) -> Floats:
    """P by the N-1 chi-squared, the test that the Miettinen-Nurminen intervals invert. The default.

    Returns
    -------
    array of float
        p [0 to 1], shape of the table; nan where nobody or everybody has the event.

    References
    ----------
    campbell_2007.
    """
    return chi_squared_p(n_minus_1_statistic(table))


def log_n_minus_1(table: Fourfold) -> Floats:
    """Natural log of `n_minus_1`."""
    return log_chi_squared_p(n_minus_1_statistic(table))
