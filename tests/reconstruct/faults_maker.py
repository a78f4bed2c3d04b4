"""Made-up trials with one planted fault each: a number that is not what it is called, or does not fit."""

from __future__ import annotations

import math
from collections.abc import Callable
from dataclasses import replace

import numpy as np

from app.printed.claims import Claim
from tests.reconstruct.trials_maker import (
    ARMS,
    Trial,
    claim,
    draw_table,
    full,
    log_risk_ratio,
    logit_odds_ratio,
    p_of,
    simple_difference,
)

Values = tuple[float, float, float]
_CRUDE = {"basis": "crude"}


def _texts(values: Values, decimals: int = 2) -> list[str]:
    return [f"{v:.{decimals}f}".replace("-", "−") for v in values]


def _with(key: str, quantity: str, values: Values, decimals: int = 2, **more: object) -> Claim:
    low, high = sorted(values[1:])
    texts = _texts((values[0], low, high), decimals)
    return claim(key, quantity, texts[0], low=texts[1], high=texts[2], **_CRUDE, **more)  # type: ignore[arg-type]


def _flip(values: Values) -> Values:
    return 1 / values[0], 1 / values[2], 1 / values[1]


def _counts(trial: Trial, *, percentages: bool = True) -> None:
    a, n1, c, n2 = trial.table
    for arm, events, total in ((ARMS[0], a, n1), (ARMS[1], c, n2)):
        trial.claims.append(claim(f"{arm}-events", "events", str(events), arm))
        trial.claims.append(claim(f"{arm}-total", "total", str(total), arm))
        if percentages:
            trial.claims.append(claim(f"{arm}-risk", "risk", f"{100 * events / total:.1f}", arm))


def _swap_digits(text: str) -> str | None:
    """The text with its first pair of unlike neighbouring digits exchanged, no leading zero; None if there is none."""
    for i in range(len(text) - 1):
        if text[i] != text[i + 1] and not (i == 0 and text[1] == "0"):
            return text[:i] + text[i + 1] + text[i] + text[i + 2 :]
    return None


def _replace(trial: Trial, key: str, text: str) -> None:
    trial.claims = [claim(key, c.quantity, text, c.arm) if c.id == key else c for c in trial.claims]


# -- readings -------------------------------------------------------------------------------------------


def _arms_swapped(t: Trial, _: np.random.Generator) -> None:
    t.claims.append(_with("target", "risk_ratio", _flip(log_risk_ratio(t.table))))


def _complement(t: Trial, _: np.random.Generator) -> None:
    a, n1, c, n2 = t.table
    t.claims.append(_with("target", "risk_ratio", log_risk_ratio((n1 - a, n1, n2 - c, n2))))


def _odds_called_risk(t: Trial, _: np.random.Generator) -> None:
    t.claims.append(_with("target", "risk_ratio", logit_odds_ratio(t.table)))


def _risk_called_odds(t: Trial, _: np.random.Generator) -> None:
    t.claims.append(_with("target", "odds_ratio", log_risk_ratio(t.table)))


def _ratio_as_reduction(t: Trial, _: np.random.Generator) -> None:
    values = log_risk_ratio(t.table)
    t.claims.append(_with("target", "relative_risk_reduction", tuple(100 * v for v in values), 0))  # type: ignore[arg-type]


def _reduction_as_ratio(t: Trial, _: np.random.Generator) -> None:
    ratio, low, high = log_risk_ratio(t.table)
    if high >= 1:
        return
    t.claims.append(_with("target", "risk_ratio", (1 - ratio, 1 - high, 1 - low)))


def _points_called_percent(t: Trial, _: np.random.Generator) -> None:
    d, low, high = simple_difference(t.table)
    t.claims.append(_with("target", "relative_risk_reduction", (-100 * d, -100 * high, -100 * low), 1))


def _percent_called_points(t: Trial, _: np.random.Generator) -> None:
    ratio, low, high = log_risk_ratio(t.table)
    t.claims.append(_with("target", "risk_difference", (100 - 100 * ratio, 100 - 100 * high, 100 - 100 * low), 1))


