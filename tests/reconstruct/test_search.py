"""The search finds every table: equal to full enumeration on small totals, over every kind of mixture."""

from __future__ import annotations

import itertools
from collections.abc import Callable

import numpy as np
import pytest

from app.measures.fourfold import Fourfold
from app.printed.claims import Claim
from app.reconstruct import narrow, search
from app.reconstruct.p_prints import AskedP
from app.reconstruct.search import Problem, judged
from app.reconstruct.stated import Stated, arm_runs, stated
from tests.reconstruct.trials_maker import (
    ARMS,
    claim,
    full,
    hybrid_difference,
    log_risk_ratio,
    logit_odds_ratio,
    p_of,
    simple_difference,
)

Table = tuple[int, int, int, int]


def _ratio(values: tuple[float, float, float], key: str, decimals: int = 2) -> list[Claim]:
    texts = [f"{v:.{decimals}f}" for v in values]
    return [claim(key, key, texts[0], low=texts[1], high=texts[2])]  # type: ignore[arg-type]


def _difference(values: tuple[float, float, float]) -> list[Claim]:
    texts = [f"{100 * v:.1f}" for v in values]
    return [claim("risk_difference", "risk_difference", texts[0], low=texts[1], high=texts[2])]


def _risks(table: Table, decimals: int) -> list[Claim]:
    a, n1, c, n2 = table
    return [
        claim(f"{arm}-risk", "risk", f"{100 * e / n:.{decimals}f}", arm) for arm, e, n in ((ARMS[0], a, n1), (ARMS[1], c, n2))
    ]


KINDS: dict[str, Callable[[Table], list[Claim]]] = {
    "risk ratio with interval": lambda t: _ratio(log_risk_ratio(t), "risk_ratio"),
    "risk ratio to one decimal": lambda t: _ratio(log_risk_ratio(t), "risk_ratio", 1),
    "odds ratio with interval": lambda t: _ratio(logit_odds_ratio(t), "odds_ratio"),
    "difference with interval": lambda t: _difference(simple_difference(t)),
    "hybrid interval": lambda t: _difference(hybrid_difference(t)),
    "risk ratio alone": lambda t: [claim("risk_ratio", "risk_ratio", f"{log_risk_ratio(t)[0]:.2f}")],
    "reduction": lambda t: [claim("reduction", "relative_risk_reduction", f"{100 - 100 * log_risk_ratio(t)[0]:.1f}")],
    "increase": lambda t: [claim("increase", "relative_risk_increase", f"{100 * log_risk_ratio(t)[0] - 100:.0f}")],
    "difference printed without its sign": lambda t: [
        claim("risk_difference", "risk_difference", f"{abs(100 * simple_difference(t)[0]):.1f}")
    ],
    "number needed to treat": lambda t: [
        claim("needed", "number_needed_to_treat", str(int(np.ceil(1 / max(abs(simple_difference(t)[0]), 1e-3)))))
    ],
    "chi-squared p": lambda t: [claim("p", "p_value", f"{p_of(t, 'pearson'):.3f}")],
    "Fisher p": lambda t: [claim("p", "p_value", f"{p_of(t, 'fisher'):.2f}")],
    "p below a bound": lambda _: [claim("p", "p_value", "0.05", operator="<")],
    "one percentage": lambda t: _risks(t, 1)[:1],
    "percentages": lambda t: _risks(t, 0),
}


def _draw(rng: np.random.Generator, most: int) -> Table:
    while True:
        n1, n2 = (int(n) for n in rng.integers(8, most, 2))
        table = int(rng.integers(1, n1)), n1, int(rng.integers(1, n2)), n2
        if full(table) and table[0] * table[3] != table[2] * table[1]:
            return table


def _enumerated(problem: Problem) -> set[Table]:
    """All tables of the runs, each judged: nothing but the last filter of the search."""
    first, second = problem.runs
    assert first is not None
    assert second is not None
    every = [
        (a, r.total, c, s.total)
        for r, s in itertools.product(first, second)
        for a in range(r.first, r.last + 1)
        for c in range(s.first, s.last + 1)
        if (problem.combined is None or r.total + s.total == problem.combined)
        and (problem.both_events is None or a + c == problem.both_events)
        and (not problem.equal or r.total == s.total)
    ]
    if not every:
        return set()
    tables = Fourfold(*np.array(every, dtype=np.int64).T)
    return {row for row, keep in zip(every, judged(problem, tables), strict=True) if keep}


