from __future__ import annotations

from app.measures.registry import EFFECT_METHODS, RISK_METHODS, TESTS

RELEASED = {
    "risk": {"wilson", "clopper_pearson"},
    "risk_difference": {"miettinen_nurminen", "newcombe"},
    "risk_ratio": {"miettinen_nurminen", "koopman", "katz_log"},
    "odds_ratio": {"miettinen_nurminen", "woolf_logit"},
    "tests": {"n_minus_1", "pearson", "fisher_irwin"},
}
"""Method keys once released: only ever added to."""


def test_released_keys_are_still_there() -> None:
    found: dict[str, set[str]] = {"risk": {m.key for m in RISK_METHODS}, "tests": {t.key for t in TESTS}}
    for method in EFFECT_METHODS:
        found.setdefault(method.measure, set()).add(method.key)
    assert {kind: RELEASED[kind] - keys for kind, keys in found.items()} == {kind: set() for kind in RELEASED}


def test_every_measure_has_one_default_and_it_comes_first() -> None:
    for measure in ("risk_difference", "risk_ratio", "odds_ratio"):
        assert [m.default for m in EFFECT_METHODS if m.measure == measure][:1] == [True]
        assert sum(m.default for m in EFFECT_METHODS if m.measure == measure) == 1
    assert sum(t.default for t in TESTS) == 1


def test_every_row_tells_of_itself() -> None:
    for row in (*RISK_METHODS, *EFFECT_METHODS, *TESTS):
        assert all((row.name, row.formula, row.caveat, row.sources))
