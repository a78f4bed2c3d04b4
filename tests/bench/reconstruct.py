"""The search for tables and the verdicts: how long they take, what they find, and what passes them by."""

from __future__ import annotations

import time
from collections.abc import Callable, Sequence
from statistics import median

import numpy as np

from app.measures.fourfold import Fourfold
from app.measures.odds import odds_ratio, woolf_logit
from app.measures.ratio import katz_log, risk_ratio
from app.printed.claims import Claim
from app.reconstruct.judge import check_outcome
from app.reconstruct.p_prints import AskedP
from app.reconstruct.search import Problem, search
from app.reconstruct.stated import stated
from app.reconstruct.verdict import OutcomeCheck
from tests.reconstruct.faults_maker import PLANTED, planted
from tests.reconstruct.test_constructed_truth import hidden, holds_truth
from tests.reconstruct.trials_maker import (
    ARMS,
    Trial,
    claim,
    draw_table,
    full,
    log_risk_ratio,
    outside_trial,
    p_of,
    plain_trial,
)

TRIALS = 2000
PLANTED_TRIALS = 60
SLIPS = 300

Row = tuple[str, str]


def _ratio(a: int, c: int, n: int, decimals: int, *, odds: bool = False) -> Claim:
    table = Fourfold(a, n, c, n)
    limits = (woolf_logit if odds else katz_log)(table, 0.95)
    estimate = (odds_ratio if odds else risk_ratio)(table)
    texts = [f"{float(v):.{decimals}f}" for v in (estimate, limits.low, limits.high)]
    return claim("ratio", "odds_ratio" if odds else "risk_ratio", texts[0], low=texts[1], high=texts[2])


def _totals(n: int) -> list[Claim]:
    return [claim(f"{arm}-total", "total", str(n), arm) for arm in ARMS]


def _problems() -> list[tuple[str, Problem]]:
    found = [
        (
            f"{'OR' if odds else 'RR'} with interval to {d} decimals, {n:,} an arm, {100 * c // n}% with the event",
            stated([*_totals(n), _ratio(a, c, n, d, odds=odds)]).problem(),
        )
        for n, a, c, d, odds in (
            (200, 22, 33, 2, False),
            (1_200, 132, 198, 2, False),
            (5_000, 550, 820, 2, False),
            (25_000, 2_750, 3_300, 2, False),
            (50_000, 5_200, 6_000, 2, False),
            (50_000, 500, 600, 2, False),
            (50_000, 5_200, 6_000, 3, False),
            (5_000, 550, 820, 1, False),
            (200, 22, 33, 2, True),
            (5_000, 550, 820, 2, True),
        )
    ]
    percent = [claim(f"{arm}-risk", "risk", f"{p}", arm) for arm, p in zip(ARMS, ("11.0", "16.4"), strict=True)]
    found.append(("percentages to one decimal, 25,000 an arm", stated([*_totals(25_000), *percent]).problem()))
    for n in (200, 1_000, 5_000):
        runs = stated(_totals(n)).problem().runs
        found.append(
            (
                f"P=0.06 by any usual test, {n:,} an arm",
                Problem(runs, p_values=(AskedP(claim("p", "p_value", "0.06").said, "="),)),
            )
        )
    return found


def _searches() -> list[Row]:
    rows = []
    for name, problem in _problems():
        taken, found = [], None
        for _ in range(3):
            start = time.perf_counter()
            found = search(problem)
            taken.append(time.perf_counter() - start)
        told = (
            "open"
            if found is None
            else f"{found.count:>7,} tables of {found.candidates:>9,}{'' if found.complete else ', band only'}"
        )
        rows.append((name, f"{1000 * median(taken):8.1f} ms  {told}"))
    return rows


def _truth(name: str, make: Callable[[int], Trial]) -> Row:
    missed = against = outside = 0
    taken = []
    for seed in range(TRIALS):
        trial = make(seed)
        start = time.perf_counter()
        check = check_outcome(trial.claims)
        taken.append(time.perf_counter() - start)
        missed += not holds_truth(trial, check)
        outside += len(trial.outside)
        against += sum(j.verdict == "does_not_agree" for j in check.judgements)
    times = np.sort(taken) * 1000
    share = f" of {outside} figures from outside" if outside else ""
    return (
        f"{TRIALS} trials {name}",
        f"{missed} missed, {against} found against{share}; a check takes {times[len(times) // 2]:.0f} ms, 95% under "
        f"{times[int(0.95 * len(times))]:.0f}, at most {times[-1]:.0f}",
    )


