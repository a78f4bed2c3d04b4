"""What the tables give for a claim: by every usual method, in the printed unit and the printed way round."""

from __future__ import annotations

import numpy as np

from app.measures.fourfold import Floats, Fourfold
from app.printed.claims import REDUCTIONS, Claim
from app.reconstruct.p_prints import AskedP, p_of, p_window, tests
from app.reconstruct.prints import (
    Asked,
    Timed,
    limits_of,
    matches,
    methods,
    shown_estimate,
    shown_limits,
    take,
    turned,
    turned_time,
)
from app.reconstruct.stated import Stated
from app.reconstruct.verdict import Recomputed, Spread
from app.reconstruct.window import exact, whole_unit

_FEW = 200


def _few(tables: Fourfold) -> Fourfold:
    size = tables.events_intervention.size
    if size <= _FEW:
        return tables
    keep = np.zeros(size, dtype=np.bool_)
    keep[np.linspace(0, size - 1, _FEW).astype(np.int64)] = True
    return take(tables, keep)


def _spread(values: Floats, factor: float = 1.0) -> Spread | None:
    known = values[~np.isnan(values)]
    return (float(known.min()) / factor, float(known.max()) / factor) if known.size else None


def recomputed_risk(claim: Claim, tables: Fourfold) -> tuple[Recomputed, ...]:
    """The count, total or risk over the tables, in the printed unit."""
    a, n1, c, n2 = tables.floats()
    events, total = (a, n1) if claim.arm == "intervention" else (c, n2)
    if claim.arm is None:
        values = n1 + n2 if claim.quantity == "total" else a + c
    else:
        by = {"events": events, "non_events": total - events, "total": total, "risk": events / total}
        if claim.quantity not in by:
            return ()
        values = by[claim.quantity]
    return (Recomputed("counts", _spread(values, float(claim.factor))),)


def recomputed_measure(
    claim: Claim, of: Stated, tables: Fourfold, way: Asked | None = None
) -> tuple[tuple[Recomputed, ...], float | None]:
    """By each usual method, those that print the claim first; and the estimate of the middle table as a plain number."""
    ways = of.ways(claim)
    if way is None:
        if not ways:
            return (), None
        way = ways[0]
    few = _few(tables)
    counted, factor, timed = turned(way, few), float(way.factor), turned_time(way, of.timed)
    estimate = shown_estimate(way, counted, timed)
    if estimate is None:
        return (), None
    middle = float(estimate[estimate.size // 2])
    if way.interval is None:
        return (Recomputed(way.meant, _spread(estimate, factor), prints=_prints(way, few, of.timed)),), middle
    found = []
    for method in methods(way.meant):
        if method.printed_use != "usual" or (method.key == "half_when_empty" and _no_cell_empty(counted)):
            continue
        limits = limits_of(method, counted, timed, way.interval.confidence_level)
        if limits is None:
            continue
        low, high = shown_limits(way, limits)
        found.append(
            Recomputed(
                method.key,
                _spread(estimate, factor),
                _spread(low, factor),
                _spread(high, factor),
                prints=_method_prints(way, low, high),
            )
        )
    return tuple(sorted(found, key=lambda r: not r.prints)), middle


def _no_cell_empty(tables: Fourfold) -> bool:
    a, n1, c, n2 = tables.floats()
    return bool(min(x.min() for x in (a, n1 - a, c, n2 - c)) > 0)


def _prints(way: Asked, tables: Fourfold, timed: Timed | None) -> bool:
    return bool(matches(way, tables, timed).estimate.any())


def _method_prints(way: Asked, low: Floats, high: Floats) -> bool:
    """Whether the limits by one method print as the claim's, for some table."""
    interval = way.interval
    if interval is None:
        return False
    held = np.ones(low.shape, dtype=np.bool_)
    for limit, values in ((interval.low, low), (interval.high, high)):
        if limit is not None:
            held &= exact(limit, way.factor).holds(values)
    return bool(held.any())


def recomputed_p(tables: Fourfold, timed: Timed | None, question: AskedP) -> tuple[tuple[Recomputed, ...], Spread]:
    """P by each usual test, those that print the claim first, and the spread over tests and tables."""
    few = _few(tables)
    window = p_window(question)
    found = []
    for test in tests("usual", timed):
        p = p_of(test, few, timed)
        spread = _spread(p)
        if spread is not None:
            found.append(Recomputed(test.key, spread, prints=bool(window.holds(p).any())))
    if not found:
        return (), (np.nan, np.nan)
    ends = [r.estimate for r in found if r.estimate is not None]
    whole = min(low for low, _ in ends), max(high for _, high in ends)
    return tuple(sorted(found, key=lambda r: not r.prints)), whole


def needed_is_open(claim: Claim, of: Stated) -> bool:
    """Whether a number needed to treat is the reciprocal of another printed figure: a reduction, a risk, or a limit."""
    if claim.number is None:
        return False
    mine = whole_unit(claim.said, claim.factor)
    values = [c.said.exact * c.factor for c in of.measures if c.quantity in REDUCTIONS and c.number is not None]
    values += [c.said.exact * c.factor for arm in of.arms for c in (*arm.risks, *arm.modelled_risks) if c.number is not None]
    return any(mine.holds(np.asarray(float(abs(1 / value)))).item() for value in values if value)
