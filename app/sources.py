"""The one bibliography. Docstrings, the registry and the pages cite these keys; tests hold both ways.

Authors, titles and places are from memory where the check values do not name them; volume and pages were
not looked up again.
"""

from __future__ import annotations

SOURCES: dict[str, str] = {
    "agresti_1992": "Agresti A. A survey of exact inference for contingency tables. Statistical Science 1992;7:131-153.",
    "agresti_caffo_2000": (
        "Agresti A, Caffo B. Simple and effective confidence intervals for proportions and differences of "
        "proportions result from adding two successes and two failures. American Statistician 2000;54:280-288."
    ),
    "agresti_coull_1998": (
        "Agresti A, Coull BA. Approximate is better than exact for interval estimation of binomial proportions. "
        "American Statistician 1998;52:119-126."
    ),
    "altham_1969": (
        "Altham PME. Exact Bayesian analysis of a 2x2 contingency table, and Fisher's exact significance test. "
        "Journal of the Royal Statistical Society B 1969;31:261-269."
    ),
    "altman_1998": "Altman DG. Confidence intervals for the number needed to treat. BMJ 1998;317:1309-1312.",
    "altman_andersen_1999": (
        "Altman DG, Andersen PK. Calculating the number needed to treat for trials where the outcome is time to "
        "an event. BMJ 1999;319:1492-1495."
    ),
    "altman_bland_2003": (
        "Altman DG, Bland JM. Interaction revisited: the difference between two estimates. BMJ 2003;326:219."
    ),
    "altman_bland_2011_interval": (
        "Altman DG, Bland JM. How to obtain the confidence interval from a P value. BMJ 2011;343:d2090."
    ),
    "altman_bland_2011_p": "Altman DG, Bland JM. How to obtain the P value from a confidence interval. BMJ 2011;343:d2304.",
    "barnard_1947": "Barnard GA. Significance tests for 2x2 tables. Biometrika 1947;34:123-138.",
    "bender_2001": (
        "Bender R. Calculating confidence intervals for the number needed to treat. Controlled Clinical Trials 2001;22:102-110."
    ),
    "berry_armitage_1995": (
        "Berry G, Armitage P. Mid-P confidence intervals: a brief review. The Statistician 1995;44:417-423."
    ),
    "boschloo_1970": (
        "Boschloo RD. Raised conditional level of significance for the 2x2-table when testing the equality of two "
        "probabilities. Statistica Neerlandica 1970;24:1-35."
    ),
    "breslow_day_1980": (
        "Breslow NE, Day NE. Statistical methods in cancer research, volume 1: the analysis of case-control "
        "studies. Lyon: IARC, 1980."
    ),
    "brown_cai_dasgupta_2001": (
        "Brown LD, Cai TT, DasGupta A. Interval estimation for a binomial proportion. Statistical Science 2001;16:101-133."
    ),
    "campbell_2007": (
        "Campbell I. Chi-squared and Fisher-Irwin tests of two-by-two tables with small sample recommendations. "
        "Statistics in Medicine 2007;26:3661-3675."
    ),
    "clopper_pearson_1934": (
        "Clopper CJ, Pearson ES. The use of confidence or fiducial limits illustrated in the case of the "
        "binomial. Biometrika 1934;26:404-413."
    ),
    "cornfield_1956": (
        "Cornfield J. A statistical problem arising from retrospective studies. Proceedings of the Third Berkeley "
        "Symposium on Mathematical Statistics and Probability 1956;4:135-148."
    ),
    "donner_klar_2000": (
        "Donner A, Klar N. Design and analysis of cluster randomization trials in health research. London: Arnold, 2000."
    ),
    "donner_zou_2012": (
        "Donner A, Zou GY. Closed-form confidence intervals for functions of the normal mean and standard "
        "deviation. Statistical Methods in Medical Research 2012;21:347-359."
    ),
    "fagerland_2013": (
        "Fagerland MW, Lydersen S, Laake P. The McNemar test for binary matched-pairs data: mid-p and asymptotic "
        "are better than exact conditional. BMC Medical Research Methodology 2013;13:91."
    ),
    "farrington_manning_1990": (
        "Farrington CP, Manning G. Test statistics and sample size formulae for comparative binomial trials with "
        "null hypothesis of non-zero risk difference or non-unity relative risk. Statistics in Medicine "
        "1990;9:1447-1454."
    ),
    "fisher_1935": "Fisher RA. The logic of inductive inference. Journal of the Royal Statistical Society 1935;98:39-82.",
    "gart_1966": (
        "Gart JJ. Alternative analyses of contingency tables. Journal of the Royal Statistical Society B 1966;28:164-179."
    ),
    "garwood_1936": "Garwood F. Fiducial limits for the Poisson distribution. Biometrika 1936;28:437-442.",
    "greenland_robins_1985": (
        "Greenland S, Robins JM. Estimation of a common effect parameter from sparse follow-up data. Biometrics 1985;41:55-68."
    ),
    "higgins_2011": (
        "Higgins JPT, Green S (editors). Cochrane handbook for systematic reviews of interventions, version "
        "5.1.0, section 12.5.4. 2011."
    ),
    "irwin_1935": (
        "Irwin JO. Tests of significance for differences between percentages based on small numbers. Metron 1935;12:83-94."
    ),
    "katz_1978": (
        "Katz D, Baptista J, Azen SP, Pike MC. Obtaining confidence intervals for the risk ratio in cohort "
        "studies. Biometrics 1978;34:469-474."
    ),
    "koopman_1984": (
        "Koopman PAR. Confidence intervals for the ratio of two binomial proportions. Biometrics 1984;40:513-517."
    ),
    "lancaster_1961": (
        "Lancaster HO. Significance tests in discrete distributions. Journal of the American Statistical "
        "Association 1961;56:223-234."
    ),
    "loader_2000": "Loader C. Fast and accurate computation of binomial probabilities. 2000 (note).",
    "mantel_haenszel_1959": (
        "Mantel N, Haenszel W. Statistical aspects of the analysis of data from retrospective studies of disease. "
        "Journal of the National Cancer Institute 1959;22:719-748."
    ),
    "mcnemar_1947": (
        "McNemar Q. Note on the sampling error of the difference between correlated proportions or percentages. "
        "Psychometrika 1947;12:153-157."
    ),
    "mee_1984": "Mee RW. Confidence bounds for the difference between two probabilities. Biometrics 1984;40:1175-1176.",
    "miettinen_1976": (
        "Miettinen OS. Estimability and estimation in case-referent studies. American Journal of Epidemiology 1976;103:226-235."
    ),
    "miettinen_nurminen_1985": (
        "Miettinen O, Nurminen M. Comparative analysis of two rates. Statistics in Medicine 1985;4:213-226."
    ),
    "newcombe_1998_difference": (
        "Newcombe RG. Interval estimation for the difference between independent proportions: comparison of "
        "eleven methods. Statistics in Medicine 1998;17:873-890."
    ),
    "newcombe_1998_single": (
        "Newcombe RG. Two-sided confidence intervals for the single proportion: comparison of seven methods. "
        "Statistics in Medicine 1998;17:857-872."
    ),
    "newcombe_2001": (
        "Newcombe RG. Logit confidence intervals and the inverse sinh transformation. American Statistician 2001;55:200-202."
    ),
    "pearson_1900": (
        "Pearson K. On the criterion that a given system of deviations from the probable in the case of a "
        "correlated system of variables is such that it can be reasonably supposed to have arisen from random "
        "sampling. Philosophical Magazine 1900;50:157-175."
    ),
    "pettigrew_1986": (
        "Pettigrew HM, Gart JJ, Thomas DG. The bias and higher cumulants of the logarithm of a binomial variate. "
        "Biometrika 1986;73:425-435."
    ),
    "robins_breslow_greenland_1986": (
        "Robins J, Breslow N, Greenland S. Estimators of the Mantel-Haenszel variance consistent in both sparse "
        "data and large-strata limiting models. Biometrics 1986;42:311-323."
    ),
    "rothman_2008": (
        "Rothman KJ, Greenland S, Lash TL. Modern epidemiology, 3rd edition, chapter 14. Philadelphia: Lippincott "
        "Williams and Wilkins, 2008."
    ),
    "sato_1989": "Sato T. On the variance estimator for the Mantel-Haenszel risk difference. Biometrics 1989;45:1323-1324.",
    "suissa_shuster_1985": (
        "Suissa S, Shuster JJ. Exact unconditional sample sizes for the 2x2 binomial trial. Journal of the Royal "
        "Statistical Society A 1985;148:317-327."
    ),
    "tarone_1985": "Tarone RE. On heterogeneity tests based on efficient scores. Biometrika 1985;72:91-95.",
    "vanderweele_ding_2017": (
        "VanderWeele TJ, Ding P. Sensitivity analysis in observational research: introducing the E-value. Annals "
        "of Internal Medicine 2017;167:268-274."
    ),
    "walter_1975": "Walter SD. The distribution of Levin's measure of attributable risk. Biometrika 1975;62:371-374.",
    "wilks_1938": (
        "Wilks SS. The large-sample distribution of the likelihood ratio for testing composite hypotheses. Annals "
        "of Mathematical Statistics 1938;9:60-62."
    ),
    "wilson_1927": (
        "Wilson EB. Probable inference, the law of succession, and statistical inference. Journal of the American "
        "Statistical Association 1927;22:209-212."
    ),
    "woolf_1955": (
        "Woolf B. On estimating the relation between blood group and disease. Annals of Human Genetics 1955;19:251-253."
    ),
    "yates_1934": (
        "Yates F. Contingency tables involving small numbers and the chi-squared test. Supplement to the Journal "
        "of the Royal Statistical Society 1934;1:217-235."
    ),
    "zhang_yu_1998": (
        "Zhang J, Yu KF. What's the relative risk? A method of correcting the odds ratio in cohort studies of "
        "common outcomes. JAMA 1998;280:1690-1691."
    ),
}