def _per_thousand(t: Trial, _: np.random.Generator) -> None:
    d, low, high = simple_difference(t.table)
    t.claims.append(_with("target", "risk_difference", (1000 * d, 1000 * low, 1000 * high), 1))


def _other_denominator(t: Trial, _: np.random.Generator) -> None:
    a, n1, _c, _n2 = t.table
    randomised = round(n1 * 1.13) + 3
    t.claims.append(claim("randomised", "total", str(randomised), ARMS[0], total_kind="randomised"))
    t.claims = [replace(c, total_kind="analysed") if c.id == "intervention-total" else c for c in t.claims]
    t.claims.append(_with("ratio", "risk_ratio", log_risk_ratio(t.table)))
    _replace(t, "intervention-risk", f"{100 * a / randomised:.1f}")
    t.faulty = "intervention-risk"


def _other_level(t: Trial, _: np.random.Generator) -> None:
    made = _with("target", "risk_ratio", log_risk_ratio(t.table, 0.90))
    t.claims.append(made)


def _one_sided(t: Trial, _: np.random.Generator) -> None:
    p = p_of(t.table, "pearson") / 2
    if not 0.001 < p < 0.4:
        return
    t.claims.append(claim("target", "p_value", f"{p:.3f}", **_CRUDE))  # type: ignore[arg-type]


def _needed_from_reduction(t: Trial, _: np.random.Generator) -> None:
    ratio = log_risk_ratio(t.table)[0]
    if abs(1 - ratio) < 0.02:
        return
    printed = round(100 * (1 - ratio))
    if not printed:
        return
    t.claims.append(claim("reduction", "relative_risk_reduction", f"{printed}".replace("-", "−"), **_CRUDE))  # type: ignore[arg-type]
    t.claims.append(claim("target", "number_needed_to_treat", str(math.ceil(abs(100 / printed))), **_CRUDE))  # type: ignore[arg-type]


def _opposite_sign(t: Trial, _: np.random.Generator) -> None:
    d, low, high = simple_difference(t.table)
    if d <= 0:
        return
    t.claims.append(_with("target", "risk_difference", (-100 * d, -100 * high, -100 * low), 1))


def _unusual_method(t: Trial, _: np.random.Generator) -> None:
    a, n1, c, n2 = t.table
    p1, p2 = (a + 1) / (n1 + 2), (c + 1) / (n2 + 2)
    half = 1.959963984540054 * math.sqrt(p1 * (1 - p1) / (n1 + 2) + p2 * (1 - p2) / (n2 + 2))
    t.claims.append(
        _with("target", "risk_difference", (100 * (a / n1 - c / n2), 100 * (p1 - p2 - half), 100 * (p1 - p2 + half)), 2)
    )


# -- findings -------------------------------------------------------------------------------------------


def _support(t: Trial) -> None:
    t.claims.append(_with("ratio", "risk_ratio", log_risk_ratio(t.table)))


def _count(t: Trial, _: np.random.Generator) -> None:
    _support(t)
    swapped = _swap_digits(str(t.table[0]))
    if swapped is None or int(swapped) > t.table[1]:
        return
    _replace(t, "intervention-events", swapped)
    t.faulty = "intervention-events"


def _total(t: Trial, _: np.random.Generator) -> None:
    _support(t)
    swapped = _swap_digits(str(t.table[3]))
    if swapped is None or int(swapped) < t.table[2]:
        return
    _replace(t, "comparator-total", swapped)
    t.faulty = "comparator-total"


def _percentage(t: Trial, rng: np.random.Generator) -> None:
    _support(t)
    a, n1, _c, _n2 = t.table
    _replace(t, "intervention-risk", f"{min(99.0, 100 * a / n1 + rng.choice([1.0, 2.0, 0.7])):.1f}")
    t.faulty = "intervention-risk"


def _outside_interval(t: Trial, _: np.random.Generator) -> None:
    ratio, _low, high = log_risk_ratio(t.table)
    t.claims.append(_with("target", "risk_ratio", (ratio, ratio + 0.04 + (high - ratio) / 3, high + 0.1)))


