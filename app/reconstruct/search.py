"""Every table that prints so: candidates by windows, counted before they are listed, then judged.

Rows are the counts of the arm that allows fewer; for each row the effect printed leaves a short window of counts
of the other arm, by a closed formula. Small products are simply enumerated. Nothing depends on the printed
interval or p in small products; in large ones both narrow the rows further by bisection
(`app/reconstruct/narrow.py`). tests/reconstruct/test_search.py compares with full enumeration.
"""

from __future__ import annotations

from collections.abc import Iterator, Sequence
from dataclasses import dataclass, replace

import numpy as np

from app.measures.fourfold import Counts, Flags, Floats, Fourfold
from app.reconstruct.arm import Run
from app.reconstruct.narrow import Rows, by_interval, by_p
from app.reconstruct.p_prints import AskedP, p_matches
from app.reconstruct.prints import Asked, Timed, matches, take
from app.reconstruct.window import Window, exact, near, whole_unit

ENUMERATED = 60_000
"""Products of counts up to this many are enumerated without windows."""
BUDGET = 2_000_000
"""More candidates than this are counted, not listed."""
_MOST_WINDOWS = 20_000_000

Question = tuple[Asked, ...]
"""The ways of taking one claim; a table prints it if it prints any of them."""


@dataclass(frozen=True, slots=True)
class Problem:
    """What the tables must print.

    `runs` are the counts that each arm's own claims allow, None where they leave the total open. `combined` is
    a printed total of both arms, `both_events` their printed events, `equal` that the arms are of one size.
    """

    runs: tuple[tuple[Run, ...] | None, tuple[Run, ...] | None]
    questions: tuple[Question, ...] = ()
    p_values: tuple[AskedP, ...] = ()
    timed: Timed | None = None
    combined: int | None = None
    both_events: int | None = None
    equal: bool = False
    slips: bool = False

    def swapped(self) -> Problem:
        """The same problem with the arms exchanged."""
        turned = tuple(tuple(replace(a, swapped=not a.swapped) for a in q) for q in self.questions)
        timed = None if self.timed is None else Timed(self.timed.comparator, self.timed.intervention)
        return replace(self, runs=(self.runs[1], self.runs[0]), questions=turned, timed=timed)


@dataclass(frozen=True, slots=True)
class Found:
    """The tables, 1-d; `candidates` is how many were looked at or counted; `complete` False where it stopped.

    Where it stopped `tables` holds the corners of the band that the windows leave.
    """

    tables: Fourfold
    candidates: int
    complete: bool

    @property
    def count(self) -> int:
        """How many tables are listed."""
        return int(self.tables.events_intervention.size)


def empty() -> Fourfold:
    """No tables."""
    none = np.zeros(0, dtype=np.int64)
    return Fourfold(none, none, none, none)


def points(runs: Sequence[Run]) -> tuple[Counts, Counts]:
    """All (events, total) of an arm's runs."""
    lengths = np.array([run.count for run in runs], dtype=np.int64)
    first = np.array([run.first for run in runs], dtype=np.int64)
    totals = np.array([run.total for run in runs], dtype=np.int64)
    return np.repeat(first, lengths) + _steps(lengths), np.repeat(totals, lengths)


def _steps(lengths: Counts) -> Counts:
    """0, 1, 2 ... for each of the lengths, one after the other."""
    ends = np.cumsum(lengths)
    return np.arange(int(ends[-1]) if ends.size else 0, dtype=np.int64) - np.repeat(ends - lengths, lengths)


def _measure_windows(question: Asked, slips: bool) -> tuple[Window, ...]:
    """Windows of the bare measure that the printed estimate leaves; none where no estimate is printed."""
    if question.number is None:
        return ()
    if question.shown == "needed":
        window = whole_unit(question.number, question.factor)
        low, high = (abs(end) for end in window) if question.number.exact > 0 else (abs(window.high), abs(window.low))
        far = 1.0 / low if low > 0 else np.inf
        return Window(1.0 / high, far), Window(-far, -1.0 / high)
    window = (near if slips else exact)(question.number, question.factor)
    if question.sign == "opposite":
        window = window.mirrored()
    if question.shown == "reduction":
        window = Window(1.0 - window.high, 1.0 - window.low)
    elif question.shown == "increase":
        window = Window(1.0 + window.low, 1.0 + window.high)
    return (window,)


_SHIFTS: tuple[tuple[float, float], ...] = ((0.0, 0.0), (0.5, 1.0), (0.5, 0.5))
"""What methods that report an estimate of their own add to events and to people."""


