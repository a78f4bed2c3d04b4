"""Trials made up at random and printed as papers print them. Shares no formula with the program.

Estimates come from statsmodels, scipy and plain textbook formulas written here; a share of the figures comes from
outside what the program knows: models, strata, times, truncated digits.
"""

from __future__ import annotations

import math
import warnings
from dataclasses import dataclass, field
from typing import Any

import numpy as np
import statsmodels.api as sm
from scipy import stats
from statsmodels.stats.contingency_tables import StratifiedTable
from statsmodels.stats.proportion import confint_proportions_2indep

from app.printed.claims import Arm, Claim, PrintedInterval, Quantity, default_unit, number_kind
from app.printed.number import read_number

ARMS: tuple[Arm, Arm] = ("intervention", "comparator")


@dataclass
class Trial:
    """One made-up trial: its true table, the claims printed, and which of them come from outside usual print."""

    table: tuple[int, int, int, int]
    claims: list[Claim] = field(default_factory=list)
    outside: set[str] = field(default_factory=set)
    fault: str = ""
    faulty: str = ""


def claim(
    key: str,
    quantity: Quantity,
    text: str,
    arm: Arm | None = None,
    *,
    low: str | None = None,
    high: str | None = None,
    level: float = 0.95,
    **more: Any,
) -> Claim:
    """A claim from its printed texts."""
    kind = number_kind(quantity)
    interval = None
    if low is not None and high is not None:
        interval = PrintedInterval(read_number(low, kind), read_number(high, kind), level)
    more.setdefault("unit", default_unit(quantity))
    return Claim(key, quantity, arm, read_number(text, kind), interval=interval, **more)