def _off_centre(t: Trial, _: np.random.Generator) -> None:
    ratio, low, high = log_risk_ratio(t.table)
    t.claims.append(_with("target", "risk_ratio", (ratio, low / 3, high)))


def _estimate(t: Trial, rng: np.random.Generator) -> None:
    shift = float(np.exp(rng.choice([-0.5, 0.5])))
    t.claims.append(_with("target", "risk_ratio", tuple(v * shift for v in log_risk_ratio(t.table))))  # type: ignore[arg-type]


def _interval(t: Trial, _: np.random.Generator) -> None:
    ratio, low, high = log_risk_ratio(t.table)
    wide = math.log(high / low) / 2 * 0.6
    t.claims.append(_with("target", "risk_ratio", (ratio, ratio * math.exp(-wide), ratio * math.exp(wide))))


def _p(t: Trial, _: np.random.Generator) -> None:
    p = p_of(t.table, "pearson")
    if not 0.01 < p < 0.9:
        return
    t.claims.append(claim("target", "p_value", f"{p / 7:.4f}", **_CRUDE))  # type: ignore[arg-type]


def _needed(t: Trial, _: np.random.Generator) -> None:
    d = abs(simple_difference(t.table)[0])
    if d < 0.002:
        return
    t.claims.append(claim("target", "number_needed_to_treat", str(math.ceil(1.9 / d) + 2), **_CRUDE))  # type: ignore[arg-type]


def _word(t: Trial, _: np.random.Generator) -> None:
    values = log_risk_ratio(t.table)
    if 0.97 < values[0] < 1.03:
        return
    t.claims.append(_with("target", "risk_ratio", values, sense="higher" if values[0] < 1 else "lower"))


def _together(t: Trial, _: np.random.Generator) -> None:
    _support(t)
    t.claims.append(claim("target", "total", str(t.table[1] + t.table[3] + 10)))


PLANTED: dict[str, Callable[[Trial, np.random.Generator], None]] = {
    "arms_swapped": _arms_swapped,
    "complement_outcome": _complement,
    "odds_ratio_called_risk_ratio": _odds_called_risk,
    "risk_ratio_called_odds_ratio": _risk_called_odds,
    "ratio_read_as_reduction": _ratio_as_reduction,
    "reduction_read_as_ratio": _reduction_as_ratio,
    "points_called_percent": _points_called_percent,
    "percent_called_points": _percent_called_points,
    "per_thousand_called_percent": _per_thousand,
    "other_denominator": _other_denominator,
    "other_confidence_level": _other_level,
    "one_sided_p": _one_sided,
    "needed_from_another_difference": _needed_from_reduction,
    "opposite_sign": _opposite_sign,
    "unusual_method": _unusual_method,
    "count_does_not_fit": _count,
    "total_does_not_fit": _total,
    "percentage_does_not_fit": _percentage,
    "estimate_outside_interval": _outside_interval,
    "interval_off_centre": _off_centre,
    "estimate_does_not_fit": _estimate,
    "interval_does_not_fit": _interval,
    "p_against_counts": _p,
    "needed_does_not_fit": _needed,
    "direction_word_against_numbers": _word,
    "totals_do_not_add": _together,
}


def planted(kind: str, seed: int) -> Trial | None:
    """A trial with one fault of a kind, printed with counts and percentages; None where it cannot be planted."""
    rng = np.random.default_rng([list(PLANTED).index(kind), seed])
    trial = Trial(draw_table(rng, smallest=40, largest=8000, least_risk=0.02), fault=kind)
    a, n1, c, n2 = trial.table
    if not full(trial.table) or min(a, c, n1 - a, n2 - c) < 4 or a * n2 == c * n1:
        return None
    _counts(trial)
    before = len(trial.claims)
    PLANTED[kind](trial, rng)
    trial.faulty = trial.faulty or "target"
    if not any(made.id == trial.faulty for made in trial.claims) or (len(trial.claims) == before and trial.faulty == "target"):
        return None
    return trial
