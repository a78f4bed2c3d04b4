"""The measures against the same work by a library, table by table."""

from __future__ import annotations

import time
from collections.abc import Callable, Iterator
from functools import partial
from statistics import median

import numpy as np
from scipy import stats
from statsmodels.stats.proportion import confint_proportions_2indep

from app.appraisal.effects import effects_of
from app.measures.fourfold import Fourfold
from app.measures.registry import EFFECT_METHODS, TESTS, EffectMethod

_MANY = 200_000
_FEW = 150


def _seconds(work: Callable[[], object], repeats: int = 5) -> float:
    taken = []
    for _ in range(repeats):
        start = time.process_time()
        work()
        taken.append(time.process_time() - start)
    return median(taken)


def _tables(count: int) -> Fourfold:
    random = np.random.default_rng(20261201)
    n1, n2 = random.integers(20, 2000, count), random.integers(20, 2000, count)
    return Fourfold((n1 * random.random(count)).astype(int), n1, (n2 * random.random(count)).astype(int), n2)


def _by_library(name: str, table: Fourfold) -> Callable[[], object] | None:
    cells = list(zip(*(x.tolist() for x in table._integers()), strict=True))
    compare = {"risk_ratio": "ratio", "odds_ratio": "odds-ratio", "risk_difference": "diff"}
    measure, _, method = name.partition(" ")
    library = {"miettinen_nurminen": "score", "newcombe": "newcomb", "katz_log": "log", "woolf_logit": "logit"}.get(method)
    if measure == "p":
        if method != "fisher_irwin":
            return None
        return lambda: [stats.fisher_exact(np.array([[a, n1 - a], [c, n2 - c]])) for a, n1, c, n2 in cells]
    # The library's score interval of the difference is wrong (tests/checks/METHODS.md, trap 1): not timed.
    if library is None or (measure, library) == ("risk_difference", "score"):
        return None
    return lambda: [
        confint_proportions_2indep(a, n1, c, n2, method=library, compare=compare[measure]) for a, n1, c, n2 in cells
    ]


def _interval(method: EffectMethod, table: Fourfold) -> object:
    return method.interval(table, 0.95)


def rows() -> Iterator[tuple[str, str]]:
    """Each registered method: nanoseconds a table, and how many times faster than the library."""
    many, few = _tables(_MANY), _tables(_FEW)
    work: list[tuple[str, Callable[[Fourfold], object], int]] = [
        (f"{m.measure} {m.key}", partial(_interval, m), _MANY) for m in EFFECT_METHODS
    ]
    work += [(f"p {t.key}", t.p, _MANY // 10) for t in TESTS]
    for name, function, count in work:
        table = many if count == _MANY else _tables(count)
        ours = _seconds(partial(function, table)) / count
        library = _by_library(name, few)
        with np.errstate(all="ignore"):
            theirs = f"{_seconds(library, 3) / _FEW / ours:10,.0f} times faster" if library else ""
        yield name, f"{ours * 1e9:10,.0f} ns {theirs}"
    one = Fourfold(46, 418, 67, 409)
    yield "whole panel of one table", f"{_seconds(lambda: effects_of(one, 0.95), 21) * 1e3:10.2f} ms"