def draw_table(
    rng: np.random.Generator, *, smallest: int = 20, largest: int = 20_000, least_risk: float = 0.001
) -> tuple[int, int, int, int]:
    """Counts of a random trial: arms of 20 to 20,000, risks of 0.1 to 90%."""
    n1 = int(np.exp(rng.uniform(math.log(smallest), math.log(largest))))
    n2 = (
        n1
        if rng.random() < 0.3
        else max(smallest, int(n1 * rng.uniform(0.9, 1.1)))
        if rng.random() < 0.85
        else max(smallest, n1 // 2)
    )
    p2 = float(np.exp(rng.uniform(math.log(least_risk), math.log(0.9))))
    p1 = min(0.9, p2 * float(np.exp(rng.normal(0.0, 0.4))))
    return int(rng.binomial(n1, p1)), n1, int(rng.binomial(n2, p2)), n2


Z = {0.90: 1.6448536269514722, 0.95: 1.959963984540054, 0.99: 2.5758293035489004}


def log_risk_ratio(table: tuple[int, int, int, int], level: float = 0.95) -> tuple[float, float, float]:
    """Risk ratio with the log interval."""
    a, n1, c, n2 = table
    ratio = (a / n1) / (c / n2)
    half = Z[level] * math.sqrt(1 / a - 1 / n1 + 1 / c - 1 / n2)
    return ratio, ratio * math.exp(-half), ratio * math.exp(half)


def logit_odds_ratio(table: tuple[int, int, int, int], level: float = 0.95) -> tuple[float, float, float]:
    """Odds ratio with the logit interval."""
    a, n1, c, n2 = table
    ratio = a * (n2 - c) / (c * (n1 - a))
    half = Z[level] * math.sqrt(1 / a + 1 / (n1 - a) + 1 / c + 1 / (n2 - c))
    return ratio, ratio * math.exp(-half), ratio * math.exp(half)


def simple_difference(table: tuple[int, int, int, int], level: float = 0.95) -> tuple[float, float, float]:
    """Risk difference with the plain interval."""
    a, n1, c, n2 = table
    p1, p2 = a / n1, c / n2
    half = Z[level] * math.sqrt(p1 * (1 - p1) / n1 + p2 * (1 - p2) / n2)
    return p1 - p2, p1 - p2 - half, p1 - p2 + half


def hybrid_difference(table: tuple[int, int, int, int]) -> tuple[float, float, float]:
    """Risk difference with Newcombe's interval, by statsmodels."""
    a, n1, c, n2 = table
    low, high = confint_proportions_2indep(a, n1, c, n2, method="newcomb", compare="diff")
    return a / n1 - c / n2, float(low), float(high)


def p_of(table: tuple[int, int, int, int], test: str) -> float:
    """P by scipy."""
    a, n1, c, n2 = table
    cells = np.array([[a, n1 - a], [c, n2 - c]])
    if test == "fisher":
        return float(stats.fisher_exact(cells).pvalue)
    return float(stats.chi2_contingency(cells, correction=test == "yates").pvalue)


def print_p(p: float, rng: np.random.Generator) -> tuple[str, str]:
    """A p as a paper prints it: operator and digits."""
    if p < 0.001:
        return "<", "0.001"
    return "=", f"{p:.3f}" if p < 0.01 or rng.random() < 0.5 else f"{p:.2f}"


def _add_p(trial: Trial, p: float, rng: np.random.Generator) -> None:
    operator, text = print_p(p, rng)
    trial.claims.append(claim("p", "p_value", text, operator=operator))


def _fix(value: float, decimals: int) -> str:
    return f"{value:.{decimals}f}".replace("-", "−")


def full(table: tuple[int, int, int, int]) -> bool:
    """Whether no cell is empty, so that every plain formula has a value."""
    a, n1, c, n2 = table
    return 0 < a < n1 and 0 < c < n2


def print_arms(trial: Trial, rng: np.random.Generator, *, exact: bool = False) -> None:
    """Counts and percentages of both arms, some of them."""
    a, n1, c, n2 = trial.table
    form = "all" if exact else rng.choice(["counts", "all", "all", "percent"])
    decimals = int(rng.choice([0, 1, 1, 1, 2]))
    for arm, events, total in ((ARMS[0], a, n1), (ARMS[1], c, n2)):
        if form != "percent":
            trial.claims.append(claim(f"{arm}-events", "events", str(events), arm))
        trial.claims.append(claim(f"{arm}-total", "total", str(total), arm))
        if form != "counts":
            trial.claims.append(claim(f"{arm}-risk", "risk", f"{100 * events / total:.{decimals}f}", arm))


def print_measures(trial: Trial, rng: np.random.Generator, *, share: float = 0.45, basis: str = "unstated") -> None:
    """A random choice of measures with intervals, and a p."""
    if not full(trial.table):
        return
    table = trial.table
    level = float(rng.choice([0.95, 0.95, 0.95, 0.95, 0.90, 0.99]))
    two = int(rng.choice([1, 2, 2, 2, 3]))
    one = int(rng.choice([0, 1, 1, 1, 2]))

    def ratio(key: str, quantity: Quantity, values: tuple[float, float, float]) -> None:
        texts = [f"{v:.{two}f}" for v in values]
        if float(texts[1]) > 0:
            trial.claims.append(claim(key, quantity, texts[0], low=texts[1], high=texts[2], level=level, basis=basis))

    if rng.random() < share:
        ratio("risk_ratio", "risk_ratio", log_risk_ratio(table, level))
    if rng.random() < share:
        ratio("odds_ratio", "odds_ratio", logit_odds_ratio(table, level))
    if rng.random() < share:
        values = simple_difference(table, level) if level != 0.95 or rng.random() < 0.6 else hybrid_difference(table)
        texts = [_fix(100 * v, one) for v in values]
        trial.claims.append(
            claim("risk_difference", "risk_difference", texts[0], low=texts[1], high=texts[2], level=level, basis=basis)
        )
    if rng.random() < share:
        value, low, high = log_risk_ratio(table, level)
        texts = [_fix(100 * (1 - v), 0 if two < 3 else 1) for v in (value, high, low)]
        trial.claims.append(
            claim("reduction", "relative_risk_reduction", texts[0], low=texts[1], high=texts[2], level=level, basis=basis)
        )
    _print_needed_and_p(trial, rng, share, basis)


def _print_needed_and_p(trial: Trial, rng: np.random.Generator, share: float, basis: str) -> None:
    difference = simple_difference(trial.table)[0]
    if rng.random() < share and abs(difference) > 1e-4:
        rounded = math.ceil(abs(1 / difference) - 1e-9)
        trial.claims.append(claim("needed", "number_needed_to_treat", str(rounded), horizon="12 months", basis=basis))
    if rng.random() < 0.7:
        operator, text = print_p(p_of(trial.table, str(rng.choice(["pearson", "pearson", "fisher", "yates"]))), rng)
        if float(text) <= 1:
            trial.claims.append(claim("p", "p_value", text, operator=operator, basis=basis))


def plain_trial(seed: int, **ranges: Any) -> Trial:
    """A trial printed by usual methods only."""
    rng = np.random.default_rng(seed)
    trial = Trial(draw_table(rng, **ranges))
    print_arms(trial, rng)
    print_measures(trial, rng)
    return trial


# -- figures from outside -------------------------------------------------------------------------------


def _strata(trial: Trial, rng: np.random.Generator) -> np.ndarray[Any, np.dtype[Any]] | None:
    """The true table split at random into three strata of different risk: rows of 2 x 2 counts."""
    a, n1, c, n2 = trial.table
    shares = rng.dirichlet([6.0, 6.0, 6.0])
    tables = np.zeros((2, 2, 3))
    risks = shares * rng.uniform(0.6, 1.4, 3)
    events = [rng.multinomial(k, risks / risks.sum()) for k in (a, c)]
    rest = [rng.multinomial(n - k, shares) for k, n in ((a, n1), (c, n2))]
    for arm in (0, 1):
        tables[arm, 0], tables[arm, 1] = events[arm], rest[arm]
    return tables if (tables > 0).all() else None


def outside_trial(seed: int) -> Trial:
    """A trial one of whose figures comes from a model or a habit that the program does not know."""
    rng = np.random.default_rng(seed)
    trial = Trial(draw_table(rng, smallest=60, largest=4000, least_risk=0.03))
    if not full(trial.table):
        return plain_trial(seed)
    kind = str(rng.choice(["mantel_haenszel", "logistic", "cox", "kaplan_meier", "truncated", "twice_rounded", "sub_total"]))
    print_arms(trial, rng, exact=True)
    with warnings.catch_warnings():
        warnings.simplefilter("ignore")
        _OUTSIDE[kind](trial, rng)
    return trial


def _mantel_haenszel(trial: Trial, rng: np.random.Generator) -> None:
    tables = _strata(trial, rng)
    if tables is None:
        return
    pooled = StratifiedTable(tables)
    low, high = pooled.oddsratio_pooled_confint()
    texts = [f"{v:.2f}" for v in (pooled.oddsratio_pooled, low, high)]
    trial.claims.append(claim("odds_ratio", "odds_ratio", texts[0], low=texts[1], high=texts[2]))
    _add_p(trial, float(pooled.test_null_odds(correction=False).pvalue), rng)
    trial.outside |= {"odds_ratio", "p"}


def _logistic(trial: Trial, rng: np.random.Generator) -> None:
    tables = _strata(trial, rng)
    if tables is None:
        return
    counts = np.array([[tables[arm, 0, s], tables[arm, 1, s]] for arm in (0, 1) for s in range(3)])
    design = np.array([[1.0, 1.0 - arm, float(s == 1), float(s == 2)] for arm in (0, 1) for s in range(3)])
    fitted = sm.GLM(counts, design, family=sm.families.Binomial()).fit()
    low, high = fitted.conf_int()[1]
    texts = [f"{math.exp(v):.2f}" for v in (fitted.params[1], low, high)]
    trial.claims.append(claim("odds_ratio", "odds_ratio", texts[0], low=texts[1], high=texts[2]))
    _add_p(trial, float(fitted.pvalues[1]), rng)
    trial.outside |= {"odds_ratio", "p"}


def _times(trial: Trial, rng: np.random.Generator) -> tuple[Any, Any, Any]:
    """Times, whether an event, and arm: everybody followed up to 1 year with some lost before."""
    a, n1, c, n2 = trial.table
    arm = np.concatenate([np.ones(n1), np.zeros(n2)])
    event = np.concatenate([np.arange(n1) < a, np.arange(n2) < c])
    time = np.where(
        event, rng.uniform(0.02, 1.0, arm.size), np.where(rng.random(arm.size) < 0.15, rng.uniform(0.2, 1.0, arm.size), 1.0)
    )
    return time, event, arm


def _cox(trial: Trial, rng: np.random.Generator) -> None:
    time, event, arm = _times(trial, rng)
    fitted = sm.PHReg(time, arm[:, None], status=event.astype(int)).fit()
    low, high = fitted.conf_int()[0]
    texts = [f"{math.exp(v):.2f}" for v in (fitted.params[0], low, high)]
    trial.claims.append(claim("hazard_ratio", "hazard_ratio", texts[0], low=texts[1], high=texts[2]))
    _add_p(trial, float(fitted.pvalues[0]), rng)
    trial.outside |= {"hazard_ratio", "p"}


def _kaplan_meier(trial: Trial, rng: np.random.Generator) -> None:
    time, event, arm = _times(trial, rng)
    trial.claims = [c for c in trial.claims if c.quantity != "risk"]
    for name, which in (("intervention", 1.0), ("comparator", 0.0)):
        survival = sm.SurvfuncRight(time[arm == which], event[arm == which].astype(int))
        risk = 1.0 - float(survival.surv_prob[-1])
        key = f"{name}-risk"
        trial.claims.append(claim(key, "risk", f"{100 * risk:.1f}", name, risk_kind="kaplan_meier"))  # type: ignore[arg-type]
        trial.outside.add(key)


def _cut(value: float, decimals: int) -> str:
    return f"{math.trunc(value * 10**decimals) / 10**decimals:.{decimals}f}"


def _truncated(trial: Trial, rng: np.random.Generator) -> None:
    trial.claims = [c for c in trial.claims if c.quantity != "risk"]
    a, n1, c, n2 = trial.table
    for name, events, total in ((ARMS[0], a, n1), (ARMS[1], c, n2)):
        trial.claims.append(claim(f"{name}-risk", "risk", _cut(100 * events / total, 1), name))
        trial.outside.add(f"{name}-risk")
    texts = [_cut(v, 2) for v in log_risk_ratio(trial.table)]
    if float(texts[1]) > 0:
        trial.claims.append(claim("risk_ratio", "risk_ratio", texts[0], low=texts[1], high=texts[2]))
        trial.outside.add("risk_ratio")


def _twice_rounded(trial: Trial, rng: np.random.Generator) -> None:
    trial.claims = [c for c in trial.claims if c.quantity != "risk"]
    a, n1, c, n2 = trial.table
    for name, events, total in ((ARMS[0], a, n1), (ARMS[1], c, n2)):
        trial.claims.append(claim(f"{name}-risk", "risk", f"{round(round(100 * events / total, 2) + 1e-9, 1):.1f}", name))
        trial.outside.add(f"{name}-risk")
    first, second = (round(100 * e / n, 1) for e, n in ((a, n1), (c, n2)))
    trial.claims.append(claim("risk_difference", "risk_difference", _fix(first - second, 1)))
    trial.outside.add("risk_difference")
    if second:
        trial.claims.append(claim("risk_ratio", "risk_ratio", f"{first / second:.2f}"))
        trial.outside.add("risk_ratio")


def _sub_total(trial: Trial, rng: np.random.Generator) -> None:
    a, n1, _, _ = trial.table
    known = max(a, int(n1 * 0.9))
    trial.claims = [c for c in trial.claims if c.id != "intervention-risk"]
    trial.claims.append(claim("intervention-known", "total", str(known), "intervention", total_kind="safety"))
    trial.claims.append(claim("intervention-risk", "risk", f"{100 * a / known:.1f}", "intervention"))
    trial.outside.add("intervention-risk")


_OUTSIDE = {
    "mantel_haenszel": _mantel_haenszel,
    "logistic": _logistic,
    "cox": _cox,
    "kaplan_meier": _kaplan_meier,
    "truncated": _truncated,
    "twice_rounded": _twice_rounded,
    "sub_total": _sub_total,
}
