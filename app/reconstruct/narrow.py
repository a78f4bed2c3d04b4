"""Narrowing a row of counts by an interval or a p: both move one way along the row, so two bisections do.

Rows stand for all counts of the first arm from `low` to `high` beside fixed others. The ends found are one
count too generous on purpose; the last filter of the search is exact.
"""

from __future__ import annotations

from collections.abc import Callable
from typing import NamedTuple

import numpy as np

from app.measures.fourfold import Counts, Flags, Floats, Fourfold
from app.measures.interval import Interval
from app.reconstruct.p_prints import AnyTest, AskedP, p_of, p_window, tests
from app.reconstruct.prints import (
    SLOW,
    AnyMethod,
    Asked,
    Timed,
    interval_windows,
    levels,
    limits_of,
    methods,
    turned,
    turned_time,
)
from app.reconstruct.window import Window

FEW_ROWS = 300
"""Above so many rows the slow tests and the conditional exact limits do not narrow; they still judge what is listed."""
SLOWEST: frozenset[str] = frozenset({"fisher_exact_cond", "midp_exact_cond", "efficacy_exact_split"})
_SAMPLED, _FEW_SAMPLED = 400, 60
_LISTED = 4_000
"""So few counts are judged one by one sooner than bisected."""
_EDGE = 5
_DIP = 3  # counts over which a test may rise and fall again


class Rows(NamedTuple):
    """Rows: c of n2 in the second arm, n1 in the first, and the counts there from `low` to `high`."""

    c: Counts
    n2: Counts
    n1: Counts
    low: Counts
    high: Counts

    @property
    def size(self) -> int:
        """How many counts all rows hold."""
        return int(np.sum(np.maximum(self.high - self.low + 1, 0), dtype=np.float64))

    def where(self, keep: Flags) -> Rows:
        """Some of the rows."""
        return Rows(*(column[keep] for column in self))

    def between(self, low: Counts, high: Counts) -> Rows:
        """The same rows, each cut to its part from `low` to `high`; empty ones left out."""
        cut = Rows(self.c, self.n2, self.n1, np.maximum(self.low, low), np.minimum(self.high, high))
        return cut.where(cut.low <= cut.high)

    def tables(self, a: Counts) -> Fourfold:
        """One table of each row, with `a` events in the first arm."""
        return Fourfold(a, self.n1, self.c, self.n2)


_Judge = Callable[[Rows, Counts], Flags]


def _first(rows: Rows, reached: _Judge, start: Counts | None = None) -> Counts:
    """First count of each row, from `start`, that `reached` holds for, once true staying true; one past the end if none."""
    low, high = (rows.low if start is None else start).copy(), rows.high + 1
    while True:
        open_rows = np.flatnonzero(low < high)
        if not open_rows.size:
            return low
        middle = (low[open_rows] + high[open_rows]) // 2
        some = rows.where(open_rows)  # type: ignore[arg-type]
        yes = reached(some, middle)
        high[open_rows] = np.where(yes, middle, high[open_rows])
        low[open_rows] = np.where(yes, low[open_rows], middle + 1)


def _between(rows: Rows, reached: _Judge, passed: _Judge, room: int = 1) -> Rows:
    """The part of each row from where `reached` to before where `passed`, `room` counts more at both ends."""
    possible = reached(rows, rows.high) & ~passed(rows, rows.low)
    rows = rows.where(possible)
    if not rows.c.size:
        return rows
    start = _first(rows, reached)
    return rows.between(start - room, _first(rows, passed, np.maximum(rows.low, start - room)) + room - 1)


def _likely(rows: Rows, possible: Callable[[Rows], Flags], size: int) -> Rows:
    """Of very many rows, the stretch (by risk) in which a generous test holds, found on a sample.

    Along the rows the interval narrows steadily, so what is possible is one stretch.
    """
    if rows.c.size <= 3 * size:
        return rows
    order = np.argsort(rows.c / rows.n2, kind="stable")
    sample = np.linspace(0, order.size - 1, size).astype(np.int64)
    hits = np.flatnonzero(possible(Rows(*(column[order[sample]] for column in rows))))
    if not hits.size:
        return rows
    first, last = sample[max(hits[0] - 1, 0)], sample[min(hits[-1] + 1, size - 1)]
    return Rows(*(column[order[first : last + 1]] for column in rows))


