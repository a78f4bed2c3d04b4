"""Every registered method against the check values, at every edge case they hold."""

from __future__ import annotations

import numpy as np
import pytest

from app.measures.interval import Interval
from app.measures.needed import needed_segments, number_needed
from app.measures.registry import EFFECT_METHODS, RISK_METHODS, TESTS, EffectMethod, NoDifferenceTest, RiskMethod
from tests.checks_reader import Row, level_of, misses, rows, rows_of, table_of

FILES = {"risk_difference": ("rd", "RD"), "risk_ratio": ("rr", "RR"), "odds_ratio": ("or", "OR")}
LEVELS = ("90", "95", "99")
NEEDED = ("wald", "newcombe", "miettinen_nurminen")


def _failures(selected: tuple[Row, ...], interval: Interval, small: float) -> list[str]:
    failed = []
    for i, row in enumerate(selected):
        for found, expected in ((interval.low[i], float(row["low"])), (interval.high[i], float(row["high"]))):
            mark = 1e-7 if abs(expected) < small else 1e-9
            if misses(float(found), expected, mark):
                failed.append(f"{row['case_id']} at {row['level']}%: {found!r} for {expected!r}")
    return failed


@pytest.mark.parametrize("method", RISK_METHODS, ids=lambda m: m.key)
def test_risk_method(method: RiskMethod) -> None:
    for level in LEVELS:
        selected = rows_of("single", method.key, level=level)
        events, total = (np.array([int(row[c]) for row in selected]) for c in ("x", "n"))
        assert not _failures(selected, method.interval(events, total, float(level) / 100), 0.0)


OFFERED = [m for m in EFFECT_METHODS if m.offered]


@pytest.mark.parametrize("method", OFFERED, ids=lambda m: f"{m.measure}-{m.key}")
def test_effect_method(method: EffectMethod) -> None:
    file, measure = FILES[method.measure]
    small = 1e-6 if file == "rd" else 0.0
    for level in LEVELS:
        selected = rows_of(file, method.key, level=level, measure=measure)
        interval = method.interval(table_of(selected), float(level) / 100)
        assert not _failures(selected, interval, small)


@pytest.mark.parametrize("method", [m for m in OFFERED if m.estimate], ids=lambda m: f"{m.measure}-{m.key}")
def test_own_estimate(method: EffectMethod) -> None:
    file, measure = FILES[method.measure]
    selected = rows_of(file, method.key, measure=measure)
    assert method.estimate is not None
    found = method.estimate(table_of(selected))
    assert not [r["case_id"] for i, r in enumerate(selected) if misses(float(found[i]), float(r["estimate"]))]


@pytest.mark.parametrize("test", [t for t in TESTS if t.offered], ids=lambda t: t.key)
def test_p_value(test: NoDifferenceTest) -> None:
    selected = rows_of("pvalues", test.key)
    found, logs = test.p(table_of(selected)), test.log_p(table_of(selected))
    failed = [row["case_id"] for i, row in enumerate(selected) if misses(float(found[i]), float(row["p"]))]
    assert not failed
    wanted = np.array([float(row["p"]) for row in selected])
    some = wanted > 1e-300
    np.testing.assert_allclose(logs[some], np.log(wanted[some]), rtol=1e-9, atol=1e-9)


@pytest.mark.parametrize(
    "method", [m for m in EFFECT_METHODS if m.key in NEEDED and m.measure == "risk_difference"], ids=lambda m: m.key
)
def test_needed_to_treat(method: EffectMethod) -> None:
    """nnt.csv: ARR is comparator minus intervention; NNTB is to benefit for an unwanted event."""
    selected = tuple(row for row in rows("nnt") if row["arr_ci_method"] == method.key)
    assert selected
    kinds = {"benefit": "NNTB", "harm": "NNTH"}
    for row in selected:
        interval = method.interval(table_of((row,)), level_of(row))
        segments = needed_segments(Interval(interval.low[0], interval.high[0]), True)
        estimate = number_needed(np.array(float(row["arr"])))
        assert not misses(float(estimate), float(row["nnt"]))
        best, worst = float(row["best"]), float(row["worst"])
        if row["form"] == "undefined":
            assert segments == ()
        elif row["form"] == "through_inf":
            first, second = segments
            assert (first.direction, second.direction) == ("benefit", "harm")
            assert not misses(first.low, best, 1e-7)
            assert not misses(second.low, worst, 1e-7)
            assert first.high == second.high == np.inf
        else:
            (only,) = segments
            assert kinds[only.direction] == row["form"]
            # For harm the file's best is the limit nearer no effect, the larger number.
            ends = sorted((best, worst))
            assert not misses(only.low, ends[0], 1e-7)
            assert not misses(only.high, ends[1], 1e-7)
