"""Pooled estimates and tests over strata."""

from __future__ import annotations

from app.measures import strata
from app.measures.described import StrataMethod, StrataTestMethod

_COMMON = "One and the same effect on this scale in every stratum."

STRATA_METHODS: tuple[StrataMethod, ...] = (
    StrataMethod(
        key="mh_rbg",
        measure="odds_ratio",
        name="Mantel–Haenszel, Robins–Breslow–Greenland",
        formula=r"\frac{\sum a_id_i/N_i}{\sum b_ic_i/N_i}",
        assumes=_COMMON,
        caveat="No interval where a sum is 0.",
        sources=("mantel_haenszel_1959", "robins_breslow_greenland_1986"),
        printed_use="usual",
        default=True,
        pooled=strata.mh_rbg,
    ),
    StrataMethod(
        key="mh_greenland_robins",
        measure="risk_ratio",
        name="Mantel–Haenszel, Greenland–Robins",
        formula=r"\frac{\sum a_in_{2i}/N_i}{\sum c_in_{1i}/N_i}",
        assumes=_COMMON,
        caveat="No interval where a sum is 0.",
        sources=("mantel_haenszel_1959", "greenland_robins_1985"),
        printed_use="usual",
        default=True,
        pooled=strata.mh_greenland_robins_ratio,
    ),
    StrataMethod(
        key="mh_sato",
        measure="risk_difference",
        name="Mantel–Haenszel, Sato",
        formula=r"\frac{\sum (a_in_{2i} - c_in_{1i})/N_i}{\sum n_{1i}n_{2i}/N_i}",
        assumes=_COMMON,
        caveat="Sound for many small strata as for few large ones.",
        sources=("sato_1989",),
        printed_use="usual",
        default=True,
        pooled=strata.mh_sato,
    ),
    StrataMethod(
        key="mh_greenland_robins",
        measure="risk_difference",
        name="Mantel–Haenszel, Greenland–Robins",
        formula=r"\text{the same estimate, another variance}",
        assumes=_COMMON,
        caveat="Rough for many small strata.",
        sources=("greenland_robins_1985",),
        printed_use="usual",
        pooled=strata.mh_greenland_robins_difference,
    ),
)

STRATA_TESTS: tuple[StrataTestMethod, ...] = (
    StrataTestMethod(
        key="cmh",
        name="Cochran–Mantel–Haenszel",
        formula=r"\frac{(\sum a_i - E_i)^2}{\sum V_i}",
        assumes="No effect in any stratum.",
        caveat="Weak where effects run in opposite directions.",
        sources=("mantel_haenszel_1959",),
        printed_use="usual",
        default=True,
        test=strata.cmh,
    ),
    StrataTestMethod(
        key="cmh_cc",
        name="the same, continuity corrected",
        formula=r"\frac{\max(0, |\sum a_i - E_i| - \tfrac12)^2}{\sum V_i}",
        assumes="No effect in any stratum.",
        caveat="Too large.",
        sources=("mantel_haenszel_1959",),
        printed_use="usual",
        test=strata.cmh_cc,
    ),
    StrataTestMethod(
        key="breslow_day",
        name="Breslow–Day",
        formula=r"\sum \frac{(a_i - A_i)^2}{V_i}",
        assumes="The odds ratio is the same in every stratum.",
        caveat="Weak with few people a stratum.",
        sources=("breslow_day_1980",),
        printed_use="usual",
        test=strata.breslow_day,
    ),
    StrataTestMethod(
        key="breslow_day_tarone",
        name="Breslow–Day with Tarone’s adjustment",
        formula=r"\sum \frac{(a_i - A_i)^2}{V_i} - \frac{(\sum a_i - A_i)^2}{\sum V_i}",
        assumes="The odds ratio is the same in every stratum.",
        caveat="Weak with few people a stratum.",
        sources=("tarone_1985",),
        printed_use="seldom",
        test=strata.breslow_day_tarone,
    ),
)
