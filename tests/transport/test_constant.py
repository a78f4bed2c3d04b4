"""An effect carried to another starting risk: published values, laws, and what is impossible."""

from __future__ import annotations

import math

import numpy as np
import pytest
from hypothesis import assume, given
from hypothesis import strategies as st

from app.measures.difference import risk_difference
from app.measures.fourfold import Fourfold
from app.transport.constant import SCALES, Effect, Held, Scale, at_horizon, carried, of_event, on_every_scale, risk_by, size_of

RISK = st.floats(0.001, 0.999)
RATIO = st.floats(0.02, 20.0)
SCALE = st.sampled_from(SCALES)


def per_1000(scale: Scale, value: float, risk: float, face: str = "event") -> float:
    return 1000.0 * (float(risk_by(scale, value, risk, face)) - risk)  # type: ignore[arg-type]


@pytest.mark.parametrize(
    ("scale", "value", "risk", "fewer"),
    [
        # Cochrane Handbook for Systematic Reviews of Interventions, chapter 15: OR 0.73 at 300 per 1000 gives 62 fewer;
        # risk ratio 0.92 at 300 per 1000 gives 24 fewer.
        ("odds_ratio", 0.73, 0.3, 62),
        ("risk_ratio", 0.92, 0.3, 24),
        # Computed by hand for 30% against 20%: risk ratio 2/3, odds ratio (0.2/0.8)/(0.3/0.7).
        ("risk_ratio", 2 / 3, 0.05, 17),
        ("odds_ratio", 7 / 12, 0.05, 20),
        ("risk_ratio", 2 / 3, 0.8, 267),
        ("odds_ratio", 7 / 12, 0.8, 100),
        ("risk_difference", -0.1, 0.8, 100),
    ],
)
def test_worked_values(scale: Scale, value: float, risk: float, fewer: int) -> None:
    assert round(-per_1000(scale, value, risk)) == fewer


def test_worked_values_of_the_other_face() -> None:
    """30% against 20%: the ratio of those without is 8/7; at 80% 29 fewer, at 5% impossible (computed by hand)."""
    assert round(-per_1000("risk_ratio", 8 / 7, 0.8, "complement")) == 29
    assert math.isnan(per_1000("risk_ratio", 8 / 7, 0.05, "complement"))


def test_hazard_ratio() -> None:
    """0.75 at 50% gives 40.5%, not 37.5% (computed by hand: 1 - 0.5^0.75)."""
    assert float(risk_by("hazard_ratio", 0.75, 0.5)) == pytest.approx(0.4053964)


@pytest.mark.parametrize(
    ("scale", "value", "risk"), [("risk_ratio", 2.0, 0.6), ("risk_difference", -0.1, 0.05), ("risk_difference", 0.3, 0.8)]
)
def test_an_impossible_risk_is_none_and_not_clipped(scale: Scale, value: float, risk: float) -> None:
    assert math.isnan(float(risk_by(scale, value, risk)))


@given(SCALE, RISK, RISK)
def test_the_size_that_two_risks_make_gives_the_risk_back(scale: Scale, risk: float, start: float) -> None:
    assert float(risk_by(scale, size_of(scale, risk, start), start)) == pytest.approx(risk, rel=1e-9)


@given(SCALE, RISK, RISK)
def test_at_the_trials_own_risk_every_scale_returns_the_trials_estimate(scale: Scale, risk: float, start: float) -> None:
    held = Held(scale, Effect(*[size_of(scale, risk, start)] * 3))
    for other in on_every_scale(held, start):
        assert float(carried(other, start).difference) == pytest.approx(risk - start, abs=1e-9)
        assert other.converted == (other.scale != scale)


@given(st.sampled_from(["risk_ratio", "odds_ratio", "hazard_ratio"]), RATIO, RISK, RISK)
def test_monotone_in_the_starting_risk(scale: Scale, value: float, first: float, second: float) -> None:
    low, high = sorted((first, second))
    ends = [float(risk_by(scale, value, risk)) for risk in (low, high)]
    assume(not any(math.isnan(end) for end in ends))
    assert ends[0] <= ends[1] + 1e-12


@given(SCALE, RATIO, RISK, RISK)
def test_both_faces_add_to_the_whole(scale: Scale, value: float, start: float, of: float) -> None:
    """An effect on being free of the event leaves the same risk as that effect on the event leaves free of it."""
    value = value / 20.0 - 0.5 if scale == "risk_difference" else value
    turned = of_event(scale, Effect(value, value, value), "complement")
    free = float(risk_by(scale, value, 1.0 - start))
    if scale == "hazard_ratio" or math.isnan(free):
        return  # a hazard ratio of being free of the event is inverted, which is no complement
    assert float(carried(turned, start).risk_with) == pytest.approx(1.0 - free, abs=1e-9)


@given(st.integers(1, 199), st.integers(1, 199))
def test_limits_are_ordered_about_the_estimate(a: int, c: int) -> None:
    table = Fourfold(a, 200, c, 200)
    difference = float(risk_difference(table))
    held = Held("risk_difference", Effect(difference, difference - 0.05, difference + 0.05))
    for other in on_every_scale(held, c / 200):
        found = carried(other, np.array([c / 200, 0.3]))
        ends = np.stack([found.low, found.difference, found.high])
        seen = ~np.isnan(ends)
        assert all(np.all(np.diff(column[keep]) >= -1e-12) for column, keep in zip(ends.T, seen.T, strict=True))


def test_without_the_trials_own_risk_only_the_scale_given_can_be_held() -> None:
    held = on_every_scale(Held("risk_ratio", Effect(0.7, 0.5, 0.9)), None)
    assert [math.isnan(h.effect.estimate) for h in held] == [False, True, True, True]


@given(RISK, st.floats(0.1, 50), st.floats(0.1, 50))
def test_a_horizon_there_and_back_returns(risk: float, of: float, to: float) -> None:
    there = at_horizon(risk, of, to)
    assume(float(there) < 1.0 - 1e-9)
    assert float(at_horizon(there, to, of)) == pytest.approx(risk, rel=1e-6)
