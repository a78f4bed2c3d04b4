"""Generates app/measures/coverage.json: do not edit that file, run `python -m tests.generate_coverage`.

Coverage of every nominal 95% interval offered, by full enumeration of all tables of a design with 20, 50
and 100 people an arm: limits once a table, then the binomial probability of the tables whose limits hold
the true value. A table for which a method has no interval counts as covered. True risks run over an even
grid from 0.01 to 0.99: 43 x 43 points for the summary, every second one of 43 kept for the picture; 99
points for one risk. For tests, the share of tables with p at most 0.05 where there is no difference.
"""

from __future__ import annotations

import json
from pathlib import Path
from typing import Any

import numpy as np
from scipy import stats

from app.measures.fourfold import Floats, Fourfold
from app.measures.registry import MEASURES, RISK_METHODS, TESTS, EffectMethod, effect_methods

SIZES = (20, 50, 100)
GRID = np.linspace(0.01, 0.99, 43)
LINE = np.linspace(0.01, 0.99, 99)
TARGET = Path(__file__).parents[1] / "app" / "measures" / "coverage.json"


def _binomials(n: int, risks: Floats) -> Floats:
    return np.asarray(stats.binom.pmf(np.arange(n + 1)[None, :], n, risks[:, None]))


def _value(measure: str, first: float, second: float) -> float:
    if measure == "risk_difference":
        return first - second
    if measure == "risk_ratio":
        return first / second
    return first * (1 - second) / ((1 - first) * second)


def _table(n: int) -> Fourfold:
    a, c = np.meshgrid(np.arange(n + 1), np.arange(n + 1), indexing="ij")
    return Fourfold(a, n, c, n)


def effect_coverage(method: EffectMethod, n: int, grid: Floats = GRID) -> Floats:
    """Coverage at every pair of true risks, intervention along the rows."""
    low, high = method.interval(_table(n), 0.95)
    none = np.isnan(low) | np.isnan(high)
    weights = _binomials(n, grid)
    found = np.empty((grid.size, grid.size))
    for i, first in enumerate(grid):
        for j, second in enumerate(grid):
            true = _value(method.measure, first, second)
            slack = 1e-12 * max(1.0, abs(true))
            holds = none | ((low <= true + slack) & (true - slack <= high))
            found[i, j] = weights[i] @ holds @ weights[j]
    return found


def _summary(values: Floats) -> dict[str, Any]:
    return {
        "least": round(float(np.min(values)), 3),
        "mean": round(float(values.mean()), 3),
        "below_93": round(float((values < 0.93).mean()), 3),
    }


def _thousandths(values: Floats) -> list[Any]:
    kept: list[Any] = np.rint(1000 * values).astype(int).tolist()
    return kept


def generate() -> dict[str, Any]:
    """Everything, by kind, key and people an arm."""
    effects = {
        measure: {
            method.key: {
                str(n): {**_summary(values := effect_coverage(method, n)), "grid": _thousandths(values[::2, ::2])}
                for n in SIZES
            }
            for method in effect_methods(measure)
        }
        for measure in MEASURES
    }
    risks: dict[str, Any] = {}
    for method in RISK_METHODS:
        risks[method.key] = {}
        for n in SIZES:
            low, high = method.interval(np.arange(n + 1), np.full(n + 1, n), 0.95)
            holds = (low[None, :] <= LINE[:, None] + 1e-12) & (LINE[:, None] - 1e-12 <= high[None, :])
            values = (_binomials(n, LINE) * holds).sum(axis=1)
            risks[method.key][str(n)] = {**_summary(values), "line": _thousandths(values)}
    tests: dict[str, Any] = {}
    for test in (t for t in TESTS if t.offered):
        tests[test.key] = {}
        for n in SIZES:
            rejects = np.nan_to_num(test.p(_table(n)), nan=1.0) <= 0.05
            weights = _binomials(n, LINE)
            values = np.einsum("ij,jk,ik->i", weights, rejects.astype(float), weights)
            tests[test.key][str(n)] = {"largest": round(float(np.max(values)), 4), "line": _thousandths(10 * values)}
    return {"effects": effects, "risks": risks, "tests": tests}


if __name__ == "__main__":
    TARGET.write_text(json.dumps(generate(), separators=(",", ":")) + "\n", encoding="utf-8")
