"""Exact coverage of the intervals and size of the tests, computed once and stored with their generator's name.

`coverage.json` is made by `python -m tests.generate_coverage` (tests/generate_coverage.py), which says how.
"""

from __future__ import annotations

import json
from dataclasses import dataclass
from functools import cache
from pathlib import Path
from typing import Any

SIZES = (20, 50, 100)
"""People an arm for which it is stored."""


@dataclass(frozen=True, slots=True)
class Coverage:
    """Coverage of one nominal 95% interval at one size, over true risks from 0.01 to 0.99.

    `least`, `mean` and the share of points `below_93` are of the whole grid; `values` are what is kept
    for a picture: rows of risks for two arms (intervention along the rows), one row for one risk.
    """

    people: int
    least: float
    mean: float
    below_93: float
    values: tuple[tuple[float, ...], ...]


@dataclass(frozen=True, slots=True)
class Size:
    """Share of tables that a test calls different at 0.05 where there is no difference, by the common risk."""

    people: int
    largest: float
    values: tuple[float, ...]


@cache
def _stored() -> dict[str, Any]:
    found: dict[str, Any] = json.loads((Path(__file__).parent / "coverage.json").read_text(encoding="utf-8"))
    return found


def _coverage(people: int, stored: dict[str, Any]) -> Coverage:
    rows = stored["grid"] if "grid" in stored else [stored["line"]]
    values = tuple(tuple(value / 1000.0 for value in row) for row in rows)
    return Coverage(people, stored["least"], stored["mean"], stored["below_93"], values)


def effect_coverage(measure: str, key: str) -> tuple[Coverage, ...]:
    """Coverage of an interval for a measure of two arms, at each size; empty where none is stored."""
    found = _stored()["effects"].get(measure, {}).get(key, {})
    return tuple(_coverage(n, found[str(n)]) for n in SIZES if found)


def risk_coverage(key: str) -> tuple[Coverage, ...]:
    """Coverage of an interval for one risk, at each size."""
    found = _stored()["risks"].get(key, {})
    return tuple(_coverage(n, found[str(n)]) for n in SIZES if found)


def size_of_test(key: str) -> tuple[Size, ...]:
    """Size of a test of no difference, at each number of people an arm."""
    found = _stored()["tests"].get(key, {})
    stored = ((n, found[str(n)]) for n in SIZES if found)
    return tuple(Size(n, s["largest"], tuple(value / 10_000.0 for value in s["line"])) for n, s in stored)