def by_interval(question: Asked, rows: Rows, timed: Timed | None, *, seldom: bool) -> list[Rows] | None:
    """For each method, the parts of the rows whose interval may print so; None where nothing is gained."""
    windows = interval_windows(question, slips=seldom)
    if windows is None or question.interval is None:
        return None
    rising = question.swapped == question.complement
    found = []
    for method in methods(question.meant):
        if method.printed_use == "seldom" and not seldom:
            continue
        found += [
            _by_method(method, level, question, windows, rows, timed, rising=rising)
            for level in levels(method, question.interval)[:2]
        ]
    return found


def _by_method(
    method: AnyMethod,
    level: float,
    question: Asked,
    windows: tuple[Window, Window],
    rows: Rows,
    timed: Timed | None,
    *,
    rising: bool,
) -> Rows:
    ends = [Window(w.low - abs(w.low) * 1e-9, w.high + abs(w.high) * 1e-9) for w in windows]
    generous = [Window(2.0 * w.low - w.high, 2.0 * w.high - w.low) for w in windows]

    def limits(some: Rows, a: Counts) -> Interval:
        found = limits_of(method, turned(question, some.tables(a)), turned_time(question, timed), level)
        if found is None:
            raise ValueError("a method of rates needs person-time")
        return found

    def possible(some: Rows) -> Flags:
        lowest, highest = (some.low, some.high) if rising else (some.high, some.low)
        starts, stops = limits(some, lowest), limits(some, highest)
        with np.errstate(invalid="ignore"):
            reached = ~(stops.low < generous[0].low) & ~(stops.high < generous[1].low)
            return np.asarray(reached & ~(starts.low > generous[0].high) & ~(starts.high > generous[1].high))

    def above(some: Rows, a: Counts) -> Flags:
        low, high = limits(some, a)
        with np.errstate(invalid="ignore"):
            return np.asarray(~(low < ends[0].low) & ~(high < ends[1].low))

    def over(some: Rows, a: Counts) -> Flags:
        low, high = limits(some, a)
        with np.errstate(invalid="ignore"):
            return np.asarray((low > ends[0].high) | (high > ends[1].high))

    few = method.key in SLOW or rows.c.size <= 3 * _SAMPLED
    rows = _likely(rows, possible, _FEW_SAMPLED if few else _SAMPLED)
    if method.key in SLOWEST and rows.c.size > FEW_ROWS:
        return rows.where(np.zeros(rows.c.size, dtype=np.bool_))
    if method.key not in SLOW and rows.size <= _LISTED:
        return rows
    if rising:
        return _between(rows, above, over)
    return _between(rows, lambda s, a: ~over(s, a), lambda s, a: ~above(s, a))


def by_p(question: AskedP, rows: Rows, timed: Timed | None, *, seldom: bool) -> list[Rows]:
    """For each test and side of no difference, the parts of the rows whose p may print so."""
    window = p_window(question)
    window = Window(window.low * (1.0 - 1e-9), window.high * (1.0 + 1e-9))
    level = rows.c * rows.n1 // rows.n2
    sides = (rows.between(rows.low, level), True), (rows.between(level + 1, rows.high), False)
    # Near empty cells some tests turn back; those few counts are looked at in any case.
    found = [rows.between(rows.low, rows.low + _EDGE), rows.between(rows.high - _EDGE, rows.high)]
    for use in ("usual", "seldom") if seldom else ("usual",):
        for test in tests(use, timed):
            if test.key in SLOW and rows.c.size > FEW_ROWS:
                continue
            found += [_by_test(test, window, side, timed, rising=rising) for side, rising in sides]
    return found


def _by_test(test: AnyTest, window: Window, rows: Rows, timed: Timed | None, *, rising: bool) -> Rows:
    def p(some: Rows, a: Counts) -> Floats:
        with np.errstate(invalid="ignore"):
            return np.nan_to_num(p_of(test, some.tables(a), timed), nan=1.0)

    if rising:
        return _between(rows, lambda s, a: p(s, a) >= window.low, lambda s, a: p(s, a) > window.high, _DIP)
    return _between(rows, lambda s, a: p(s, a) <= window.high, lambda s, a: p(s, a) < window.low, _DIP)
