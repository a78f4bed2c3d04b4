"""The one list of methods. The panels, the API, the Methods page and the hand-out all read it.

Adding a method: one function in the module of its scale, one row here, one test table. A key, once
released, is never renamed (`tests/measures/test_registry.py` holds the list).
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass
from typing import Literal

from app.measures import difference, exact, odds, proportion, pvalues, ratio, score
from app.measures.fourfold import Counts, Floats, Fourfold
from app.measures.interval import Interval

Measure = Literal["risk", "risk_difference", "risk_ratio", "odds_ratio"]
PrintedUse = Literal["usual", "seldom", "never"]


@dataclass(frozen=True, slots=True)
class Described:
    """What every registered row tells of itself.

    `printed_use` says how often papers print it; `caveat` when it misleads; `sources` are keys of
    `app.sources.SOURCES`.
    """

    key: str
    name: str
    formula: str
    caveat: str
    sources: tuple[str, ...]
    printed_use: PrintedUse
    default: bool = False


@dataclass(frozen=True, slots=True)
class RiskMethod(Described):
    """An interval for one risk: (events, total, confidence level) -> Interval."""

    interval: Callable[[Counts, Counts, float], Interval] = proportion.wilson


@dataclass(frozen=True, slots=True)
class EffectMethod(Described):
    """An interval for a measure of two arms: (table, confidence level) -> Interval."""

    measure: Measure = "risk_difference"
    interval: Callable[[Fourfold, float], Interval] = difference.newcombe


@dataclass(frozen=True, slots=True)
class NoDifferenceTest(Described):
    """A test of no difference: table -> p, and table -> its natural log."""

    p: Callable[[Fourfold], Floats] = pvalues.pearson
    log_p: Callable[[Fourfold], Floats] = pvalues.log_pearson


RISK_METHODS: tuple[RiskMethod, ...] = (
    RiskMethod(
        key="wilson",
        name="Wilson score",
        formula="all t with (p − t)² ≤ z² t(1 − t)/n",
        caveat="Slightly short of its level for some risks near 0 or 1; never outside 0 to 1.",
        sources=("wilson_1927", "newcombe_1998_single"),
        printed_use="usual",
        default=True,
        interval=proportion.wilson,
    ),
    RiskMethod(
        key="clopper_pearson",
        name="exact (Clopper–Pearson)",
        formula="P(X ≥ x; l) = α/2 and P(X ≤ x; u) = α/2, binomial",
        caveat="Never below its level, often well above it: wide.",
        sources=("clopper_pearson_1934",),
        printed_use="usual",
        interval=proportion.clopper_pearson,
    ),
)

EFFECT_METHODS: tuple[EffectMethod, ...] = (
    EffectMethod(
        key="miettinen_nurminen",
        measure="risk_difference",
        name="Miettinen–Nurminen score",
        formula="all D with (RD − D)² ≤ z² V(D) N/(N − 1), V at the fit restricted to D",
        caveat="Sound from about 20 people per arm; agrees with the risk and odds ratio about no effect.",
        sources=("miettinen_nurminen_1985", "mee_1984"),
        printed_use="usual",
        default=True,
        interval=score.miettinen_nurminen_difference,
    ),
    EffectMethod(
        key="newcombe",
        measure="risk_difference",
        name="Newcombe hybrid score",
        formula="RD − √((p₁ − l₁)² + (u₂ − p₂)²) to RD + √((u₁ − p₁)² + (p₂ − l₂)²), l and u by Wilson",
        caveat="Sound in small samples; may part from the test about no effect by a little.",
        sources=("newcombe_1998_difference",),
        printed_use="usual",
        interval=difference.newcombe,
    ),
    EffectMethod(
        key="miettinen_nurminen",
        measure="risk_ratio",
        name="Miettinen–Nurminen score",
        formula="all F with (p₁ − F p₂)² ≤ z² V(F) N/(N − 1), V at the fit restricted to F",
        caveat="Defined with empty cells; agrees with the difference and odds ratio about no effect.",
        sources=("miettinen_nurminen_1985",),
        printed_use="usual",
        default=True,
        interval=score.miettinen_nurminen_ratio,
    ),
    EffectMethod(
        key="koopman",
        measure="risk_ratio",
        name="Koopman score",
        formula="all F with (p₁ − F p₂)² ≤ z² V(F)",
        caveat="A little narrower than Miettinen–Nurminen in small samples.",
        sources=("koopman_1984",),
        printed_use="usual",
        interval=score.koopman,
    ),
    EffectMethod(
        key="katz_log",
        measure="risk_ratio",
        name="log (Katz)",
        formula="exp(ln RR ∓ z √(1/a − 1/n₁ + 1/c − 1/n₂))",
        caveat="Undefined with no events in an arm; of no width when everybody has the event. The one papers print most.",
        sources=("katz_1978",),
        printed_use="usual",
        interval=ratio.katz_log,
    ),
    EffectMethod(
        key="miettinen_nurminen",
        measure="odds_ratio",
        name="Miettinen–Nurminen score",
        formula="(a − A)² (1/A + 1/(n₁ − A) + 1/(m − A) + 1/(n₂ − m + A)) = z² N/(N − 1), OR at A",
        caveat="Defined with empty cells; agrees with the difference and risk ratio about no effect.",
        sources=("miettinen_nurminen_1985", "cornfield_1956"),
        printed_use="usual",
        default=True,
        interval=score.miettinen_nurminen_odds,
    ),
    EffectMethod(
        key="woolf_logit",
        measure="odds_ratio",
        name="logit (Woolf)",
        formula="exp(ln OR ∓ z √(1/a + 1/b + 1/c + 1/d))",
        caveat="Undefined with any empty cell; wide in small samples. The one papers print most.",
        sources=("woolf_1955",),
        printed_use="usual",
        interval=odds.woolf_logit,
    ),
)

TESTS: tuple[NoDifferenceTest, ...] = (
    NoDifferenceTest(
        key="n_minus_1",
        name="N − 1 chi-squared",
        formula="(ad − bc)² (N − 1)/(n₁ n₂ m (N − m))",
        caveat="The test that the Miettinen–Nurminen intervals invert. Rough when fewer than one event is expected in an arm.",
        sources=("campbell_2007",),
        printed_use="usual",
        default=True,
        p=pvalues.n_minus_1,
        log_p=pvalues.log_n_minus_1,
    ),
    NoDifferenceTest(
        key="pearson",
        name="Pearson chi-squared",
        formula="(ad − bc)² N/(n₁ n₂ m (N − m))",
        caveat="Rough in small tables. The one papers print most.",
        sources=("pearson_1900",),
        printed_use="usual",
        p=pvalues.pearson,
        log_p=pvalues.log_pearson,
    ),
    NoDifferenceTest(
        key="fisher_irwin",
        name="Fisher exact",
        formula="sum of the probabilities, margins fixed, of all tables as probable or less",
        caveat="Never too small for its level, often too large. Other two-sided rules exist and differ.",
        sources=("fisher_1935", "irwin_1935"),
        printed_use="usual",
        p=exact.fisher_irwin,
        log_p=exact.log_fisher_irwin,
    ),
)


def effect_methods(measure: Measure) -> tuple[EffectMethod, ...]:
    """The registered interval methods of one measure, the default first."""
    return tuple(method for method in EFFECT_METHODS if method.measure == measure)
