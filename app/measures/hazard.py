"""Hazard ratio to absolute effect at a time, given the comparator's risk or survival there."""

from __future__ import annotations

import numpy as np
from numpy.typing import ArrayLike

from app.measures.fourfold import Floats


def risk_with(hazard_ratio: ArrayLike, comparator_risk: ArrayLike) -> Floats:
    """Risk in the intervention arm by a time: 1 - (1 - comparator risk)^HR.

    Supposes that the ratio of the hazards is the same at all times up to that one.

    Parameters
    ----------
    hazard_ratio : array of float
        Ratio for the event, intervention over comparator [0 to inf]. For being free of it, give the inverse.
    comparator_risk : array of float
        Risk of the comparator by that time [0 to 1].

    Returns
    -------
    array of float
        Risk [0 to 1]; at a comparator risk of 0 or 1 the same.

    References
    ----------
    altman_andersen_1999.
    """
    hr, risk = np.asarray(hazard_ratio, dtype=np.float64), np.asarray(comparator_risk, dtype=np.float64)
    with np.errstate(divide="ignore", invalid="ignore"):
        found = -np.expm1(hr * np.log1p(-risk))
    return np.asarray(np.where(risk >= 1.0, 1.0, np.where(risk <= 0.0, 0.0, found)))


def risk_difference_at(hazard_ratio: ArrayLike, comparator_risk: ArrayLike) -> Floats:
    """Risk difference at the time, intervention minus comparator: S - S^HR with S = 1 - comparator risk.

    Limits of the hazard ratio give the limits of the difference, the comparator's risk taken as known.

    Returns
    -------
    array of float
        Difference [-1 to 1]; 0 at a comparator risk of 0 or 1.

    References
    ----------
    altman_andersen_1999.
    """
    hr, risk = np.asarray(hazard_ratio, dtype=np.float64), np.asarray(comparator_risk, dtype=np.float64)
    with np.errstate(divide="ignore", invalid="ignore"):
        # S (1 - S^(HR - 1)): nothing cancels for ratios near 1.
        found = -(1.0 - risk) * np.expm1((hr - 1.0) * np.log1p(-risk))
    return np.asarray(np.where((risk <= 0.0) | (risk >= 1.0), 0.0, found))
