"""From a printed estimate and interval to the range of p it allows, and whether they belong together."""

from __future__ import annotations

import itertools
import math
from typing import Literal, NamedTuple

from app.measures.backcalc import p_of_z
from app.measures.interval import normal_quantile
from app.reconstruct.window import Window

Scale = Literal["difference", "ratio"]


class PRange(NamedTuple):
    """P allowed jointly, over all (estimate, width) that print so, and by each limit taken by itself."""

    joint: Window
    box: Window


def on_scale(window: Window, scale: Scale) -> Window | None:
    """The window in natural logarithms for a ratio; None where it reaches 0."""
    if scale == "difference":
        return window
    if window.low <= 0.0:
        return None
    return Window(math.log(window.low), math.log(window.high))


def p_range(
    estimate: Window | None, low: Window, high: Window, scale: Scale, confidence_level: float, no_effect: float
) -> PRange | None:
    """P of no effect behind an interval that is symmetric on its scale.

    Parameters
    ----------
    estimate, low, high : Window
        What the printed numbers may stand for. Without an estimate it is the middle.
    no_effect : float
        0 for a difference, 1 for a ratio.

    Returns
    -------
    PRange or None
        None where a limit may be 0 on a ratio scale. Where no symmetric interval prints so, `joint` is the box.
    """
    ends = [on_scale(window, scale) for window in (low, high)]
    middle = on_scale(estimate, scale) if estimate is not None else None
    if ends[0] is None or ends[1] is None or (estimate is not None and middle is None):
        return None
    zero = math.log(no_effect) if scale == "ratio" else no_effect
    lower, upper = ends[0], ends[1]
    multiplier = normal_quantile(confidence_level)
    if middle is None:
        middle = Window((lower.low + upper.low) / 2.0, (lower.high + upper.high) / 2.0)
    corners = [(x - zero, (last - first) / 2.0) for x, first, last in itertools.product(middle, lower, upper) if last > first]
    if not corners:
        return None
    box = _window([z * multiplier for z in _sizes(corners)], straddles=middle.low < zero < middle.high)
    joint = [(x - zero, w) for x, w in _vertices(middle, lower, upper) if w > 0.0]
    if not joint:
        return PRange(box, box)
    across = min(x for x, _ in joint) < 0.0 < max(x for x, _ in joint)
    return PRange(_window([z * multiplier for z in _sizes(joint)], straddles=across), box)


def _sizes(pairs: list[tuple[float, float]]) -> list[float]:
    return [abs(x) / w for x, w in pairs]


def _window(z_values: list[float], *, straddles: bool) -> Window:
    smallest = 0.0 if straddles else min(z_values)
    return Window(p_of_z(max(z_values)), p_of_z(smallest))


def _vertices(middle: Window, lower: Window, upper: Window) -> list[tuple[float, float]]:
    """Corners (x, w) of the region with x, x - w and x + w each in its window."""
    slack = 1e-12
    lines = [(1.0, 0.0, end) for end in middle] + [(1.0, -1.0, end) for end in lower] + [(1.0, 1.0, end) for end in upper]
    found = []
    for (a1, b1, c1), (a2, b2, c2) in itertools.combinations(lines, 2):
        determinant = a1 * b2 - a2 * b1
        if abs(determinant) < 1e-9:
            continue
        x, w = (c1 * b2 - c2 * b1) / determinant, (a1 * c2 - a2 * c1) / determinant
        if all(
            window.low - slack <= value <= window.high + slack
            for window, value in ((middle, x), (lower, x - w), (upper, x + w))
        ):
            found.append((x, w))
    return found


def symmetric(estimate: Window, low: Window, high: Window, scale: Scale) -> bool:
    """Whether an interval symmetric on the scale prints so."""
    windows = [on_scale(window, scale) for window in (estimate, low, high)]
    middle, lower, upper = windows
    if middle is None or lower is None or upper is None:
        return True  # nothing can be said where a limit may be 0
    return bool(_vertices(middle, lower, upper))


def skewness(estimate: float, low: float, high: float, scale: Scale) -> float:
    """Upper half of an interval over its lower half, on the scale; inf or nan where a half has no width."""
    if scale == "ratio":
        if low <= 0.0:
            return math.nan
        estimate, low, high = (math.log(x) for x in (estimate, low, high))
    below = estimate - low
    return (high - estimate) / below if below > 0.0 else math.inf
