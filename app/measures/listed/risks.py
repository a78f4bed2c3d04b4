"""Intervals for one risk."""

from __future__ import annotations

from app.measures import proportion
from app.measures.described import RiskMethod

_BINOMIAL = "Each person’s outcome is independent, with one risk for all."

RISK_METHODS: tuple[RiskMethod, ...] = (
    RiskMethod(
        key="wilson",
        name="Wilson score",
        formula=r"\frac{x + z^2/2 \mp z\sqrt{x(n-x)/n + z^2/4}}{n + z^2}",
        assumes=_BINOMIAL,
        caveat="Slightly short of its level for some risks near 0 or 1; never outside 0 to 1.",
        sources=("wilson_1927", "newcombe_1998_single"),
        printed_use="usual",
        default=True,
        interval=proportion.wilson,
    ),
    RiskMethod(
        key="wilson_cc",
        name="Wilson score, continuity corrected",
        formula=r"\text{Wilson's low at } x - \tfrac12,\ \text{high at } x + \tfrac12",
        assumes=_BINOMIAL,
        caveat="As wide as the exact interval; the correction buys coverage by width.",
        sources=("newcombe_1998_single",),
        printed_use="seldom",
        interval=proportion.wilson_cc,
    ),
    RiskMethod(
        key="clopper_pearson",
        name="exact (Clopper–Pearson)",
        formula=r"P(X \ge x \mid l) = \alpha/2, \quad P(X \le x \mid u) = \alpha/2",
        assumes=_BINOMIAL,
        caveat="Never below its level, often well above it: wide.",
        sources=("clopper_pearson_1934",),
        printed_use="usual",
        interval=proportion.clopper_pearson,
    ),
    RiskMethod(
        key="mid_p",
        name="mid-P",
        formula=r"P(X > x \mid l) + \tfrac12 P(X = x \mid l) = \alpha/2, \text{ and likewise } u",
        assumes=_BINOMIAL,
        caveat="Close to its level on average, at times a little below.",
        sources=("berry_armitage_1995", "newcombe_1998_single"),
        printed_use="seldom",
        interval=proportion.mid_p,
    ),
    RiskMethod(
        key="agresti_coull",
        name="Agresti–Coull",
        formula=r"\tilde p \mp z\sqrt{\tilde p(1-\tilde p)/\tilde n},\quad \tilde n = n + z^2,\ \tilde p = (x + z^2/2)/\tilde n",
        assumes=_BINOMIAL,
        caveat="A little wider than Wilson’s; limits may leave 0 to 1.",
        sources=("agresti_coull_1998",),
        printed_use="seldom",
        interval=proportion.agresti_coull,
    ),
    RiskMethod(
        key="jeffreys_raw",
        name="Jeffreys, equal tails",
        formula=r"\alpha/2 \text{ and } 1-\alpha/2 \text{ quantiles of } \mathrm{Beta}(x + \tfrac12,\ n - x + \tfrac12)",
        assumes=_BINOMIAL,
        caveat="With no events, or all, the observed risk lies outside.",
        sources=("brown_cai_dasgupta_2001",),
        printed_use="seldom",
        interval=proportion.jeffreys_raw,
    ),
    RiskMethod(
        key="jeffreys_bcd",
        name="Jeffreys, ends moved",
        formula=r"\text{as Jeffreys, with } l = 0 \text{ at } x = 0 \text{ and } u = 1 \text{ at } x = n",
        assumes=_BINOMIAL,
        caveat="Short of its level for some risks very near 0 or 1.",
        sources=("brown_cai_dasgupta_2001",),
        printed_use="seldom",
        interval=proportion.jeffreys_bcd,
    ),
    RiskMethod(
        key="wald",
        name="plain (Wald)",
        formula=r"p \mp z\sqrt{p(1-p)/n}",
        assumes=_BINOMIAL + " Many events and many non-events.",
        caveat="Far short of its level for rare events; of no width with none.",
        sources=("newcombe_1998_single",),
        printed_use="usual",
        interval=proportion.wald,
    ),
)
