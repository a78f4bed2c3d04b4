"""The strip: an estimate and its interval on one line, lower on the left, with ticks and no effect."""

from __future__ import annotations

import math
from collections.abc import Callable
from dataclasses import dataclass

from markupsafe import Markup

_WIDTH, _HEIGHT = 240, 40
_LEFT, _RIGHT = 10, 230
_LINE = 12
_CLOSEST = 30  # ticks nearer than this would overprint

_LOG_STEPS = (1.0, 2.0, 5.0)


@dataclass(frozen=True, slots=True)
class Marks:
    """What a strip shows, on the scale of the measure: an estimate (or its range) and two limits.

    `no_effect` is where no effect lies; `label` writes a tick from its value and the step between ticks; `frame` are values
    that the strip reaches to in any case, so that several share a scale.
    """

    estimate: tuple[float, float]
    low: float
    high: float
    no_effect: float
    log: bool
    label: Callable[[float, float], str]
    description: str
    frame: tuple[float, ...] = ()


def _linear_ticks(low: float, high: float) -> list[float]:
    span = high - low
    step = 10.0 ** math.floor(math.log10(span))
    for factor in (0.2, 0.5, 1.0, 2.0):
        if span / (step * factor) <= 4:
            step *= factor
            break
    return [k * step for k in range(math.ceil(low / step), math.floor(high / step) + 1)]


def _log_ticks(low: float, high: float) -> list[float]:
    first, last = math.floor(math.log10(math.exp(low))), math.ceil(math.log10(math.exp(high)))
    decades = [base * 10.0**k for k in range(first, last + 1) for base in (1.0,)]
    every = [base * 10.0**k for k in range(first, last + 1) for base in _LOG_STEPS]
    inside = [value for value in every if low <= math.log(value) <= high]
    return inside if len(inside) <= 5 else [value for value in decades if low <= math.log(value) <= high]


def strip(marks: Marks) -> Markup:
    """One strip as SVG. An infinite or impossible end runs to the edge with an arrow."""
    at = math.log if marks.log else float
    values = (*marks.estimate, marks.low, marks.high)
    usable = [at(v) for v in values if math.isfinite(v) and (not marks.log or v > 0)]
    zero = at(marks.no_effect)
    first, last = min([*usable, zero, *marks.frame]), max([*usable, zero, *marks.frame])
    room = (last - first) or (math.log(4.0) if marks.log else 0.1)
    first, last = first - 0.16 * room, last + 0.16 * room

    def x(value: float) -> float:
        if (marks.log and value <= 0) or value == -math.inf:
            return _LEFT
        if value == math.inf:
            return _RIGHT
        return _LEFT + (at(value) - first) / (last - first) * (_RIGHT - _LEFT)

    parts = [f'<line class="axis" x1="{_LEFT}" x2="{_RIGHT}" y1="{_LINE}" y2="{_LINE}"/>']
    parts.append(_ticks(marks, first, last, x, zero))
    if not (math.isnan(marks.low) or math.isnan(marks.high)):
        left, right = x(marks.low), x(marks.high)
        parts.append(f'<line class="limits" x1="{left:.1f}" x2="{right:.1f}" y1="{_LINE}" y2="{_LINE}"/>')
        for end, edge, sign in ((left, _LEFT, 1), (right, _RIGHT, -1)):
            if end == edge:
                parts.append(f'<path class="arrow" d="M{edge + 6 * sign} {_LINE - 4}L{edge} {_LINE}l{6 * sign} 4"/>')
    if all(math.isfinite(v) and (not marks.log or v > 0) for v in marks.estimate):
        left, right = (x(v) for v in marks.estimate)
        parts.append(
            f'<path class="estimate" d="M{left - 5:.1f} {_LINE}L{left:.1f} {_LINE - 6}H{right:.1f}'
            f'L{right + 5:.1f} {_LINE}L{right:.1f} {_LINE + 6}H{left:.1f}z"/>'
        )
    return Markup(
        '<svg class="strip" viewBox="0 0 {w} {h}" width="{w}" height="{h}" role="img" aria-label="{d}">{s}</svg>'
    ).format(w=_WIDTH, h=_HEIGHT, d=marks.description, s=Markup("".join(parts)))


def _ticks(marks: Marks, first: float, last: float, x: Callable[[float], float], zero: float) -> str:
    values = _log_ticks(first, last) if marks.log else _linear_ticks(first, last)
    step = values[1] - values[0] if len(values) > 1 else last - first
    position = x(marks.no_effect)
    parts = [f'<line class="no-effect" x1="{position:.1f}" x2="{position:.1f}" y1="2" y2="22"/>']
    taken: list[float] = []
    for value in sorted(values, key=lambda v: (v != marks.no_effect, abs((math.log(v) if marks.log else v) - zero))):
        here = x(value)
        if any(abs(here - other) < _CLOSEST for other in taken):
            continue
        taken.append(here)
        label = Markup.escape(marks.label(value, step))
        parts.append(f'<text x="{here:.1f}" y="36" text-anchor="middle">{label}</text>')
        parts.append(f'<line class="tick" x1="{here:.1f}" x2="{here:.1f}" y1="{_LINE}" y2="{_LINE + 4}"/>')
    return "".join(parts)
