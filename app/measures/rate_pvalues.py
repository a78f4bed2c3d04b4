"""P values of no difference between two rates: the split of all events between the arms is binomial."""

from __future__ import annotations

import numpy as np
from scipy import special

from app.measures.fourfold import Floats
from app.measures.likelihood import deviance, stirling_rest
from app.measures.persontime import PersonTime

_TIE = 1e-7  # splits within this relative distance of the observed probability count as equal


def _split(data: PersonTime) -> tuple[Floats, Floats, Floats]:
    """Events of the intervention arm, all events, and the arm's share of the person-time."""
    e1, t1, e2, t2 = data.floats()
    return e1, e1 + e2, t1 / (t1 + t2)


def _at_most(x: Floats, n: Floats, share: Floats) -> Floats:
    """P(X <= x), binomial."""
    return np.asarray(np.where(x < n, special.betaincc(x + 1.0, np.maximum(n - x, 1.0), share), 1.0))


def _at_least(x: Floats, n: Floats, share: Floats) -> Floats:
    """P(X >= x), binomial."""
    return np.asarray(np.where(x > 0, special.betainc(np.maximum(x, 1.0), n - x + 1.0, share), 1.0))


def _log_point(x: Floats, n: Floats, share: Floats) -> Floats:
    """Ln P(X = x), binomial, by Stirling remainders and deviances."""
    expected = n * share
    found = stirling_rest(n) - stirling_rest(x) - stirling_rest(n - x)
    found = found - deviance(x, expected, x - expected) - deviance(n - x, n - expected, expected - x)
    both = (x > 0) & (x < n)
    with np.errstate(divide="ignore", invalid="ignore"):
        scale = np.where(both, 0.5 * np.log(n / (2.0 * np.pi * x * (n - x))), 0.0)
    return np.asarray(np.where(n > 0, found + scale, 0.0))


def _tails(data: PersonTime) -> tuple[Floats, Floats, Floats]:
    """P(X <= e1), P(X >= e1) and P(X = e1) of the split with no difference."""
    x, n, share = _split(data)
    return _at_most(x, n, share), _at_least(x, n, share), np.exp(_log_point(x, n, share))


def p_exact_cond_double(data: PersonTime) -> Floats:
    """Exact conditional p of no difference in rates: twice the smaller tail, at most 1.

    References
    ----------
    rothman_2008.
    """
    lower, upper, _ = _tails(data)
    return np.asarray(np.minimum(1.0, 2.0 * np.minimum(lower, upper)))


def p_mid(data: PersonTime) -> Floats:
    """Conditional mid-P of no difference in rates: twice the smaller tail with half weight on the observed split.

    References
    ----------
    berry_armitage_1995; rothman_2008.
    """
    lower, upper, point = _tails(data)
    return np.asarray(np.minimum(1.0, 2.0 * (np.minimum(lower, upper) - 0.5 * point)))


def p_exact_cond(data: PersonTime) -> Floats:
    """Exact conditional p of no difference in rates: the sum over splits as probable or less.

    References
    ----------
    rothman_2008.
    """
    x, n, share = (np.ravel(v) for v in _split(data))
    level = _log_point(x, n, share) + _TIE
    mode = np.minimum(n, np.floor((n + 1.0) * share))
    upper = x > mode
    inside, outside = mode.copy(), np.where(upper, 0.0, n)
    found = _log_point(outside, n, share) <= level
    while (wide := np.abs(outside - inside) > 1.0).any():
        middle = np.floor(0.5 * (inside + outside))
        low = _log_point(middle, n, share) <= level
        inside, outside = np.where(wide & ~low, middle, inside), np.where(wide & low, middle, outside)
    near = np.where(upper, _at_least(x, n, share), _at_most(x, n, share))
    far = np.where(upper, _at_most(outside, n, share), _at_least(outside, n, share))
    p = near + np.where(found & (outside != x), far, 0.0)
    # A mode as probable as the observed split leaves no split that is more probable.
    everything = _log_point(mode, n, share) <= level
    return np.asarray(np.where(everything, 1.0, np.minimum(p, 1.0))).reshape(data.shape)
