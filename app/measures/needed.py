"""Number needed to treat: the reciprocal of a risk difference, with a direction."""

from __future__ import annotations

from dataclasses import dataclass
from fractions import Fraction
from typing import Literal

import numpy as np

from app.measures.fourfold import Floats
from app.measures.interval import Interval

Direction = Literal["benefit", "harm", "none"]
Rule = Literal["up", "down"]


@dataclass(frozen=True, slots=True)
class Segment:
    """One side of an interval for the number needed to treat, from `low` to `high` (inf allowed)."""

    direction: Direction
    low: float
    high: float


@dataclass(frozen=True, slots=True)
class RoundedNeeded:
    """A number needed to treat as it is printed: `value`, rounded by `rule`, with `decimals`."""

    value: Fraction
    rule: Rule
    decimals: int


def number_needed(difference: Floats) -> Floats:
    """Size of the reciprocal of a risk difference [1 to inf]; inf where the difference is 0."""
    with np.errstate(divide="ignore"):
        return np.asarray(1.0 / np.abs(difference))


def direction_of(difference: float | Fraction, event_is_unwanted: bool) -> Direction:
    """Whether a risk difference is to benefit or to harm, given whether the event is unwanted."""
    if difference == 0:
        return "none"
    return "benefit" if (difference < 0) == event_is_unwanted else "harm"


def rounded_needed(exact: Fraction, direction: Direction, *, limit: Literal["low", "high"] | None = None) -> RoundedNeeded:
    """Round a number needed to treat by its direction, in exact fractions.

    To benefit rounds up and to harm rounds down, so that neither is flattered; limits round outward.
    Below 10 one decimal is kept.

    Parameters
    ----------
    exact : Fraction
        The unrounded number [at least 1].
    direction : "benefit", "harm" or "none"
    limit : "low", "high" or None
        Which end of an interval it is, or None for the estimate.

    Notes
    -----
    Floating point would turn 1/(0.25 - 0.20) into 21; fractions do not.
    """
    if limit is None:
        rule: Rule = "down" if direction == "harm" else "up"
    else:
        rule = "down" if limit == "low" else "up"
    decimals = 1 if exact < 10 else 0
    scaled = exact * 10**decimals
    whole = scaled.numerator // scaled.denominator
    if rule == "up" and whole != scaled:
        whole += 1
    return RoundedNeeded(Fraction(whole, 10**decimals), rule, decimals)


def needed_segments(interval: Interval, event_is_unwanted: bool) -> tuple[Segment, ...]:
    """Invert the interval of one risk difference into segments of the number needed to treat.

    An interval across no difference becomes two segments that both run to infinity, never one range
    between two finite ends. The segment to benefit comes first.

    Parameters
    ----------
    interval : Interval
        Limits of one risk difference (0-d).

    Returns
    -------
    tuple of Segment
        None where a limit is undefined or the interval has no width at 0; else one or two.

    References
    ----------
    altman_1998; bender_2001.
    """
    low, high = float(interval.low), float(interval.high)
    if np.isnan(low) or np.isnan(high):
        return ()
    segments = []
    for near, far, sign in ((max(-high, 0.0), -low, -1.0), (max(low, 0.0), high, 1.0)):
        if far > 0.0:
            best = 1.0 / far
            worst = 1.0 / near if near > 0.0 else float("inf")
            segments.append(Segment(direction_of(sign, event_is_unwanted), best, worst))
    return tuple(sorted(segments, key=lambda segment: segment.direction))