def _other_risk(question: Asked, window: Window, risk: Floats, people: float) -> tuple[Floats, Floats]:
    """Risks of the first arm that, beside `risk` of the second, give the measure a value in the window."""
    low, high = (float(end) for end in window)
    if question.meant == "risk_difference":
        ends = (risk - high, risk - low) if question.swapped else (risk + low, risk + high)
    else:
        base = risk if question.meant == "risk_ratio" else risk / (1.0 - risk)
        low, high = max(low, 0.0), max(high, 0.0)
        if question.meant == "odds_ratio":  # the conditional estimate lies a little nearer to 1
            slack = 3.0 / people
            low, high = (
                float(np.exp(np.log(end) * (1.0 + sign * slack)))
                for end, sign in ((low, np.sign(1 - low)), (high, np.sign(high - 1)))
            )
        ends = (base / high, base / low) if question.swapped else (base * low, base * high)
        if question.meant == "odds_ratio":
            ends = (ends[0] / (1.0 + ends[0]), np.where(np.isinf(ends[1]), 1.0, ends[1] / (1.0 + ends[1])))
    return np.asarray(ends[0]), np.asarray(ends[1])


_Ends = tuple[Counts, Counts]


def _clip(rows: Rows, low: Floats, high: Floats) -> _Ends:
    slack = 1e-9 * rows.n1
    with np.errstate(invalid="ignore"):
        first = np.ceil(np.nan_to_num(low, nan=0.0, posinf=4e18, neginf=-4e18) - slack)
        last = np.floor(np.nan_to_num(high, nan=4e18, posinf=4e18, neginf=-4e18) + slack)
    return np.maximum(first, rows.low).astype(np.int64), np.minimum(last, rows.high).astype(np.int64)


def _question_windows(question: Asked, rows: Rows, problem: Problem) -> Iterator[_Ends]:
    """Windows of events of the first arm, one pair of arrays for each way the estimate may have come about."""
    for window in _measure_windows(question, problem.slips):
        if question.meant in ("rate_ratio", "rate_difference"):
            if problem.timed is not None:
                yield _rate_window(question, window, rows, problem.timed)
            continue
        shifts = _SHIFTS if question.meant != "risk_difference" and question.interval is not None else _SHIFTS[:1]
        yield _hull([_shifted(question, window, rows, *shift) for shift in shifts])


def _shifted(question: Asked, window: Window, rows: Rows, added: float, people: float) -> _Ends:
    with np.errstate(divide="ignore", invalid="ignore"):
        risk = (rows.c + added) / (rows.n2 + people)
        least = float(np.min(rows.n1) + np.min(rows.n2)) if rows.c.size else 1.0
        low, high = _other_risk(question, window, risk, least)
        return _clip(rows, low * (rows.n1 + people) - added, high * (rows.n1 + people) - added)


def _hull(ends: list[_Ends]) -> _Ends:
    """One window of each row over several, which overlap or nearly so; empty ones do not widen it."""
    if len(ends) == 1:
        return ends[0]
    low = np.min([np.where(first <= last, first, np.iinfo(np.int64).max) for first, last in ends], axis=0)
    high = np.max([np.where(first <= last, last, -1) for first, last in ends], axis=0)
    return low, high


def _rate_window(question: Asked, window: Window, rows: Rows, timed: Timed) -> _Ends:
    own, other = timed.intervention, timed.comparator
    rate = rows.c / other
    with np.errstate(divide="ignore", invalid="ignore"):
        if question.meant == "rate_ratio":
            ends = (rate / window.high, rate / window.low) if question.swapped else (rate * window.low, rate * window.high)
        else:
            ends = (rate - window.high, rate - window.low) if question.swapped else (rate + window.low, rate + window.high)
    return _clip(rows, ends[0] * own, ends[1] * own)


def _rows(problem: Problem, first: Sequence[Run], second: Sequence[Run]) -> Rows | None:
    """Every count of the second arm beside every run of the first that may stand with it; None if too many."""
    c, n2 = points(second)
    columns = [np.array([getattr(run, part) for run in first], dtype=np.int64) for part in ("total", "first", "last")]
    if problem.combined is None and not problem.equal:
        if c.size * len(first) > _MOST_WINDOWS:
            return None
        which = np.tile(np.arange(len(first)), c.size)
        c, n2 = np.repeat(c, len(first)), np.repeat(n2, len(first))
    else:
        wanted = n2 if problem.combined is None else problem.combined - n2
        order = np.argsort(columns[0], kind="stable")
        starts = np.searchsorted(columns[0][order], wanted, side="left")
        lengths = np.searchsorted(columns[0][order], wanted, side="right") - starts
        which = order[np.repeat(starts, lengths) + _steps(lengths)]
        c, n2 = np.repeat(c, lengths), np.repeat(n2, lengths)
        if problem.combined is not None and problem.equal:
            keep = columns[0][which] == n2
            which, c, n2 = which[keep], c[keep], n2[keep]
    n1, low, high = (column[which] for column in columns)
    if problem.both_events is not None:
        other = problem.both_events - c
        low, high = np.maximum(low, other), np.minimum(high, other)
    keep = low <= high
    return Rows(c[keep], n2[keep], n1[keep], low[keep], high[keep])


