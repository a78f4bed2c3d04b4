"""A ratio to a risk at a starting risk, and an odds ratio to the risk ratio it stands for there."""

from __future__ import annotations

import numpy as np
from numpy.typing import ArrayLike

from app.measures.fourfold import Floats


def risk_from_odds_ratio(odds_ratio: ArrayLike, starting_risk: ArrayLike) -> Floats:
    """Risk with the intervention: OR r / (1 - r + OR r), by odds algebra.

    Parameters
    ----------
    odds_ratio, starting_risk : array of float
        Odds ratio [0 to inf] and risk without the intervention [0 to 1].

    References
    ----------
    higgins_2011.
    """
    ratio, risk = np.asarray(odds_ratio, dtype=np.float64), np.asarray(starting_risk, dtype=np.float64)
    with np.errstate(invalid="ignore", divide="ignore"):
        found = ratio * risk / (1.0 - risk + ratio * risk)
    return np.asarray(np.where(np.isinf(ratio), np.where(risk > 0.0, 1.0, 0.0), np.where(risk >= 1.0, 1.0, found)))


def risk_from_risk_ratio(risk_ratio: ArrayLike, starting_risk: ArrayLike) -> Floats:
    """Product of the two. Above 1 it is no risk: the ratio cannot hold there; nothing is clipped.

    References
    ----------
    higgins_2011.
    """
    return np.asarray(np.asarray(risk_ratio, dtype=np.float64) * np.asarray(starting_risk, dtype=np.float64))


def risk_ratio_from_odds_ratio(odds_ratio: ArrayLike, starting_risk: ArrayLike) -> Floats:
    """Risk ratio that an unadjusted odds ratio stands for: OR / (1 - r + OR r).

    Wrong for adjusted odds ratios.

    References
    ----------
    zhang_yu_1998.
    """
    ratio, risk = np.asarray(odds_ratio, dtype=np.float64), np.asarray(starting_risk, dtype=np.float64)
    with np.errstate(invalid="ignore", divide="ignore"):
        return np.asarray(ratio / (1.0 - risk + ratio * risk))
