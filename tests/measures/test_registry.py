from __future__ import annotations

from app.measures.registry import (
    EFFECT_METHODS,
    RATE_EFFECTS,
    RATE_METHODS,
    RATE_TESTS,
    RISK_METHODS,
    STRATA_METHODS,
    STRATA_TESTS,
    TESTS,
    effect_methods,
    everything,
    quick_tests,
)

RELEASED = {
    "risk": {"wilson", "wilson_cc", "clopper_pearson", "mid_p", "agresti_coull", "jeffreys_raw", "jeffreys_bcd", "wald"},
    "risk_difference": {
        "miettinen_nurminen", "newcombe", "newcombe_cc", "mee", "agresti_caffo", "wald",
        "wald_pooled", "wald_cc", "score_known_fault",
    },
    "risk_ratio": {
        "miettinen_nurminen", "koopman", "katz_log", "adj_log_half_half", "log_half_all_cells", "inv_sinh", "mover_r_wilson",
        "half_when_empty", "poisson_model", "test_based", "efficacy_exact_split",
    },
    "odds_ratio": {
        "miettinen_nurminen", "woolf_logit", "cornfield_score", "gart_half", "inv_sinh", "fisher_exact_cond",
        "midp_exact_cond", "half_when_empty",
    },
    "tests": {
        "n_minus_1", "pearson", "fisher_irwin", "yates", "likelihood_ratio", "fisher_double", "fisher_midp_double",
        "fisher_midp_irwin_halfobs", "fisher_midp_irwin_halfties", "barnard_pooled_z", "boschloo_twice_one_sided",
        "boschloo_irwin", "wald_z_difference", "wald_z_ratio", "wald_z_odds",
    },
    "rate": {"garwood_exact", "mid_p", "score", "log_wald"},
    "rate_ratio": {"mid_p", "exact_cond", "exact_cond_double", "log_wald", "score"},
    "rate_difference": {"mover_score_limits", "mover_garwood_limits", "score", "wald"},
    "rate_tests": {"mid_p", "exact_cond", "exact_cond_double"},
    "strata": {"mh_rbg", "mh_greenland_robins", "mh_sato"},
    "strata_tests": {"cmh", "cmh_cc", "breslow_day", "breslow_day_tarone"},
}  # fmt: skip
"""Method keys once released: only ever added to."""


KINDS = {
    "risk": RISK_METHODS,
    "tests": TESTS,
    "rate": RATE_METHODS,
    "rate_tests": RATE_TESTS,
    "strata": STRATA_METHODS,
    "strata_tests": STRATA_TESTS,
}


def test_released_keys_are_still_there() -> None:
    found: dict[str, set[str]] = {kind: {row.key for row in rows} for kind, rows in KINDS.items()}
    for method in EFFECT_METHODS:
        found.setdefault(method.measure, set()).add(method.key)
    for rate_effect in RATE_EFFECTS:
        found.setdefault(rate_effect.measure, set()).add(rate_effect.key)
    assert {kind: RELEASED[kind] - keys for kind, keys in found.items()} == {kind: set() for kind in RELEASED}


def test_every_measure_has_one_default_and_it_comes_first() -> None:
    for measure in ("risk_difference", "risk_ratio", "odds_ratio"):
        assert [m.default for m in effect_methods(measure)] == [True] + [False] * (len(effect_methods(measure)) - 1)
    for measure in ("rate_ratio", "rate_difference"):
        assert [m.default for m in RATE_EFFECTS if m.measure == measure].index(True) == 0
    for rows in (RISK_METHODS, TESTS, RATE_METHODS, RATE_TESTS):
        assert [row.default for row in rows].count(True) == 1
        assert rows[0].default


def test_keys_are_unique_within_their_measure() -> None:
    for rows in (RISK_METHODS, TESTS, RATE_METHODS, RATE_TESTS, STRATA_TESTS):
        assert len({row.key for row in rows}) == len(rows)
    keyed = [(row.measure, row.key) for row in EFFECT_METHODS]
    assert len(set(keyed)) == len(keyed)
    rates = [(row.measure, row.key) for row in RATE_EFFECTS]
    assert len(set(rates)) == len(rates)
    pooled = [(row.measure, row.key) for row in STRATA_METHODS]
    assert len(set(pooled)) == len(pooled)


def test_every_row_tells_of_itself() -> None:
    for row in everything():
        assert all((row.name, row.formula, row.assumes, row.caveat, row.sources))


def test_what_is_for_checking_print_is_no_result() -> None:
    hidden = [row for row in everything() if not row.offered]
    assert all(row.caveat.startswith("For checking print only") for row in hidden)
    offered = {m.key for measure in ("risk_difference", "risk_ratio", "odds_ratio") for m in effect_methods(measure)}
    assert not offered & {"wald_pooled", "wald_cc", "score_known_fault", "test_based", "poisson_model", "half_when_empty"}
    assert not {t.key for t in quick_tests()} & {t.key for t in TESTS if not t.offered or t.on_request}