def _found(problem: Problem) -> set[Table]:
    found = search.search(problem)
    assert found is not None
    assert found.complete
    return _rows(found.tables)


def _rows(tables: Fourfold) -> set[Table]:
    columns = (tables.events_intervention, tables.total_intervention, tables.events_comparator, tables.total_comparator)
    return {tuple(int(x) for x in row) for row in zip(*columns, strict=True)}  # type: ignore[misc]


@pytest.fixture
def windows_only(monkeypatch: pytest.MonkeyPatch) -> None:
    """No small product is simply enumerated, and every row is narrowed."""
    monkeypatch.setattr(search, "ENUMERATED", 0)
    monkeypatch.setattr(narrow, "FEW_ROWS", 10_000)


def _totals(table: Table) -> list[Claim]:
    return [claim(f"{arm}-total", "total", str(n), arm) for arm, n in ((ARMS[0], table[1]), (ARMS[1], table[3]))]


P_KINDS = ("chi-squared p", "Fisher p", "p below a bound")
"""On tiny tables p is no smooth function of a count; they are enumerated, larger ones narrowed."""


@pytest.mark.parametrize("kind", P_KINDS)
def test_every_table_of_a_p_alone(kind: str) -> None:
    table = {"chi-squared p": (30, 251, 48, 262), "Fisher p": (4, 250, 13, 255), "p below a bound": (60, 250, 40, 250)}[kind]
    problem = stated(_totals(table) + KINDS[kind](table)).problem()
    assert _found(problem) == _enumerated(problem)


@pytest.mark.parametrize("kind", [kind for kind in KINDS if kind not in P_KINDS])
@pytest.mark.usefixtures("windows_only")
def test_every_table_with_known_totals(kind: str) -> None:
    rng = np.random.default_rng(list(KINDS).index(kind))
    for _ in range(4):
        table = _draw(rng, 36)
        problem = stated(_totals(table) + KINDS[kind](table)).problem()
        expected = _enumerated(problem)
        assert _found(problem) == expected
        assert table in expected


@pytest.mark.parametrize("pair", [pair for pair in itertools.combinations(KINDS, 2) if pair[0] not in P_KINDS][::4])
@pytest.mark.usefixtures("windows_only")
def test_every_table_of_a_mixture(pair: tuple[str, str]) -> None:
    rng = np.random.default_rng(len(pair[0]) * 31 + len(pair[1]))
    table = _draw(rng, 30)
    claims = {c.id: c for kind in pair for c in KINDS[kind](table)}
    problem = stated([*_totals(table), *claims.values()]).problem()
    assert _found(problem) == _enumerated(problem)


def _mixed_arms(table: Table, how: str) -> Stated:
    a, n1, c, n2 = table
    risks = _risks(table, 1)
    ratio = _ratio(log_risk_ratio(table), "risk_ratio")
    events = [claim(f"{arm}-events", "events", str(e), arm) for arm, e in ((ARMS[0], a), (ARMS[1], c))]
    others = [claim(f"{arm}-others", "non_events", str(n - e), arm) for arm, e, n in ((ARMS[0], a, n1), (ARMS[1], c, n2))]
    combined = claim("combined", "total", str(n1 + n2))
    both = claim("both", "events", str(a + c))
    ranges = [
        claim(f"{arm}-total", "total", str(n), arm, low=str(n - 2), high=str(n + 2))
        for arm, n in ((ARMS[0], n1), (ARMS[1], n2))
    ]
    ranges = [Claim(r.id, r.quantity, r.arm, None, r.unit, interval=r.interval) for r in ranges]
    return {
        "percentages and people together": lambda: stated([*risks, combined, *ratio]),
        "events and people together": lambda: stated([*events, combined, *ratio]),
        "events of both together": lambda: stated([*_totals(table), both, *ratio]),
        "totals as ranges": lambda: stated([*ranges, *risks, *ratio]),
        "events, non-events and a ratio": lambda: stated([events[0], others[0], others[1], risks[1], *ratio]),
        "events and percentages": lambda: stated([*events, *risks, *ratio]),
        "arms of one size": lambda: stated([*_totals(table)[:1], *risks, *ratio], equal=True),
    }[how]()


