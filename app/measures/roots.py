"""Many scalar equations at once: Newton's method kept inside a bracket."""

from __future__ import annotations

from collections.abc import Callable

import numpy as np

from app.measures.fourfold import Floats

Equation = Callable[[Floats, tuple[Floats, ...]], tuple[Floats, Floats]]
"""(x, coefficients of each row) -> value and slope of an increasing function."""

_STEP = 1e-8  # Newton is quadratic: a relative step below this, once applied, leaves 1e-15
_CLOSED = 1e-15  # halving is not quadratic: it ends only when the bracket has closed
_PATIENCE = 9  # nearly all rows need 4 to 6 steps
_MOST_STEPS = 150


def root_in_bracket(function: Equation, start: Floats, low: Floats, high: Floats, terms: tuple[Floats, ...]) -> Floats:
    """Root of an increasing function by Newton's method kept inside [low, high].

    `function(x, terms)` returns value and slope; `terms` are its per-row coefficients. Rows that have
    converged are dropped from the third step on. Where the slope jumps (an empty cell at the point where
    its restricted risk leaves 0) Newton can swing between two sides for ever, so that after a few steps
    a step that does not halve the one before it is replaced by halving the bracket.
    """
    root = start.copy()
    rows = np.arange(root.size)
    x, low, high = start.copy(), low.copy(), high.copy()
    last = np.full_like(x, np.inf)
    for step in range(_MOST_STEPS):
        value, slope = function(x, terms)
        below = value < 0.0
        low = np.where(below, x, low)
        high = np.where(below, high, x)
        with np.errstate(divide="ignore", invalid="ignore", over="ignore"):
            following = x - value / slope
        halved = ~((following >= low) & (following <= high))
        if step >= _PATIENCE:
            halved |= np.abs(following - x) > 0.5 * last
        if halved.any():
            following = np.where(halved, low + 0.5 * (high - low), following)
        last = np.abs(following - x)
        moving = last > np.where(halved, _CLOSED, _STEP) * np.abs(following)
        x = following
        if step < 2 and moving.any():
            continue
        root[rows] = x
        if not moving.any():
            break
        rows, x, low, high, last = rows[moving], x[moving], low[moving], high[moving], last[moving]
        terms = tuple(term[moving] for term in terms)
    return root
