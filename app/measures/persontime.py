"""Events over person-time, and intervals for one rate. Never a risk."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike
from scipy import special

from app.measures.fourfold import Counts, Floats, whole_numbers
from app.measures.interval import Interval, normal_quantile
from app.measures.roots import root_in_bracket


@dataclass(frozen=True, slots=True, eq=False)
class PersonTime:
    """Events and person-time of two arms, broadcast to one shape.

    Parameters
    ----------
    events_intervention, events_comparator : array of int
        Events, which one person may have several of [0 to 1e9].
    time_intervention, time_comparator : array of float
        Person-time at risk, one unit for both arms [above 0].

    Raises
    ------
    TypeError, ValueError
        Events are not whole numbers from 0, or person-time is not finite and above 0.
    """

    events_intervention: Counts
    time_intervention: Floats
    events_comparator: Counts
    time_comparator: Floats

    def __init__(
        self,
        events_intervention: ArrayLike,
        time_intervention: ArrayLike,
        events_comparator: ArrayLike,
        time_comparator: ArrayLike,
    ) -> None:
        arrays = np.broadcast_arrays(
            whole_numbers("events_intervention", events_intervention),
            np.asarray(time_intervention, dtype=np.float64),
            whole_numbers("events_comparator", events_comparator),
            np.asarray(time_comparator, dtype=np.float64),
        )
        names = ("events_intervention", "time_intervention", "events_comparator", "time_comparator")
        for name, array in zip(names, arrays, strict=True):
            if name.startswith("time") and not bool(np.all(np.isfinite(array) & (array > 0.0))):
                raise ValueError(f"{name} must be finite and above 0")
            object.__setattr__(self, name, array)

    @property
    def shape(self) -> tuple[int, ...]:
        """Shape shared by the four arrays."""
        return self.events_intervention.shape

    def floats(self) -> tuple[Floats, Floats, Floats, Floats]:
        """Events and time of both arms as floats, for formulas."""
        e1, e2 = (np.asarray(e, dtype=np.float64) for e in (self.events_intervention, self.events_comparator))
        return e1, self.time_intervention, e2, self.time_comparator

    def swapped(self) -> PersonTime:
        """The same with the arms exchanged."""
        return PersonTime(self.events_comparator, self.time_comparator, self.events_intervention, self.time_intervention)


def _tail(confidence_level: float) -> float:
    normal_quantile(confidence_level)  # refuses a level outside 0 to 1
    return (1.0 - confidence_level) / 2.0


def garwood_exact(events: Floats, time: Floats, confidence_level: float = 0.95) -> Interval:
    """Exact Poisson interval of a rate.

    Edge cases
    ----------
    No events: low is 0 and high -ln(alpha/2) / time.

    References
    ----------
    garwood_1936.
    """
    tail = _tail(confidence_level)
    low = np.where(events > 0, special.gammaincinv(np.maximum(events, 1.0), tail), 0.0)
    return Interval(low / time, special.gammainccinv(events + 1.0, tail) / time)


def rate_score(events: Floats, time: Floats, confidence_level: float = 0.95) -> Interval:
    """Score interval of a rate: (e + z^2/2 -+ z sqrt(e + z^2/4)) / time.

    Edge cases
    ----------
    No events: low is exactly 0.

    References
    ----------
    rothman_2008.
    """
    z = normal_quantile(confidence_level)
    high = events + z * z / 2.0 + z * np.sqrt(events + z * z / 4.0)
    return Interval(events * events / high / time, high / time)


def rate_log_wald(events: Floats, time: Floats, confidence_level: float = 0.95) -> Interval:
    """Log interval of a rate: rate times exp(-+ z / sqrt(e)).

    Edge cases
    ----------
    No events: undefined (nan).

    References
    ----------
    rothman_2008.
    """
    with np.errstate(divide="ignore", invalid="ignore", over="ignore"):
        factor = np.where(events > 0, np.exp(normal_quantile(confidence_level) / np.sqrt(events)), np.nan)
    return Interval(events / time / factor, events / time * factor)


def _mid_p_equation(log_mean: Floats, terms: tuple[Floats, ...]) -> tuple[Floats, Floats]:
    """Ln of P(X > e) + P(X = e)/2 at the mean, less the tail's; and its slope in ln mean."""
    events, log_tail = terms
    mean = np.exp(log_mean)
    chance = 0.5 * (special.gammainc(np.maximum(events, 1e-300), mean) + special.gammainc(events + 1.0, mean))
    point = np.exp(special.xlogy(events, mean) - mean - special.gammaln(events + 1.0))
    with np.errstate(divide="ignore", invalid="ignore"):
        return np.log(chance) - log_tail, 0.5 * point * (events + mean) / chance


def _mid_p_upper_equation(minus_log_mean: Floats, terms: tuple[Floats, ...]) -> tuple[Floats, Floats]:
    """The same for P(X < e) + P(X = e)/2, increasing in minus ln mean."""
    events, log_tail = terms
    mean = np.exp(-minus_log_mean)
    below = np.where(events > 0, special.gammaincc(np.maximum(events, 1.0), mean), 0.0)
    chance = 0.5 * (below + special.gammaincc(events + 1.0, mean))
    point = np.exp(special.xlogy(events, mean) - mean - special.gammaln(events + 1.0))
    with np.errstate(divide="ignore", invalid="ignore"):
        return np.log(chance) - log_tail, 0.5 * point * (events + mean) / chance


def rate_mid_p(events: Floats, time: Floats, confidence_level: float = 0.95) -> Interval:
    """Mid-P Poisson interval of a rate: the exact one with half weight on the observed count.

    Edge cases
    ----------
    No events: low is 0 and high -ln(alpha) / time.

    References
    ----------
    berry_armitage_1995.
    """
    e, t = np.broadcast_arrays(np.asarray(events, dtype=np.float64), np.asarray(time, dtype=np.float64))
    flat = np.ravel(e)
    tail = _tail(confidence_level)
    low = np.zeros_like(flat)
    some = flat > 0
    logs = np.full_like(flat, np.log(tail))
    if some.any():
        x = flat[some]
        start = np.log(special.gammaincinv(x, tail))
        low[some] = np.exp(root_in_bracket(_mid_p_equation, start, start, np.log(x) + 1.0, (x, logs[some])))
    start = -np.log(special.gammainccinv(flat + 1.0, tail))
    end = -np.log(np.maximum(flat, 0.5)) + 1.0
    high = np.exp(-root_in_bracket(_mid_p_upper_equation, start, start, end, (flat, logs)))
    return Interval(low.reshape(e.shape) / t, high.reshape(e.shape) / t)
