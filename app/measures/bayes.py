"""Probability that one risk is lower than the other, from independent beta posteriors."""

from __future__ import annotations

from collections.abc import Mapping

import numpy as np
from scipy import special

from app.measures.fourfold import Floats, Fourfold

PRIORS: Mapping[str, float] = {"uniform": 1.0, "jeffreys": 0.5}
"""Both parameters of the beta prior of each risk."""

_STEPS = 3.0  # points per standard deviation: the trapezoid error is then far below rounding
_WIDEST_STEP = 0.45  # the logistic function has poles at -+ i pi: the error is exp(-2 pi^2 / step)
_REACH = 40.0  # standard deviations of the logit looked at on each side


def probability_lower(table: Fourfold, prior: str = "uniform") -> Floats:
    """Posterior probability that the intervention's risk is the lower one.

    Parameters
    ----------
    table : Fourfold
        Any shape.
    prior : "uniform" or "jeffreys"
        Beta(1, 1) or Beta(1/2, 1/2), independent in the two arms.

    Returns
    -------
    array of float
        Probability [0 to 1], shape of the table.

    Notes
    -----
    The density of one logit times the tail of the other risk, by the trapezoid rule, which converges
    exponentially for such functions; both densities are resolved.

    References
    ----------
    altham_1969.
    """
    extra = PRIORS[prior]
    cells = zip(*(np.ravel(x).tolist() for x in table.floats()), strict=True)
    found = [_lower(a + extra, n1 - a + extra, c + extra, n2 - c + extra) for a, n1, c, n2 in cells]
    return np.array(found).reshape(table.shape)


def _logit_spread(first: float, second: float) -> float:
    """Standard deviation of the logit of a beta variable."""
    return float(np.sqrt(special.polygamma(1, first) + special.polygamma(1, second)))


def _lower(a: float, b: float, c: float, d: float) -> float:
    spreads = _logit_spread(a, b), _logit_spread(c, d)
    center = float(special.digamma(a) - special.digamma(b))
    # Far out the density of a logit falls like exp(-a |t|) or exp(-b t): that reach is needed for few events.
    low, high = center - max(_REACH / a, _REACH * spreads[0] / 3.0), center + max(_REACH / b, _REACH * spreads[0] / 3.0)
    points = int((high - low) / min(*(spread / _STEPS for spread in spreads), _WIDEST_STEP)) + 64
    t = np.linspace(low, high, points)
    log_density = special.log_expit(t) * a + special.log_expit(-t) * b
    density = np.exp(log_density - np.max(log_density))
    above = special.betaincc(c, d, special.expit(t))
    return float((density * above).sum() / density.sum())
