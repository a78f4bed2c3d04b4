"""P values of no difference between two risks, two-sided."""

from __future__ import annotations

import numpy as np
from scipy import special

from app.measures.fourfold import Floats, Fourfold
from app.measures.interval import blockwise_p
from app.measures.likelihood import deviance


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


@blockwise_p
def log_pearson(table: Fourfold) -> Floats:
    """Natural log of p by Pearson's chi-squared without correction; nan where nobody or everybody has the event.

    References
    ----------
    pearson_1900.
    """
    return log_chi_squared_p(pearson_statistic(table))


def n_minus_1_statistic(table: Fourfold) -> Floats:
    """Pearson's chi-squared times (N - 1)/N.

    References
    ----------
    campbell_2007.
    """
    _, n1, _, n2 = table.floats()
    return np.asarray(pearson_statistic(table) * (1.0 - 1.0 / (n1 + n2)))


@blockwise_p
def log_n_minus_1(table: Fourfold) -> Floats:
    """Natural log of p by the N-1 chi-squared, the test that the Miettinen-Nurminen intervals invert. The default.

    Returns
    -------
    array of float
        p [0 to 1], shape of the table; nan where nobody or everybody has the event.

    References
    ----------
    campbell_2007.
    """
    return log_chi_squared_p(n_minus_1_statistic(table))


def yates_statistic(table: Fourfold) -> Floats:
    """Chi-squared with Yates' continuity correction, clipped at 0.

    References
    ----------
    yates_1934.
    """
    a, n1, c, n2 = table.floats()
    events, total = a + c, n1 + n2
    gap = np.maximum(0.0, np.abs(table.determinant) - total / 2.0)
    with np.errstate(invalid="ignore"):
        return np.asarray(gap / (n1 * n2) * gap * total / (events * (total - events)))


@blockwise_p
def log_yates(table: Fourfold) -> Floats:
    """Natural log of p by chi-squared with Yates' continuity correction; nan where nobody or everybody has the event.

    References
    ----------
    yates_1934.
    """
    return log_chi_squared_p(yates_statistic(table))


def likelihood_ratio_statistic(table: Fourfold) -> Floats:
    """G: twice the sum of observed ln(observed/expected), by deviances that do not cancel.

    References
    ----------
    wilks_1938.
    """
    a, n1, c, n2 = table.floats()
    m, total = a + c, n1 + n2
    rest = total - m
    gap = table.determinant / total
    cells = (
        (a, n1 * m / total, gap),
        (n1 - a, n1 * rest / total, -gap),
        (c, n2 * m / total, -gap),
        (n2 - c, n2 * rest / total, gap),
    )
    statistic = np.zeros(table.shape)
    for observed, expected, difference in cells:
        statistic = statistic + 2.0 * deviance(observed, expected, difference)
    return np.asarray(np.where((m > 0.0) & (rest > 0.0), statistic, np.nan))


@blockwise_p
def log_likelihood_ratio(table: Fourfold) -> Floats:
    """Natural log of p by the likelihood ratio statistic; nan where nobody or everybody has the event.

    References
    ----------
    wilks_1938.
    """
    return log_chi_squared_p(likelihood_ratio_statistic(table))


def _log_normal_p(z: Floats) -> Floats:
    """Natural log of the two-sided normal tail."""
    return np.asarray(np.log(2.0) + special.log_ndtr(-np.abs(z)))


@blockwise_p
def log_wald_z_difference(table: Fourfold) -> Floats:
    """Natural log of p by RD over its plain standard error. For checking print.

    References
    ----------
    newcombe_1998_difference.
    """
    a, n1, c, n2 = table.floats()
    error = np.sqrt(a * (n1 - a) / n1**3 + c * (n2 - c) / n2**3)
    with np.errstate(divide="ignore", invalid="ignore"):
        return _log_normal_p(table.determinant / (n1 * n2) / error)


@blockwise_p
def log_wald_z_ratio(table: Fourfold) -> Floats:
    """Natural log of p by ln RR over its log standard error. For checking print.

    References
    ----------
    katz_1978.
    """
    a, n1, c, n2 = table.floats()
    with np.errstate(divide="ignore", invalid="ignore"):
        z = (np.log(a / n1) - np.log(c / n2)) / np.sqrt((n1 - a) / (a * n1) + (n2 - c) / (c * n2))
    return np.asarray(np.where((a > 0) & (c > 0), _log_normal_p(z), np.nan))


@blockwise_p
def log_wald_z_odds(table: Fourfold) -> Floats:
    """Natural log of p by ln OR over its logit standard error. For checking print.

    References
    ----------
    woolf_1955.
    """
    a, n1, c, n2 = table.floats()
    b, d = n1 - a, n2 - c
    with np.errstate(divide="ignore", invalid="ignore"):
        z = (np.log(a) + np.log(d) - np.log(b) - np.log(c)) / np.sqrt(1 / a + 1 / b + 1 / c + 1 / d)
    return np.asarray(np.where((a > 0) & (b > 0) & (c > 0) & (d > 0), _log_normal_p(z), np.nan))
