"""Exact conditional limits of the odds ratio: the non-central hypergeometric given both margins.

Each table's support is cut to a window about the observed cell, wide enough that what lies outside is
below 1e-17 at either limit. Its log weights are cumulative log ratios of neighbouring cells, normalised
by their own sum: no gamma function. The limits are roots in ln OR by Newton's method on the log of the
tail, whose slope is E[X | tail] - E[X].
"""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass

import numpy as np

from app.measures.fourfold import Counts, Floats, Fourfold
from app.measures.interval import Interval, normal_quantile
from app.measures.roots import root_in_bracket

_CELLS = 1_000_000  # weights held at once
_WIDEST = 60.0  # ln OR is looked for within this distance


_Cells = tuple[Floats, Floats, Floats, Floats]


@dataclass(frozen=True, slots=True)
class _Window:
    """Weights of a batch of tables, one row a table: cells less the observed one, and their log weights."""

    offset: Floats
    log_weight: Floats


def _windows(a: Floats, n1: Floats, m: Floats, n2: Floats, z: float) -> Iterator[tuple[Counts, _Window]]:
    """Batches of tables of like width, with the rows they are."""
    lowest, highest = np.maximum(0.0, m - n2), np.minimum(n1, m)
    spread = np.sqrt(1.0 / (1.0 / (a + 0.5) + 1.0 / (n1 - a + 0.5) + 1.0 / (m - a + 0.5) + 1.0 / (n2 - m + a + 0.5)))
    reach = np.ceil((9.0 + 2.0 * z) * spread + 8.0 * z * z / 2.0 + 40.0)
    first, last = np.maximum(lowest, a - reach), np.minimum(highest, a + reach)
    width = last - first + 1.0
    order = np.argsort(width, kind="stable")
    start = 0
    while start < order.size:
        stop = min(order.size, start + max(1, int(_CELLS / width[order[min(order.size - 1, start + 2000)]])))
        rows = order[start:stop]
        cells = first[rows, None] + np.arange(int(np.max(width[rows])))
        inside = cells < last[rows, None]
        with np.errstate(divide="ignore", invalid="ignore"):
            step = np.log((n1[rows, None] - cells) * (m[rows, None] - cells)) - np.log(
                (cells + 1.0) * (n2[rows, None] - m[rows, None] + cells + 1.0)
            )
        step = np.where(inside, step, -np.inf)
        weight = np.concatenate([np.zeros((rows.size, 1)), np.cumsum(step, axis=1)[:, :-1]], axis=1)
        at = (a[rows] - first[rows]).astype(np.int64)
        weight -= weight[np.arange(rows.size), at][:, None]
        yield rows, _Window(cells - a[rows, None], weight)
        start = stop


def _solve(window: _Window, above: Floats, target: float, start: Floats) -> Floats:
    """Ln OR at which the weighted share of the cells in `above` (0, 1/2 or 1 each) is `target`."""
    live = np.arange(start.size)

    def equation(log_odds: Floats, terms: tuple[Floats, ...]) -> tuple[Floats, Floats]:
        rows = terms[0].astype(np.int64)
        exponent = window.log_weight[rows] + window.offset[rows] * log_odds[:, None]
        weights = np.exp(exponent - exponent.max(axis=1, keepdims=True))
        everything = weights.sum(axis=1)
        mean = (weights * window.offset[rows]).sum(axis=1) / everything
        weights *= above[rows]
        tail = weights.sum(axis=1)
        with np.errstate(divide="ignore", invalid="ignore"):
            slope = (weights * window.offset[rows]).sum(axis=1) / tail - mean
            return np.log(tail / everything) - np.log(target), slope

    low, high = start - _WIDEST, start + _WIDEST
    return root_in_bracket(equation, start, low, high, (live.astype(np.float64),))


