"""E-value: how strongly something unmeasured would have to bear on both sides to explain an estimate away."""

from __future__ import annotations

from typing import Literal

import numpy as np
from numpy.typing import ArrayLike

from app.measures.fourfold import Floats

Reported = Literal["RR", "OR_common_outcome", "HR_common_outcome"]


def as_risk_ratio(estimate: ArrayLike, reported: Reported) -> Floats:
    """The risk ratio used: itself, the root of an odds ratio, or a hazard ratio of a common outcome turned.

    References
    ----------
    vanderweele_ding_2017.
    """
    value = np.asarray(estimate, dtype=np.float64)
    if reported == "OR_common_outcome":
        return np.asarray(np.sqrt(value))
    if reported == "HR_common_outcome":
        half = np.log(0.5)
        return np.asarray(np.expm1(half * np.sqrt(value)) / np.expm1(half / np.sqrt(value)))
    return value


def e_value(risk_ratio: ArrayLike) -> Floats:
    """RR + sqrt(RR (RR - 1)), a ratio below 1 inverted first. For observational designs.

    References
    ----------
    vanderweele_ding_2017.
    """
    ratio = np.asarray(risk_ratio, dtype=np.float64)
    with np.errstate(divide="ignore"):
        above = np.where(ratio < 1.0, 1.0 / ratio, ratio)
    return np.asarray(above + np.sqrt(above * (above - 1.0)))


def e_value_of_limit(estimate: ArrayLike, low: ArrayLike, high: ArrayLike) -> Floats:
    """E-value of the limit nearer 1; 1 where the interval holds 1.

    References
    ----------
    vanderweele_ding_2017.
    """
    estimate, low, high = (np.asarray(x, dtype=np.float64) for x in (estimate, low, high))
    nearer = np.where(estimate < 1.0, high, low)
    return np.asarray(np.where((low <= 1.0) & (high >= 1.0), 1.0, e_value(nearer)))
