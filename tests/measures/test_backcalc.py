"""The printed short cuts, and refusals; the exact forms are met through the API (tests/api/test_endpoints.py)."""

from __future__ import annotations

import pytest

from app.measures.backcalc import altman_bland_interval_from_p, altman_bland_p_from_interval
from app.measures.cluster import design_effect
from tests.checks_reader import Row, misses, rows

SHORT_CUTS = tuple(row for row in rows("backcalc") if row["method"] == "altman_bland_2011")


@pytest.mark.parametrize("row", SHORT_CUTS, ids=lambda r: f"{r['case_id']}-{r['task']}")
def test_short_cut_reproduces_the_check_values(row: Row) -> None:
    level = float(row["level"]) / 100
    estimate = float(row["estimate"])
    scale = "ratio" if row["scale"] == "ratio" else "difference"
    if row["task"] == "p_to_ci":
        interval, found = altman_bland_interval_from_p(estimate, float(row["given_p"]), scale, level)  # type: ignore[arg-type]
        assert not misses(float(interval.low), float(row["low"]))
        assert not misses(float(interval.high), float(row["high"]))
    else:
        limits = float(row["given_low"]), float(row["given_high"])
        found = altman_bland_p_from_interval(estimate, *limits, scale, level)  # type: ignore[arg-type]
        assert not misses(float(found.p), float(row["p"]))
    assert not misses(float(found.z), float(row["z"]))
    assert not misses(float(found.standard_error), float(row["se"]))


def test_error_short_cut_at_another_level() -> None:
    with pytest.raises(ValueError, match=r"^the printed short cut has multipliers for \[0.9, 0.95, 0.99\] only$"):
        altman_bland_p_from_interval(0.7, 0.5, 0.9, "ratio", 0.8)


@pytest.mark.parametrize(
    ("size", "correlation", "message"),
    [
        (0.5, 0.1, "cluster_size must be at least 1"),
        (20.0, 1.2, "intracluster_correlation must lie between 0 and 1"),
        (20.0, -0.1, "intracluster_correlation must lie between 0 and 1"),
    ],
)
def test_error_in_cluster(size: float, correlation: float, message: str) -> None:
    with pytest.raises(ValueError, match=f"^{message}$"):
        design_effect(size, correlation)
