"""Exact conditional inference: the hypergeometric distribution of one cell, both margins fixed."""

from __future__ import annotations

import numpy as np
from scipy import special

from app.measures.fourfold import Floats, Fourfold

_TIE = 1e-7  # probabilities within this relative distance of the observed one count as equal
_NEGLIGIBLE = 1e-17


def _stirling_rest(n: Floats) -> Floats:
    """Ln n! less Stirling's (n + 1/2) ln n - n + ln(2 pi)/2, to full precision; 0 at n = 0 by convention."""
    with np.errstate(divide="ignore", invalid="ignore"):
        small = special.gammaln(n + 1.0) - (n + 0.5) * np.log(n) + n - 0.5 * np.log(2.0 * np.pi)
        square = n * n
        series = (1 / 12 - (1 / 360 - (1 / 1260 - (1 / 1680 - 1 / 1188 / square) / square) / square) / square) / n
    return np.where(n == 0.0, 0.0, np.where(n < 16.0, small, series))


def _deviance(observed: Floats, expected: Floats, difference: Floats) -> Floats:
    """Observed ln(observed / expected) - difference, without cancellation when the two are close."""
    with np.errstate(divide="ignore", invalid="ignore"):
        x = difference / expected
        plain = special.xlogy(observed, observed / expected) - difference
        # Series of (1+x) ln(1+x) - x for small x: x^2/2 - x^3/6 + x^4/12 - ...
        series = np.zeros_like(x)
        for power in range(14, 1, -1):
            series = x * series + (-1.0) ** power / (power * (power - 1.0))
    return np.where(np.abs(x) < 0.05, expected * x * x * series, plain)


def log_probability(events: Floats, n1: Floats, m: Floats, n2: Floats) -> Floats:
    """Natural log of the hypergeometric probability of `events` in the first arm, `m` in both.

    Each binomial factor is written by its deviance and the remainder of Stirling's formula, so that
    nothing cancels however large the totals are. 0 < m < n1 + n2 is assumed.

    References
    ----------
    loader_2000.
    """
    total = n1 + n2
    rest = total - m
    # The four cells differ from their expectation by the same amount, an exact integer over N.
    difference = (events * total - n1 * m) / total
    cells = (
        (events, n1 * m / total, difference),
        (n1 - events, n1 * rest / total, -difference),
        (m - events, n2 * m / total, -difference),
        (n2 - m + events, n2 * rest / total, difference),
    )
    log = _stirling_rest(n1) + _stirling_rest(n2) + _stirling_rest(m) + _stirling_rest(rest) - _stirling_rest(total)
    log = log + 0.5 * (np.log(n1) + np.log(n2) + np.log(m) + np.log(rest) - np.log(total))
    for observed, expected, gap in cells:
        log = log - _stirling_rest(observed) - _deviance(observed, expected, gap)
        log = log - np.where(observed > 0.0, 0.5 * np.log(np.where(observed > 0.0, observed, 1.0)), 0.0)
        log = log - np.where(observed > 0.0, 0.5 * np.log(2.0 * np.pi), 0.0)
    return np.asarray(log + 1.5 * np.log(2.0 * np.pi))


def _tail_ratio(events: Floats, n1: Floats, m: Floats, n2: Floats, direction: Floats) -> Floats:
    """Sum of probabilities from `events` outward (direction +1 or -1), over that of `events` itself.

    All tables advance together by the ratio of neighbouring probabilities, until every further term is
    negligible against its own sum.
    """
    total = np.ones_like(events)
    term = np.ones_like(events)
    x = events.copy()
    rows = np.arange(events.size)
    upward = direction > 0
    while rows.size:
        # Going down is going up with the first arm's events read as non-events.
        above = np.where(upward, (n1 - x) * (m - x), x * (n2 - m + x))
        below = np.where(upward, (x + 1.0) * (n2 - m + x + 1.0), (n1 - x + 1.0) * (m - x + 1.0))
        with np.errstate(divide="ignore", invalid="ignore"):
            term = np.where(above > 0.0, term * above / below, 0.0)
        total[rows] += term
        x = x + np.where(upward, 1.0, -1.0)
        going = term > _NEGLIGIBLE * total[rows]
        if not going.all():
            rows, upward = rows[going], upward[going]
            x, term, n1, m, n2 = (v[going] for v in (x, term, n1, m, n2))
    return total


def _far_boundary(start: Floats, end: Floats, level: Floats, n1: Floats, m: Floats, n2: Floats) -> Floats:
    """First cell from `start` (near the mode) to `end` whose log probability is at most `level`.

    Between the two the probabilities fall, so bisection finds it; nan where none does.
    """
    inside, outside = start.copy(), end.copy()
    found = log_probability(end, n1, m, n2) <= level
    while bool(np.any(np.abs(outside - inside) > 1.0)):
        middle = np.floor(0.5 * (inside + outside))
        low = log_probability(middle, n1, m, n2) <= level
        inside, outside = np.where(low, inside, middle), np.where(low, middle, outside)
    return np.where(found, outside, np.nan)


def log_fisher_irwin(table: Fourfold) -> Floats:
    """Natural log of the two-sided exact p; 0 where a margin is empty. See `fisher_irwin`."""
    a, n1, c, n2 = (np.ravel(x) for x in table.floats())
    m, total = a + c, n1 + n2
    log_p = np.zeros_like(a)
    rows = (m > 0.0) & (m < total)
    a, n1, m, n2 = a[rows], n1[rows], m[rows], n2[rows]
    if not a.size:
        return log_p.reshape(table.shape)
    lowest, highest = np.maximum(0.0, m - n2), np.minimum(n1, m)
    mode = np.clip(np.floor((n1 + 1.0) * (m + 1.0) / (n1 + n2 + 2.0)), lowest, highest)
    observed = log_probability(a, n1, m, n2)
    upper = a > mode
    near = _tail_ratio(a, n1, m, n2, np.where(upper, 1.0, -1.0))
    level = observed + np.log1p(_TIE)
    far = _far_boundary(mode, np.where(upper, lowest, highest), level, n1, m, n2)
    # At the mode itself every table is as probable or less: p is 1, whichever way the tails run.
    there = ~np.isnan(far)
    ratio = np.zeros_like(a)
    if there.any():
        cells = far[there], n1[there], m[there], n2[there]
        relative = np.exp(log_probability(*cells) - observed[there])
        ratio[there] = relative * _tail_ratio(*cells, np.where(upper[there], -1.0, 1.0))
    everything = log_probability(mode, n1, m, n2) <= level
    log_p[rows] = np.where(everything, 0.0, np.minimum(observed + np.log(near + ratio), 0.0))
    return log_p.reshape(table.shape)


def fisher_irwin(table: Fourfold) -> Floats:
    """Fisher's exact test, two-sided by Irwin's rule: the sum over tables as probable or less.

    Returns
    -------
    array of float
        p [0 to 1], shape of the table; 1 where nobody or everybody has the event.

    Notes
    -----
    Tables whose probability lies within a relative 1e-7 of the observed one count as ties.

    References
    ----------
    fisher_1935; irwin_1935.
    """
    return np.asarray(np.exp(log_fisher_irwin(table)))