def _of(check: OutcomeCheck, key: str) -> str:
    return next(j.verdict for j in check.judgements if j.claim.id == key)


def _planted(kind: str) -> Row:
    seen = found = named = buried = 0
    for seed in range(PLANTED_TRIALS):
        trial = planted(kind, seed)
        if trial is None:
            continue
        check = check_outcome(trial.claims)
        if hidden(check, trial.faulty):
            buried += 1
            continue
        judged = next(j for j in check.judgements if j.claim.id == trial.faulty)
        seen += 1
        found += judged.verdict in ("does_not_agree", "agrees_under_another_reading")
        named += kind in {*judged.readings, *judged.findings} or "impossible_percentage" in judged.findings
    return f"planted: {kind}", f"found {found} of {seen}, named {named}; {buried} hidden by rounding"


def _passing(change: Callable[[Trial, np.random.Generator], Claim | None], trials: int) -> tuple[int, int]:
    """How many of so many slips pass as agreeing."""
    passed = tried = 0
    for seed in range(trials):
        rng = np.random.default_rng([seed, 77])
        trial = Trial(draw_table(rng, smallest=40, largest=5000, least_risk=0.03))
        if not full(trial.table):
            continue
        slipped = change(trial, rng)
        if slipped is None:
            continue
        a, n1, c, n2 = trial.table
        claims = [claim(f"{arm}-events", "events", str(e), arm) for arm, e in ((ARMS[0], a), (ARMS[1], c))]
        claims += [claim(f"{arm}-total", "total", str(n), arm) for arm, n in ((ARMS[0], n1), (ARMS[1], n2))]
        tried += 1
        passed += _of(check_outcome([*claims, slipped]), slipped.id) in ("agrees", "agrees_within_rounding")
    return passed, tried


def _p_off(by: float) -> Callable[[Trial, np.random.Generator], Claim | None]:
    def change(trial: Trial, rng: np.random.Generator) -> Claim | None:
        p = p_of(trial.table, "pearson")
        return claim("x", "p_value", f"{p + by:.2f}", basis="crude") if 0.005 < p < 0.95 - by else None

    return change


def _limit_off(units: int) -> Callable[[Trial, np.random.Generator], Claim | None]:
    def change(trial: Trial, rng: np.random.Generator) -> Claim | None:
        ratio, low, high = log_risk_ratio(trial.table)
        side = int(rng.integers(2))
        ends = [low, high]
        ends[side] += float(rng.choice([-1, 1])) * units / 100
        texts = [f"{v:.2f}" for v in (ratio, *ends)]
        return claim("x", "risk_ratio", texts[0], low=texts[1], high=texts[2], basis="crude") if float(texts[1]) > 0 else None

    return change


def p_passing(by: float, trials: int = SLIPS) -> tuple[int, int]:
    """How many p, printed so much too large, pass, and of how many."""
    return _passing(_p_off(by), trials)


def limits_passing(units: int, trials: int = SLIPS) -> tuple[int, int]:
    """How many risk ratios, one limit so many units off, pass, and of how many."""
    return _passing(_limit_off(units), trials)


def blind_spot() -> list[Row]:
    """Small slips that pass: p off in the second decimal, one limit off by a few units of its last digit."""
    told = [(f"p printed {by:.2f} too large, two decimals", p_passing(by)) for by in (0.01, 0.02, 0.03)]
    told += [(f"one limit {units} of its last digit off", limits_passing(units)) for units in (1, 2, 3)]
    return [(name, f"{passed} of {tried} pass ({100 * passed / tried:.0f}%)") for name, (passed, tried) in told]


def rows() -> Sequence[Row]:
    """All measurements of this part."""
    return [
        *_searches(),
        _truth("printed by usual methods", plain_trial),
        _truth("with a figure from models and habits unknown here", outside_trial),
        *(_planted(kind) for kind in PLANTED),
        *blind_spot(),
    ]
