"""What all interval methods share: the pair of limits and the normal quantile of a level."""

from __future__ import annotations

from collections.abc import Callable
from functools import wraps
from typing import NamedTuple

import numpy as np
from scipy import special

from app.measures.fourfold import Floats, Fourfold

BLOCK = 8192
"""Tables computed at a time: their temporaries stay in the second-level cache."""


class Interval(NamedTuple):
    """Lower and upper limit, arrays of one shape, as the formula gives them (never clipped)."""

    low: Floats
    high: Floats


def single(low: float, high: float) -> Interval:
    """One pair of limits."""
    return Interval(np.asarray(low), np.asarray(high))


def blockwise(method: Callable[[Fourfold, float], Interval]) -> Callable[[Fourfold, float], Interval]:
    """The same method, computed on blocks whose temporaries stay in the processor's cache."""

    @wraps(method)
    def in_blocks(table: Fourfold, confidence_level: float = 0.95) -> Interval:
        if table.events_intervention.size <= BLOCK:
            return method(table, confidence_level)
        ends = [method(block, confidence_level) for block in table.blocks(BLOCK)]
        low, high = (np.concatenate([end[i] for end in ends]).reshape(table.shape) for i in (0, 1))
        return Interval(low, high)

    return in_blocks


def blockwise_p(log_p: Callable[[Fourfold], Floats]) -> Callable[[Fourfold], Floats]:
    """The same test, computed on such blocks."""

    @wraps(log_p)
    def in_blocks(table: Fourfold) -> Floats:
        if table.events_intervention.size <= BLOCK:
            return log_p(table)
        return np.concatenate([log_p(block) for block in table.blocks(BLOCK)]).reshape(table.shape)

    return in_blocks


def normal_quantile(confidence_level: float) -> float:
    """Two-sided standard normal quantile of a confidence level (0.95 gives 1.959963984540054).

    Raises
    ------
    ValueError
        The level is not strictly between 0 and 1.
    """
    if not 0.0 < confidence_level < 1.0:
        raise ValueError("confidence_level must lie strictly between 0 and 1")
    return float(-special.ndtri((1.0 - confidence_level) / 2.0))
