"""The one bibliography. Docstrings, the registry and the pages cite these keys; tests hold both ways."""

from __future__ import annotations

SOURCES: dict[str, str] = {
    "altman_1998": "Altman DG. Confidence intervals for the number needed to treat. BMJ 1998;317:1309-1312.",
    "bender_2001": (
        "Bender R. Calculating confidence intervals for the number needed to treat. Controlled Clinical Trials 2001;22:102-110."
    ),
    "campbell_2007": (
        "Campbell I. Chi-squared and Fisher-Irwin tests of two-by-two tables with small sample "
        "recommendations. Statistics in Medicine 2007;26:3661-3675."
    ),
    "clopper_pearson_1934": (
        "Clopper CJ, Pearson ES. The use of confidence or fiducial limits illustrated in the case of the "
        "binomial. Biometrika 1934;26:404-413."
    ),
    "cornfield_1956": (
        "Cornfield J. A statistical problem arising from retrospective studies. Proceedings of the Third "
        "Berkeley Symposium on Mathematical Statistics and Probability 1956;4:135-148."
    ),
    "fisher_1935": "Fisher RA. The logic of inductive inference. Journal of the Royal Statistical Society 1935;98:39-82.",
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
    "loader_2000": "Loader C. Fast and accurate computation of binomial probabilities. 2000 (note).",
    "mee_1984": "Mee RW. Confidence bounds for the difference between two probabilities. Biometrics 1984;40:1175-1176.",
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
    "pearson_1900": (
        "Pearson K. On the criterion that a given system of deviations from the probable in the case of a "
        "correlated system of variables is such that it can be reasonably supposed to have arisen from random "
        "sampling. Philosophical Magazine 1900;50:157-175."
    ),
    "wilson_1927": (
        "Wilson EB. Probable inference, the law of succession, and statistical inference. Journal of the "
        "American Statistical Association 1927;22:209-212."
    ),
    "woolf_1955": (
        "Woolf B. On estimating the relation between blood group and disease. Annals of Human Genetics 1955;19:251-253."
    ),
}