@pytest.mark.parametrize(
    "how",
    [
        "percentages and people together",
        "events and people together",
        "events of both together",
        "totals as ranges",
        "events, non-events and a ratio",
        "events and percentages",
        "arms of one size",
    ],
)
@pytest.mark.usefixtures("windows_only")
def test_every_table_where_totals_are_open_or_joined(how: str) -> None:
    rng = np.random.default_rng(len(how))
    for _ in range(3):
        table = _draw(rng, 32)
        if how == "arms of one size":
            table = (min(table[0], table[3] - 1), table[3], table[2], table[3])
        problem = _mixed_arms(table, how).problem()
        expected = _enumerated(problem)
        assert table in expected
        assert _found(problem) == expected


@pytest.mark.parametrize("kind", ["rate_ratio", "rate_difference"])
@pytest.mark.parametrize("turned", [False, True])
@pytest.mark.usefixtures("windows_only")
def test_every_table_with_person_time(kind: str, turned: bool) -> None:
    """Events are open; person-time and a ratio or difference of rates narrow them, whichever arm is smaller."""
    a, n1, c, n2 = (9, 40, 17, 33) if turned else (9, 33, 17, 40)
    time = [claim(f"{arm}-time", "person_time", text, arm) for arm, text in ((ARMS[0], "31.5"), (ARMS[1], "38.0"))]
    rates = a / 31.5, c / 38.0
    text = f"{rates[0] / rates[1]:.2f}" if kind == "rate_ratio" else f"{100 * (rates[0] - rates[1]):.1f}"
    unit = "proportion" if kind == "rate_ratio" else "per_100_person_years"
    problem = stated([*_totals((a, n1, c, n2)), *time, claim("x", kind, text, unit=unit)]).problem()  # type: ignore[arg-type]
    expected = _enumerated(problem)
    assert (a, n1, c, n2) in expected
    assert _found(problem) == expected


def test_too_many_rows_to_look_at_are_not_looked_at() -> None:
    found = search.search(stated(_totals((0, 3_000_000, 0, 3_000_000))).problem())
    assert found is not None
    assert not found.complete


def test_an_open_total_is_not_guessed() -> None:
    only = stated([claim("r1", "risk", "11.0", ARMS[0]), claim("r2", "risk", "16.4", ARMS[1])])
    assert arm_runs(only.arms[0]) is None
    assert search.search(only.problem()) is None


def test_more_candidates_than_the_budget_are_counted_not_listed() -> None:
    found = search.search(stated(_totals((0, 3000, 0, 3000))).problem())
    assert found is not None
    assert not found.complete
    assert found.candidates == 3001 * 3001
    assert _rows(found.tables) >= {(0, 3000, 0, 3000), (3000, 3000, 3000, 3000)}


def test_a_search_of_large_totals_agrees_with_enumeration_of_its_windows() -> None:
    table = (132, 1200, 198, 1200)
    claims = _totals(table) + _ratio(log_risk_ratio(table), "risk_ratio")
    problem = stated(claims).problem()
    found = search.search(problem)
    assert found is not None
    assert table in _rows(found.tables)
    assert found.candidates <= 10 * found.count
    low, high = (c * 1200 // 1200 for c in (100, 170))
    every = np.array([(a, 1200, c, 1200) for a in range(low, high) for c in range(150, 260)], dtype=np.int64)
    tables = Fourfold(*every.T)
    assert {tuple(map(int, row)) for row in every[judged(problem, tables)]} == _rows(found.tables)


def test_p_alone_on_both_sides_of_no_difference() -> None:
    problem = Problem(
        stated(_totals((5, 30, 12, 30))).problem().runs, p_values=(AskedP(claim("p", "p_value", "0.04").said, "="),)
    )
    found = _found(problem)
    assert any(a * n2 < c * n1 for a, n1, c, n2 in found)
    assert {(c, n2, a, n1) for a, n1, c, n2 in found} == found
