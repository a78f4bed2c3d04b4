"""The change per 1000 against the starting risk, a line for each scale held constant and the band of one of them."""

from __future__ import annotations

import math
from dataclasses import dataclass

from markupsafe import Markup, escape

from app.present.numerals import fixed

_LEFT, _RIGHT, _TOP, _BOTTOM, _WIDTH, _HEIGHT = 56.0, 14.0, 34.0, 46.0, 620.0, 320.0


@dataclass(frozen=True, slots=True)
class Line:
    """One scale: its class, and (starting risk, change) along it; nan is left out."""

    kind: str
    points: tuple[tuple[float, float], ...]


@dataclass(frozen=True, slots=True)
class Fan:
    """All that the picture shows; changes are shares, drawn per 1000, upwards in the direction of `word`."""

    lines: tuple[Line, ...]
    band: tuple[tuple[float, float, float], ...]
    marks: tuple[tuple[float, str, str], ...]
    widest: float
    word: str
    across: str
    description: str


def _step(reach: float, count: int) -> float:
    """A round step that takes about `count` steps to a reach."""
    rough = max(reach, 1e-9) / count
    size = 10.0 ** math.floor(math.log10(rough))
    return next(size * m for m in (1, 2, 5, 10) if size * m >= rough)


def fan(view: Fan) -> Markup:
    """The picture as SVG, with its numbers as a description."""
    values = [y for line in view.lines for _, y in line.points if not math.isnan(y)]
    values += [y for _, low, high in view.band for y in (low, high) if not math.isnan(y)]
    top, bottom = max([*values, 0.0]), min([*values, 0.0])
    step = _step(top - bottom, 6)
    top, bottom = step * math.ceil(top / step - 1e-9), step * math.floor(bottom / step + 1e-9)
    across = (_WIDTH - _LEFT - _RIGHT) / view.widest
    up = (_HEIGHT - _TOP - _BOTTOM) / max(top - bottom, 1e-12)

    def at(x: float, y: float) -> str:
        return f"{_LEFT + x * across:.1f},{_TOP + (top - y) * up:.1f}"

    parts = [_axes(view, top, bottom, step, across, up)]
    band = [(x, low, high) for x, low, high in view.band if not math.isnan(low) and not math.isnan(high)]
    if band:
        there, back = [at(x, low) for x, low, _ in band], [at(x, high) for x, _, high in reversed(band)]
        parts.append(f'<polygon class="band" points="{" ".join(there + back)}"/>')
    for line in view.lines:
        points = [at(x, y) for x, y in line.points if not math.isnan(y)]
        if points:
            parts.append(f'<polyline class="held {line.kind}" points="{" ".join(points)}"/>')
    for place, label, kind in view.marks:
        x = _LEFT + place * across
        anchor = "end" if x > _WIDTH - 120 else "start"
        shift, height = (-5 if anchor == "end" else 5), (12 if kind == "yours" else 26)
        parts.append(f'<line class="mark-{kind}" x1="{x:.1f}" x2="{x:.1f}" y1="{height - 8}" y2="{_HEIGHT - _BOTTOM}"/>')
        parts.append(f'<text class="mark-text" x="{x + shift:.1f}" y="{height}" text-anchor="{anchor}">{escape(label)}</text>')
    return Markup(
        f'<svg class="fan" viewBox="0 0 {_WIDTH:.0f} {_HEIGHT:.0f}" role="img" aria-label="{escape(view.description)}">'
        f"{''.join(parts)}</svg>"
    )


def _axes(view: Fan, top: float, bottom: float, step: float, across: float, up: float) -> str:
    parts = []
    for k in range(round((top - bottom) / step) + 1):
        value = bottom + k * step
        y = _TOP + (top - value) * up
        kind = "zero" if abs(value) < 1e-12 else "grid"
        parts.append(f'<line class="{kind}" x1="{_LEFT}" x2="{_WIDTH - _RIGHT}" y1="{y:.1f}" y2="{y:.1f}"/>')
        decimals = 0 if 1000 * step >= 1 else 1
        parts.append(f'<text x="{_LEFT - 8}" y="{y + 4:.1f}" text-anchor="end">{fixed(1000 * value, decimals)}</text>')
    wide = _step(view.widest, 6)
    for k in range(math.floor(view.widest / wide + 1e-9) + 1):
        x = _LEFT + k * wide * across
        decimals = 0 if 100 * wide >= 1 else 1
        parts.append(
            f'<text x="{x:.1f}" y="{_HEIGHT - _BOTTOM + 18}" text-anchor="middle">{fixed(100 * k * wide, decimals)}%</text>'
        )
    middle = (_TOP + _HEIGHT - _BOTTOM) / 2
    parts.append(
        f'<text class="axis" x="{(_LEFT + _WIDTH) / 2:.0f}" y="{_HEIGHT - 8}" text-anchor="middle">{escape(view.across)}</text>'
    )
    turned = f'transform="rotate(-90 12 {middle:.0f})"'
    parts.append(f'<text class="axis" x="12" y="{middle:.0f}" text-anchor="middle" {turned}>{view.word} per 1000</text>')
    return "".join(parts)
