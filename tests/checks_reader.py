"""Reading the check values: rows of a file, and the pass marks of tests/checks/METHODS.md."""

from __future__ import annotations

import csv
import math
from functools import cache
from pathlib import Path

from app.measures.fourfold import Fourfold

CHECKS = Path(__file__).parent / "checks"

Row = dict[str, str]


@cache
def rows(name: str) -> tuple[Row, ...]:
    """All rows of a file."""
    with (CHECKS / f"{name}.csv").open(encoding="utf-8", newline="") as file:
        return tuple(csv.DictReader(file))


def rows_of(name: str, method: str, **fixed: str) -> tuple[Row, ...]:
    """The rows of one method, and of fixed values of other columns; never none."""
    found = tuple(row for row in rows(name) if row["method"] == method and all(row[k] == v for k, v in fixed.items()))
    assert found, f"{name}.csv has no rows of {method}"
    return found


def table_of(selected: tuple[Row, ...]) -> Fourfold:
    """The tables of rows as one array."""
    return Fourfold(*([int(row[column]) for row in selected] for column in ("a", "n1", "c", "n2")))


def level_of(row: Row) -> float:
    """The level of a row as a proportion."""
    return float(row["level"]) / 100.0


def misses(found: float, expected: float, mark: float = 1e-9) -> bool:
    """Whether a value misses its mark: nan, inf and 0 must be met exactly."""
    if math.isnan(expected):
        return not math.isnan(found)
    if math.isinf(expected) or expected == 0.0:
        return found != expected
    return not abs(found - expected) <= mark * abs(expected)
