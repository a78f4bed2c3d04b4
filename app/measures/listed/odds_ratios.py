"""Intervals for the odds ratio."""

from __future__ import annotations

from app.measures import conditional, odds, score
from app.measures.described import EffectMethod

_ARMS = "Independent people in two independent arms, each arm with one risk."
_MARGINS = "Both margins are taken as given."
_SCORE = r"(a - A)^2\left(\tfrac1A + \tfrac1{n_1-A} + \tfrac1{m-A} + \tfrac1{n_2-m+A}\right) = z^2%s,\quad \mathrm{OR} = \tfrac{A(n_2-m+A)}{(n_1-A)(m-A)}"

ODDS_RATIOS: tuple[EffectMethod, ...] = (
    EffectMethod(
        key="miettinen_nurminen",
        measure="odds_ratio",
        name="Miettinen–Nurminen score",
        formula=_SCORE % r"\,\tfrac{N}{N-1}",
        assumes=_ARMS,
        caveat="A little short of its level at some risks below 20 people an arm.",
        sources=("miettinen_nurminen_1985",),
        printed_use="usual",
        default=True,
        interval=score.miettinen_nurminen_odds,
    ),
    EffectMethod(
        key="woolf_logit",
        measure="odds_ratio",
        name="logit (Woolf)",
        formula=r"\exp\left(\ln \mathrm{OR} \mp z\sqrt{1/a + 1/b + 1/c + 1/d}\right)",
        assumes=_ARMS + " The logarithm of the ratio is about normal.",
        caveat="Undefined with any empty cell; wide in small samples. The one papers print most.",
        sources=("woolf_1955",),
        printed_use="usual",
        interval=odds.woolf_logit,
    ),
    EffectMethod(
        key="cornfield_score",
        measure="odds_ratio",
        name="Cornfield score",
        formula=_SCORE % "",
        assumes=_ARMS,
        caveat="A little narrower than Miettinen–Nurminen in small samples.",
        sources=("cornfield_1956",),
        printed_use="usual",
        interval=score.cornfield_score,
    ),
    EffectMethod(
        key="gart_half",
        measure="odds_ratio",
        name="logit, half added to all cells",
        formula=r"\text{as logit, with } \tfrac12 \text{ in every cell}",
        assumes=_ARMS,
        caveat="Its estimate is the adjusted one, drawn towards 1; short of its level in small samples.",
        sources=("gart_1966",),
        printed_use="usual",
        interval=odds.gart_half,
        estimate=odds.gart_half_estimate,
    ),
    EffectMethod(
        key="inv_sinh",
        measure="odds_ratio",
        name="inverse hyperbolic sine",
        formula=r"\exp\left(\ln \mathrm{OR} \mp 2\sinh^{-1}(\tfrac{z}{2}\mathrm{SE})\right)",
        assumes=_ARMS,
        caveat="Undefined with any empty cell.",
        sources=("newcombe_2001",),
        printed_use="never",
        interval=odds.inv_sinh,
    ),
    EffectMethod(
        key="fisher_exact_cond",
        measure="odds_ratio",
        name="exact conditional",
        formula=r"P(X \ge a \mid m, l) = \alpha/2,\quad P(X \le a \mid m, u) = \alpha/2",
        assumes=_MARGINS,
        caveat="Never below its level, often well above it: wide. Its estimate is the conditional one, not ad/bc.",
        sources=("fisher_1935", "cornfield_1956"),
        printed_use="usual",
        interval=conditional.fisher_exact_cond,
        estimate=conditional.conditional_estimate,
    ),
    EffectMethod(
        key="midp_exact_cond",
        measure="odds_ratio",
        name="conditional mid-P",
        formula=r"P(X > a \mid m, l) + \tfrac12P(X = a \mid m, l) = \alpha/2, \text{ and likewise } u",
        assumes=_MARGINS,
        caveat="Close to its level on average. Its estimate is the conditional one, not ad/bc.",
        sources=("lancaster_1961", "berry_armitage_1995"),
        printed_use="usual",
        interval=conditional.midp_exact_cond,
        estimate=conditional.conditional_estimate,
    ),
    EffectMethod(
        key="half_when_empty",
        measure="odds_ratio",
        name="logit, half added where a cell is empty",
        formula=r"\text{as logit; with } \tfrac12 \text{ in all cells where one is empty}",
        assumes=_ARMS,
        caveat="For checking print only: a display habit, not another method.",
        sources=("gart_1966",),
        printed_use="usual",
        offered=False,
        interval=odds.half_when_empty,
    ),
)