def _candidates(problem: Problem, rows: Rows) -> list[Rows]:
    """Parts of the rows that hold every table, no count twice, by the claim that leaves fewest."""
    best, fewest, narrowed = [rows], rows.size, False
    for question in problem.questions:
        parts = [rows.between(*ends) for asked in question for ends in _question_windows(asked, rows, problem)]
        if parts and sum(part.size for part in parts) < fewest:
            best, fewest = parts, sum(part.size for part in parts)
    if fewest <= ENUMERATED // 10:
        return _apart(best)
    for question in problem.questions:
        if len(question) == 1 and question[0].interval is not None:
            found = [by_interval(question[0], part, problem.timed, seldom=problem.slips) for part in best]
            if all(parts is not None for parts in found):
                best, narrowed = [part for parts in found for part in parts or ()], True
                break
    if not narrowed and problem.p_values:
        best = [part for whole in best for part in by_p(problem.p_values[0], whole, problem.timed, seldom=problem.slips)]
    return _apart(best)


def _apart(parts: list[Rows]) -> list[Rows]:
    """The same counts with none twice: parts of one row joined where they overlap."""
    if len(parts) == 1:
        return parts
    c, n2, n1, low, high = (np.concatenate([part[i] for part in parts]) for i in range(5))
    order = np.lexsort((low, c, n1, n2))
    c, n2, n1, low, high = (column[order] for column in (c, n2, n1, low, high))
    if not c.size:
        return [Rows(c, n2, n1, low, high)]
    starts = np.concatenate([[True], (np.diff(c) != 0) | (np.diff(n1) != 0) | (np.diff(n2) != 0)])
    # How far the earlier parts of the same row reach: a running maximum that starts anew with each row.
    group = np.cumsum(starts) - 1
    span = np.int64(4 * 10**9)
    reached = np.maximum.accumulate(high + group * span) - group * span
    before = np.concatenate([[-1], reached[:-1]])
    before[starts] = -1
    rows = Rows(c, n2, n1, np.maximum(low, before + 1), high)
    return [rows.where(rows.low <= rows.high)]


def _expand(parts: list[Rows]) -> Fourfold:
    listed = []
    for rows in parts:
        lengths = rows.high - rows.low + 1
        a = np.repeat(rows.low, lengths) + _steps(lengths)
        listed.append((a, np.repeat(rows.n1, lengths), np.repeat(rows.c, lengths), np.repeat(rows.n2, lengths)))
    return Fourfold(*(np.concatenate([columns[i] for columns in listed]) for i in range(4)))


def _corners(parts: list[Rows]) -> Fourfold:
    """First and last count of every part, thinned to a few thousand."""
    listed: list[tuple[Counts, ...]] = []
    for rows in parts:
        if rows.c.size > 2000:
            extremes = [int(f(x)) for x in (rows.c / rows.n2, rows.low / rows.n1) for f in (np.argmin, np.argmax)]
            keep = np.unique(np.concatenate([np.linspace(0, rows.c.size - 1, 2000).astype(np.int64), extremes]))
            rows = Rows(*(column[keep] for column in rows))
        listed += [(end, rows.n1, rows.c, rows.n2) for end in (rows.low, rows.high)]
    return Fourfold(*(np.concatenate([columns[i] for columns in listed]) for i in range(4)))


def judged(problem: Problem, tables: Fourfold) -> Flags:
    """Whether each table prints every claim of the problem."""
    keep = np.ones(tables.events_intervention.shape, dtype=np.bool_)

    def among(judge: Flags) -> None:
        rows = np.flatnonzero(keep)
        keep[rows[~judge]] = False

    for question in problem.questions:
        some, found = take(tables, keep), np.zeros(int(keep.sum()), dtype=np.bool_)
        for asked in question:
            rest = ~found
            if rest.any():
                match = matches(asked, take(some, rest), problem.timed, seldom=problem.slips, strict=not problem.slips)
                found[rest] |= (match.exact | match.near | match.seldom) if problem.slips else match.exact
        among(found)
    for asked_p in problem.p_values:
        p_match = p_matches(asked_p, take(tables, keep), problem.timed, seldom=problem.slips)
        among(p_match.exact | p_match.seldom if problem.slips else p_match.exact)
    return keep


def search(problem: Problem) -> Found | None:
    """Every table that prints so; None where the claims leave a total open.

    Stops above `BUDGET` candidates and says so.
    """
    first, second = problem.runs
    if first is None or second is None:
        return None
    if sum(run.count for run in first) < sum(run.count for run in second):
        found = search(problem.swapped())
        return None if found is None else replace(found, tables=found.tables.swapped())
    rows = _rows(problem, first, second) if sum(run.count for run in second) <= BUDGET else None
    if rows is None:
        ends = [[(e, r.total) for r in arm for e in (r.first, r.last)][:2000] for arm in (first, second)]
        corners = [(*x, *y) for x in (ends[0][0], ends[0][-1]) for y in (ends[1][0], ends[1][-1])]
        return Found(Fourfold(*np.array(corners, dtype=np.int64).T), _MOST_WINDOWS, complete=False)
    parts = [rows] if rows.size <= ENUMERATED else _candidates(problem, rows)
    size = sum(part.size for part in parts)
    if size == 0:
        return Found(empty(), 0, complete=True)
    if size > BUDGET:
        return Found(_corners(parts), size, complete=False)
    tables = _expand(parts)
    return Found(take(tables, judged(problem, tables)), size, complete=True)
