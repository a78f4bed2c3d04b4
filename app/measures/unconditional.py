"""Exact unconditional tests: the worst probability, over the common risk, of tables as extreme or more.

The region of such tables is a matrix; for a grid of risks its probability is a product of the two
binomial vectors with it. The grid is even in arcsin sqrt(risk), with 6 sqrt(N) points, and the best
maxima are looked at again, ever finer: |d arcsin sqrt(P) / d arcsin sqrt(risk)| <= sqrt(N) bounds how far
a grid can miss, and `certified_bound` says how far that is.
"""

from __future__ import annotations

from collections.abc import Callable

import numpy as np
from scipy import special

from app.measures.fourfold import Flags, Floats, Fourfold

LARGEST = 4000
"""Most people in both arms together for which these tests are offered; above it they are nan."""

_TIE = 1e-12  # statistics within this relative distance are equal: exact ties differ by rounding only
_FISHER_TIE = 1e-7
_BEST = 4
_ZOOMS = 10


def _binomials(n: int, risks: Floats) -> Floats:
    """Binomial probabilities of 0..n events, one row a risk."""
    x = np.arange(n + 1.0)
    log = special.gammaln(n + 1.0) - special.gammaln(x + 1.0) - special.gammaln(n - x + 1.0)
    weights = np.exp(log + special.xlogy(x, risks[:, None]) + special.xlog1py(n - x, -risks[:, None]))
    return np.asarray(weights / weights.sum(axis=1, keepdims=True))


def _probability(region: Flags, angles: Floats) -> Floats:
    """Probability of the region at each risk sin(angle)^2."""
    risks = np.sin(angles) ** 2
    first, second = _binomials(region.shape[0] - 1, risks), _binomials(region.shape[1] - 1, risks)
    return np.asarray(((first @ region.astype(np.float64)) * second).sum(axis=1))


def _worst(region: Flags) -> float:
    """Largest probability of the region over the common risk."""
    points = int(6.0 * np.sqrt(region.shape[0] + region.shape[1])) + 3
    angles = np.linspace(0.0, np.pi / 2.0, points)
    values = _probability(region, angles)
    step = angles[1]
    inner = (values >= np.r_[-1.0, values[:-1]]) & (values >= np.r_[values[1:], -1.0])
    peaks = np.flatnonzero(inner)
    peaks = peaks[np.argsort(values[peaks])[::-1][:_BEST]]
    best = float(np.max(values))
    around, width = angles[peaks], step
    for _ in range(_ZOOMS):
        finer = np.clip(around[:, None] + width * np.linspace(-1.0, 1.0, 9), 0.0, np.pi / 2.0)
        found = _probability(region, finer.ravel()).reshape(finer.shape)
        around, width = finer[np.arange(peaks.size), found.argmax(axis=1)], width / 3.5
        best = max(best, float(np.max(found)))
    return min(best, 1.0)


def certified_bound(region: Flags, points: int) -> float:
    """An upper bound of the region's probability over all risks, from a grid of so many points."""
    angles = np.linspace(0.0, np.pi / 2.0, points)
    at = np.arcsin(np.sqrt(_probability(region, angles)))
    reach = np.sqrt(region.shape[0] + region.shape[1] - 2.0) * angles[1] / 2.0
    # Between two neighbours the angle of P rises at most by the bound times half of what is left.
    top = np.minimum((at[1:] + at[:-1]) / 2.0 + reach, np.pi / 2.0)
    return float(np.sin(np.max(top)) ** 2)


def _counts(n1: int, n2: int) -> tuple[Floats, Floats]:
    x1, x2 = np.meshgrid(np.arange(n1 + 1.0), np.arange(n2 + 1.0), indexing="ij")
    return x1, x2


def pooled_z_region(a: int, n1: int, c: int, n2: int) -> Flags:
    """Tables whose pooled z is as far from 0 as the observed one or further; ties counted."""
    x1, x2 = _counts(n1, n2)
    m = x1 + x2
    with np.errstate(divide="ignore", invalid="ignore"):
        statistic = np.where((m > 0) & (m < n1 + n2), (x1 * n2 - x2 * n1) ** 2 / (m * (n1 + n2 - m)), 0.0)
    return np.asarray(statistic >= statistic[a, c] * (1.0 - _TIE))


def _log_choices(n: int) -> Floats:
    """Ln of n over x for x from 0 to n, less ln n!."""
    x = np.arange(n + 1.0)
    return np.asarray(-special.gammaln(x + 1.0) - special.gammaln(n - x + 1.0))


def _fisher_p(n1: int, n2: int) -> tuple[Floats, Floats, Floats]:
    """P(X <= x), P(X >= x) and Irwin's two-sided sum of every table of a design."""
    lower, upper, irwin = (np.empty((n1 + 1, n2 + 1)) for _ in range(3))
    logs1, logs2 = _log_choices(n1), _log_choices(n2)
    for m in range(n1 + n2 + 1):
        x = np.arange(max(0, m - n2), min(n1, m) + 1)
        log = logs1[x] + logs2[m - x]
        weight = np.exp(log - np.max(log))
        weight /= weight.sum()
        lower[x, m - x] = np.cumsum(weight)
        upper[x, m - x] = np.cumsum(weight[::-1])[::-1]
        order = np.argsort(weight, kind="stable")
        running = np.cumsum(weight[order])
        last = np.searchsorted(weight[order], weight * (1.0 + _FISHER_TIE), side="right") - 1
        irwin[x, m - x] = running[last]
    return lower, upper, irwin


def _at_most(p: Floats, a: int, c: int) -> Flags:
    return np.asarray(p <= p[a, c] * (1.0 + _FISHER_TIE))


def _each(table: Fourfold, of_one: Callable[[int, int, int, int], float]) -> Floats:
    """Natural log of `of_one` for each table, nan above the size where it is offered."""
    cells = zip(*(np.ravel(x).astype(float).tolist() for x in table.floats()), strict=True)
    found = [of_one(int(a), int(n1), int(c), int(n2)) if n1 + n2 <= LARGEST else np.nan for a, n1, c, n2 in cells]
    with np.errstate(divide="ignore"):
        return np.asarray(np.log(np.array(found))).reshape(table.shape)


def log_barnard_pooled_z(table: Fourfold) -> Floats:
    """Natural log of p by Barnard's exact unconditional test, tables ordered by the size of the pooled z.

    Returns
    -------
    array of float
        ln p [at most 0], shape of the table; nan above 4000 people in both arms.

    References
    ----------
    barnard_1947; suissa_shuster_1985.
    """
    return _each(table, lambda a, n1, c, n2: _worst(pooled_z_region(a, n1, c, n2)))


def log_boschloo_irwin(table: Fourfold) -> Floats:
    """Natural log of p by Boschloo's exact unconditional test, tables ordered by Fisher's two-sided p (Irwin's sum).

    Returns
    -------
    array of float
        ln p [at most 0], shape of the table; nan above 4000 people in both arms.

    References
    ----------
    boschloo_1970.
    """
    return _each(table, lambda a, n1, c, n2: _worst(_at_most(_fisher_p(n1, n2)[2], a, c)))


def log_boschloo_twice_one_sided(table: Fourfold) -> Floats:
    """Natural log of twice the smaller of Boschloo's two one-sided tests, at most 1.

    References
    ----------
    boschloo_1970.
    """

    def of_one(a: int, n1: int, c: int, n2: int) -> float:
        lower, upper, _ = _fisher_p(n1, n2)
        return min(1.0, 2.0 * min(_worst(_at_most(side, a, c)) for side in (lower, upper)))

    return _each(table, of_one)
