"""Exact conditional inference: the hypergeometric distribution of one cell, both margins fixed."""

from __future__ import annotations

from collections.abc import Callable, Iterable
from dataclasses import dataclass
from functools import lru_cache

import numpy as np

from app.measures.fourfold import Flags, Floats, Fourfold
from app.measures.interval import BLOCK
from app.measures.likelihood import deviance, stirling_rest

_TIE = 1e-7  # probabilities within this relative distance of the observed one count as equal
_NEGLIGIBLE = 1e-15
_CELLS = 131_072  # cells of their tails at a time


def _log_cells(events: Floats, n1: Floats, m: Floats, n2: Floats) -> Floats:
    """The part of ln P that the four cells carry; what only the margins carry is `_log_margins`.

    Each binomial factor is written by its deviance and the remainder of Stirling's formula, so that
    nothing cancels however large the totals are.
    """
    total = n1 + n2
    rest = total - m
    # The four cells differ from their expectation by the same amount, an exact integer over N.
    gap = (events * total - n1 * m) / total
    cells = np.stack([events, n1 - events, m - events, n2 - m + events])
    expected = np.stack([n1 * m, n1 * rest, n2 * m, n2 * rest]) / total
    filled = np.where(cells > 0.0, cells, 1.0 / (2.0 * np.pi))
    terms = (
        stirling_rest(cells) + deviance(cells, expected, np.stack([gap, -gap, -gap, gap])) + 0.5 * np.log(2.0 * np.pi * filled)
    )
    return np.asarray(-terms.sum(axis=0))


def _log_margins(n1: Floats, m: Floats, n2: Floats) -> Floats:
    total = n1 + n2
    margins = np.stack([n1, n2, m, total - m])
    terms = (stirling_rest(margins) + 0.5 * np.log(margins)).sum(axis=0)
    return np.asarray(terms - stirling_rest(total) - 0.5 * np.log(total) + 1.5 * np.log(2.0 * np.pi))


def log_probability(events: Floats, n1: Floats, m: Floats, n2: Floats) -> Floats:
    """Natural log of the hypergeometric probability of `events` in the first arm, `m` in both.

    0 < m < n1 + n2 is assumed.

    References
    ----------
    loader_2000.
    """
    return _log_cells(events, n1, m, n2) + _log_margins(n1, m, n2)