def _limits(table: Fourfold, confidence_level: float, observed_weight: float) -> Interval:
    """Both limits; the upper one is the lower one of the arms exchanged, inverted."""
    z = normal_quantile(confidence_level)
    target = (1.0 - confidence_level) / 2.0
    a, n1, c, n2 = (np.ravel(x) for x in table.floats())
    ends = []
    for events, first, others, second in ((a, n1, c, n2), (c, n2, a, n1)):
        m = events + others
        lowest = np.maximum(0.0, m - second)
        limit = np.zeros_like(events)
        rows = events > lowest
        cells = events[rows], first[rows], m[rows], second[rows]
        logs = np.empty(cells[0].size)
        for batch, window in _windows(*cells, z):
            above = np.where(window.offset > 0.0, 1.0, np.where(window.offset == 0.0, observed_weight, 0.0))
            logs[batch] = _solve(window, above, target, _guess(*_rows(cells, batch), z))
        limit[rows] = np.exp(logs)
        ends.append(limit.reshape(table.shape))
    with np.errstate(divide="ignore"):
        return Interval(ends[0], 1.0 / ends[1])


def _rows(cells: _Cells, rows: Counts) -> _Cells:
    a, n1, m, n2 = cells
    return a[rows], n1[rows], m[rows], n2[rows]


def _guess(a: Floats, n1: Floats, m: Floats, n2: Floats, z: float) -> Floats:
    """A first guess of the lower limit of ln OR: the logit one with half an event moved."""
    cells = a - 0.5, n1 - a + 1.0, m - a + 1.0, n2 - m + a + 0.5
    center = np.log(cells[0]) - np.log(cells[1]) - np.log(cells[2]) + np.log(cells[3])
    return center - z * np.sqrt(sum(1.0 / cell for cell in cells))


def fisher_exact_cond(table: Fourfold, confidence_level: float = 0.95) -> Interval:
    """Exact conditional interval of the odds ratio: each tail at most half of 1 - level.

    Never below its level, often well above: wide. Its estimate is `conditional_estimate`, not ad/bc.

    Edge cases
    ----------
    Events of the intervention arm as few as the margins allow: low 0; as many: high inf. Nobody or
    everybody has the event: (0, inf).

    References
    ----------
    cornfield_1956; fisher_1935.
    """
    return _limits(table, confidence_level, 1.0)


def midp_exact_cond(table: Fourfold, confidence_level: float = 0.95) -> Interval:
    """Conditional interval of the odds ratio with half weight on the observed table; edges as the exact one.

    References
    ----------
    lancaster_1961; berry_armitage_1995.
    """
    return _limits(table, confidence_level, 0.5)


def conditional_estimate(table: Fourfold) -> Floats:
    """Conditional maximum likelihood estimate of the odds ratio: the one under which E[X] is observed.

    Edge cases
    ----------
    0 or inf at the ends of the range; nan where nobody or everybody has the event.
    """
    a, n1, c, n2 = (np.ravel(x) for x in table.floats())
    m = a + c
    lowest, highest = np.maximum(0.0, m - n2), np.minimum(n1, m)
    estimate = np.where(a > lowest, np.inf, 0.0)
    estimate[lowest == highest] = np.nan
    rows = (a > lowest) & (a < highest)
    cells = a[rows], n1[rows], m[rows], n2[rows]
    logs = np.empty(cells[0].size)
    for batch, window in _windows(*cells, 3.0):
        logs[batch] = _center(window, *_rows(cells, batch))
    estimate[rows] = np.exp(logs)
    return estimate.reshape(table.shape)


def _center(window: _Window, a: Floats, n1: Floats, m: Floats, n2: Floats) -> Floats:
    """Ln OR at which the mean of the cells less the observed one is 0."""
    start = np.log(a + 0.5) - np.log(n1 - a + 0.5) - np.log(m - a + 0.5) + np.log(n2 - m + a + 0.5)

    def equation(log_odds: Floats, terms: tuple[Floats, ...]) -> tuple[Floats, Floats]:
        rows = terms[0].astype(np.int64)
        exponent = window.log_weight[rows] + window.offset[rows] * log_odds[:, None]
        weights = np.exp(exponent - exponent.max(axis=1, keepdims=True))
        everything = weights.sum(axis=1)
        mean = (weights * window.offset[rows]).sum(axis=1) / everything
        return mean, (weights * window.offset[rows] ** 2).sum(axis=1) / everything - mean**2

    return root_in_bracket(equation, start, start - _WIDEST, start + _WIDEST, (np.arange(a.size, dtype=np.float64),))
