"""From what is printed back to what it came from: interval to standard error to p, p to interval."""

from __future__ import annotations

from collections.abc import Mapping
from typing import Literal, NamedTuple

import numpy as np
from numpy.typing import ArrayLike
from scipy import special

from app.measures.fourfold import Floats
from app.measures.interval import Interval, normal_quantile

Scale = Literal["difference", "ratio"]

ALTMAN_BLAND_MULTIPLIERS: Mapping[float, float] = {0.90: 1.65, 0.95: 1.96, 0.99: 2.57}
"""Multipliers as printed in altman_bland_2011_p and altman_bland_2011_interval."""


class BackCalculated(NamedTuple):
    """Size of z, standard error on the scale of calculation, and p."""

    z: Floats
    standard_error: Floats
    p: Floats


def _on_scale(value: ArrayLike, scale: Scale) -> Floats:
    array = np.asarray(value, dtype=np.float64)
    with np.errstate(divide="ignore"):
        return np.log(array) if scale == "ratio" else array


def p_of_z(z: float) -> float:
    """Two-sided p of a standard normal deviate."""
    return float(2.0 * special.ndtr(-abs(z)))


def z_of_p(p: float) -> float:
    """Size of the standard normal deviate whose two-sided p it is; inf for 0."""
    return float(-special.ndtri(p / 2.0))


def standard_error(low: ArrayLike, high: ArrayLike, scale: Scale, confidence_level: float = 0.95) -> Floats:
    """Standard error behind an interval that is symmetric on its scale: width / (2 z).

    Parameters
    ----------
    low, high : array of float
        Printed limits [ratios above 0].
    scale : "difference" or "ratio"
        Ratios are taken in natural logarithms.
    confidence_level : float
        Two-sided level; a one-sided limit at 0.975 has the two-sided level 0.95.

    References
    ----------
    altman_bland_2011_p.
    """
    return np.asarray((_on_scale(high, scale) - _on_scale(low, scale)) / (2.0 * normal_quantile(confidence_level)))


def p_from_interval(
    estimate: ArrayLike, low: ArrayLike, high: ArrayLike, scale: Scale, confidence_level: float = 0.95, *, sides: int = 2
) -> BackCalculated:
    """P behind an estimate and its interval, by exact normal quantiles; with `sides` 1 that of the side seen.

    References
    ----------
    altman_bland_2011_p.
    """
    error = standard_error(low, high, scale, confidence_level)
    with np.errstate(divide="ignore", invalid="ignore"):
        z = np.abs(_on_scale(estimate, scale)) / error
    return BackCalculated(np.asarray(z), error, np.asarray(sides * special.ndtr(-z)))


def interval_from_p(
    estimate: ArrayLike, p: ArrayLike, scale: Scale, confidence_level: float = 0.95, *, sides: int = 2
) -> tuple[Interval, BackCalculated]:
    """Interval behind an estimate and its p, by exact normal quantiles; with `sides` 1 the p is that of one side.

    Edge cases
    ----------
    An estimate of no effect, or p of 1: the standard error cannot be had (nan).

    References
    ----------
    altman_bland_2011_interval.
    """
    p = np.asarray(p, dtype=np.float64)
    z = np.asarray(-special.ndtri(p / sides))
    return _interval_about(estimate, z, p, scale, normal_quantile(confidence_level))


def _interval_about(
    estimate: ArrayLike, z: Floats, p: Floats, scale: Scale, multiplier: float
) -> tuple[Interval, BackCalculated]:
    center = _on_scale(estimate, scale)
    with np.errstate(divide="ignore", invalid="ignore"):
        error = np.where(z > 0.0, np.abs(center) / z, np.nan)
    low, high = center - multiplier * error, center + multiplier * error
    if scale == "ratio":
        with np.errstate(over="ignore"):
            low, high = np.exp(low), np.exp(high)
    return Interval(low, high), BackCalculated(z, np.asarray(error), p)


def altman_bland_p_from_interval(
    estimate: ArrayLike, low: ArrayLike, high: ArrayLike, scale: Scale, confidence_level: float = 0.95
) -> BackCalculated:
    """The same by the printed short cut: fixed multipliers and p = exp(-0.717 z - 0.416 z^2). For checking print.

    References
    ----------
    altman_bland_2011_p.
    """
    multiplier = _multiplier(confidence_level)
    error = np.asarray((_on_scale(high, scale) - _on_scale(low, scale)) / (2.0 * multiplier))
    z = np.asarray(np.abs(_on_scale(estimate, scale)) / error)
    return BackCalculated(z, error, np.exp(-0.717 * z - 0.416 * z * z))


def altman_bland_interval_from_p(
    estimate: ArrayLike, p: ArrayLike, scale: Scale, confidence_level: float = 0.95
) -> tuple[Interval, BackCalculated]:
    """The same by the printed short cut: z = -0.862 + sqrt(0.743 - 2.404 ln p). For checking print.

    References
    ----------
    altman_bland_2011_interval.
    """
    p = np.asarray(p, dtype=np.float64)
    z = np.asarray(-0.862 + np.sqrt(0.743 - 2.404 * np.log(p)))
    return _interval_about(estimate, z, p, scale, _multiplier(confidence_level))


def _multiplier(confidence_level: float) -> float:
    for level, multiplier in ALTMAN_BLAND_MULTIPLIERS.items():
        if abs(level - confidence_level) < 1e-9:
            return multiplier
    raise ValueError(f"the printed short cut has multipliers for {sorted(ALTMAN_BLAND_MULTIPLIERS)} only")


class Interaction(NamedTuple):
    """Difference of two estimates on their scale, its standard error, z, p, and the contrast with its interval."""

    difference: Floats
    standard_error: Floats
    z: Floats
    p: Floats
    contrast: Floats
    interval: Interval


def interaction(
    first: tuple[ArrayLike, ArrayLike, ArrayLike],
    second: tuple[ArrayLike, ArrayLike, ArrayLike],
    scale: Scale,
    confidence_level: float = 0.95,
) -> Interaction:
    """Test whether two independent estimates differ: (estimate, low, high) of each.

    Never judged by whether their intervals overlap, nor by "significant here, not there".

    Returns
    -------
    Interaction
        The contrast is a ratio of ratios or a difference of differences, first over second.

    References
    ----------
    altman_bland_2003.
    """
    errors = [standard_error(low, high, scale, confidence_level) for _, low, high in (first, second)]
    difference = _on_scale(first[0], scale) - _on_scale(second[0], scale)
    error = np.sqrt(errors[0] ** 2 + errors[1] ** 2)
    with np.errstate(divide="ignore", invalid="ignore"):
        z = difference / error  # nan where both intervals are too narrow for a float
    half = normal_quantile(confidence_level) * error
    ends = difference, difference - half, difference + half
    with np.errstate(over="ignore"):
        contrast, low, high = (np.exp(end) for end in ends) if scale == "ratio" else ends
    p = np.asarray(2.0 * special.ndtr(-np.abs(z)))
    return Interaction(difference, error, z, p, np.asarray(contrast), Interval(np.asarray(low), np.asarray(high)))
