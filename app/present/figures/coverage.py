"""Coverage as a picture: a map over two true risks, or a line over one."""

from __future__ import annotations

from collections.abc import Sequence

from markupsafe import Markup

from app.measures.coverage import Coverage, Size

_CELL = 6
_EDGES = (("far-short", 0.0, 0.90), ("short", 0.90, 0.93), ("near", 0.93, 0.97), ("beyond", 0.97, 2.0))
_WIDTH, _HEIGHT = 150, 84
_BOTTOM, _TOP = 0.80, 1.00


def coverage_map(found: Coverage, description: str) -> Markup:
    """True risk with the intervention from left to right, with the comparator from bottom to top."""
    count = len(found.values)
    paths = []
    for name, low, high in _EDGES:
        moves = []
        for column in range(count):
            y = (count - 1 - column) * _CELL
            row = 0
            while row < count:
                end = row
                while end < count and low <= found.values[end][column] < high:
                    end += 1
                if end > row:
                    moves.append(f"M{row * _CELL} {y}h{(end - row) * _CELL}v{_CELL}h-{(end - row) * _CELL}z")
                row = max(end, row + 1)
        if moves:
            paths.append(f'<path class="{name}" d="{"".join(moves)}"/>')
    return Markup('<svg class="coverage" viewBox="0 0 {s} {s}" role="img" aria-label="{d}">{p}</svg>').format(
        s=count * _CELL, d=description, p=Markup("".join(paths))
    )


def _line(values: Sequence[float], bottom: float, top: float) -> str:
    step = _WIDTH / (len(values) - 1)
    points = [
        f"{i * step:.1f} {_HEIGHT * (1.0 - (min(max(value, bottom), top) - bottom) / (top - bottom)):.1f}"
        for i, value in enumerate(values)
    ]
    return "M" + "L".join(points)


def _plot(values: Sequence[float], nominal: float, bottom: float, top: float, description: str) -> Markup:
    at = _HEIGHT * (1.0 - (nominal - bottom) / (top - bottom))
    shape = f'<path class="nominal" d="M0 {at:.1f}H{_WIDTH}"/><path class="line" d="{_line(values, bottom, top)}"/>'
    return Markup('<svg class="coverage line" viewBox="0 -2 {w} {h}" role="img" aria-label="{d}">{s}</svg>').format(
        w=_WIDTH, h=_HEIGHT + 4, d=description, s=Markup(shape)
    )


def coverage_line(found: Coverage, description: str) -> Markup:
    """Coverage from 80% (bottom) to 100% (top) over a true risk from 1% to 99%; nominal 95% dashed."""
    return _plot(found.values[0], 0.95, _BOTTOM, _TOP, description)


def size_line(found: Size, description: str) -> Markup:
    """Size from 0 (bottom) to 10% (top) over a common risk from 1% to 99%; nominal 5% dashed."""
    return _plot(found.values, 0.05, 0.0, 0.10, description)