def _tail_ratio(events: Floats, n1: Floats, m: Floats, n2: Floats, direction: Floats) -> Floats:
    """Sum of probabilities from `events` outward (direction +1 or -1), over that of `events` itself.

    All tables advance together, many cells at a time, by the ratio of neighbouring probabilities, until
    every further term is negligible against its own sum.
    """
    # Going down is going up with the people of the first arm who have no event counted.
    up = direction > 0
    x = np.where(up, events, n1 - events)
    m = np.where(up, m, n1 + n2 - m)
    total = np.ones_like(x)
    term = np.ones_like(x)
    rows = np.arange(x.size)
    while rows.size:
        reach = max(4, min(96, _CELLS // rows.size))
        cells = x[:, None] + np.arange(float(reach))
        terms = (n1[:, None] - cells) * (m[:, None] - cells)
        cells += 1.0
        terms /= cells * ((n2 - m)[:, None] + cells)
        terms[:, 0] *= term
        # At the last possible cell a factor is exactly 0, and the product stays so beyond it.
        np.cumprod(terms, axis=1, out=terms)
        total[rows] += terms.sum(axis=1)
        going = terms[:, -1] > _NEGLIGIBLE * total[rows]
        rows = rows[going]
        x, term, n1, m, n2 = (v[going] for v in (x + reach, terms[:, -1], n1, m, n2))
    return total


def _far_boundary(start: Floats, end: Floats, level: Floats, n1: Floats, m: Floats, n2: Floats) -> Floats:
    """First cell from `start` (the mode) to `end` whose `_log_cells` is at most `level`.

    Between the two the probabilities fall, so bisection finds it; nan where none does.
    """
    inside, outside = start.copy(), end.copy()
    found = _log_cells(end, n1, m, n2) <= level
    while (wide := np.abs(outside - inside) > 1.0).any():
        middle = np.floor(0.5 * (inside + outside))
        low = _log_cells(middle, n1, m, n2) <= level
        # The start itself may be as probable as the level, so a closed gap is left as it is.
        inside, outside = np.where(wide & ~low, middle, inside), np.where(wide & low, middle, outside)
    return np.where(found, outside, np.nan)


@dataclass(frozen=True, slots=True)
class _Parts:
    """What the two-sided p values are made of, one row a table with both margins in use.

    `rows` marks those tables; `log_point` is ln P(X = x); the others are sums over that point: `near`
    the tail from x away from the mode, `far` the cells beyond the mode that are as probable or less,
    `tied` those of both that are as probable, x itself apart.
    """

    rows: Flags
    log_point: Floats
    near: Floats
    far: Floats
    tied: Floats


def _parts(a: Floats, n1: Floats, c: Floats, n2: Floats) -> _Parts:
    m, total = a + c, n1 + n2
    rows = (m > 0.0) & (m < total)
    a, n1, m, n2 = a[rows], n1[rows], m[rows], n2[rows]
    lowest, highest = np.maximum(0.0, m - n2), np.minimum(n1, m)
    mode = np.clip(np.floor((n1 + 1.0) * (m + 1.0) / (n1 + n2 + 2.0)), lowest, highest)
    cells_point = _log_cells(a, n1, m, n2)
    log_point = cells_point + _log_margins(n1, m, n2)
    upper = a > mode
    near = _tail_ratio(a, n1, m, n2, np.where(upper, 1.0, -1.0))
    level = cells_point + np.log1p(_TIE)
    boundary = _far_boundary(mode, np.where(upper, lowest, highest), level, n1, m, n2)
    # A mode no more probable than the observed cell is itself where the other tail begins.
    boundary = np.where((mode != a) & (_log_cells(mode, n1, m, n2) <= level), mode, boundary)
    boundary = np.where(boundary == a, np.nan, boundary)  # at the end of its range the observed cell has no far side
    far, tied = np.zeros_like(a), _tied_neighbour(a, cells_point, lowest, highest, (n1, m, n2), upper)
    there = ~np.isnan(boundary)
    if there.any():
        cells = boundary[there], n1[there], m[there], n2[there]
        relative = np.exp(_log_cells(*cells) - cells_point[there])
        far[there] = relative * _tail_ratio(*cells, np.where(upper[there], -1.0, 1.0))
        tied[there] += np.where(relative > 1.0 - _TIE, relative, 0.0)
    return _Parts(rows, log_point, near, far, tied)


def _tied_neighbour(
    a: Floats, cells_point: Floats, lowest: Floats, highest: Floats, margins: tuple[Floats, Floats, Floats], upper: Flags
) -> Floats:
    """Of two equal modes the other one, where it lies in the near tail: its probability over that of the observed cell."""
    beside = np.clip(a + np.where(upper, 1.0, -1.0), lowest, highest)
    relative = np.exp(_log_cells(beside, *margins) - cells_point)
    return np.where((beside != a) & (np.abs(relative - 1.0) < _TIE), relative, 0.0)


def _log_p(table: Fourfold, combine: Callable[[_Parts], Floats]) -> Floats:
    """Ln p where `combine` gives p over P(X = x). With an empty margin one table is possible, of probability 1."""
    zero, one = np.zeros(1), np.ones(1)
    only = np.minimum(np.log(combine(_Parts(zero > 0.0, zero, one, zero, zero))), 0.0)
    log_p = np.full(table.events_intervention.size, only[0])
    for first, parts in _blocks(table):
        log_p[first : first + BLOCK][parts.rows] = np.minimum(parts.log_point + np.log(combine(parts)), 0.0)
    return log_p.reshape(table.shape)


def _blocks(table: Fourfold) -> Iterable[tuple[int, _Parts]]:
    """The parts of a table's blocks; those of the last small array are kept, for the next rule to use."""
    if table.events_intervention.size <= BLOCK:
        return ((0, _kept_parts(table)),)
    cells = [np.ravel(x) for x in table.floats()]
    blocks = ((first, tuple(x[first : first + BLOCK] for x in cells)) for first in range(0, cells[0].size, BLOCK))
    return ((first, _parts(*block)) for first, block in blocks)


@lru_cache(maxsize=1)
def _kept_parts(table: Fourfold) -> _Parts:
    return _parts(*(np.ravel(x) for x in table.floats()))


def _smaller_tail(parts: _Parts) -> Floats:
    """The smaller of both tails, the observed cell in each, over its probability."""
    with np.errstate(over="ignore", divide="ignore"):
        other = np.exp(-parts.log_point) + 1.0 - parts.near
    return np.minimum(parts.near, other)


def _irwin(parts: _Parts) -> Floats:
    return parts.near + parts.far


def _double(parts: _Parts) -> Floats:
    return 2.0 * _smaller_tail(parts)


def _midp_double(parts: _Parts) -> Floats:
    return 2.0 * (_smaller_tail(parts) - 0.5)


def _irwin_half_observed(parts: _Parts) -> Floats:
    return parts.near + parts.far - 0.5


def _irwin_half_ties(parts: _Parts) -> Floats:
    return parts.near + parts.far - 0.5 * (1.0 + parts.tied)


def log_fisher_irwin(table: Fourfold) -> Floats:
    """Fisher's exact test, two-sided by Irwin's rule: the sum over tables as probable or less. The natural log of p.

    Returns
    -------
    array of float
        ln p [at most 0], shape of the table; 0 where nobody or everybody has the event.

    Notes
    -----
    Tables whose probability lies within a relative 1e-7 of the observed one count as ties.

    References
    ----------
    fisher_1935; irwin_1935.
    """
    return _log_p(table, _irwin)


def log_fisher_double(table: Fourfold) -> Floats:
    """Natural log of Fisher's exact p, two-sided as twice the smaller tail, at most 1.

    References
    ----------
    fisher_1935; agresti_1992.
    """
    return _log_p(table, _double)


def log_fisher_midp_double(table: Fourfold) -> Floats:
    """Natural log of twice the smaller tail with half weight on the observed table, at most 1.

    References
    ----------
    lancaster_1961; agresti_1992.
    """
    return _log_p(table, _midp_double)


def log_fisher_midp_irwin_halfobs(table: Fourfold) -> Floats:
    """Natural log of Irwin's sum with half weight on the observed table.

    References
    ----------
    lancaster_1961; agresti_1992.
    """
    return _log_p(table, _irwin_half_observed)


def log_fisher_midp_irwin_halfties(table: Fourfold) -> Floats:
    """Natural log of Irwin's sum with half weight on the observed table and on every one as probable.

    References
    ----------
    lancaster_1961; agresti_1992.
    """
    return _log_p(table, _irwin_half_ties)
