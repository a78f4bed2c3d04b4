"""What printed numbers say of each other without counts: estimate and interval, p and interval, reduction and ratio."""

from __future__ import annotations

import math
import re
from collections.abc import Iterable

import numpy as np

from app.measures.fourfold import Fourfold
from app.printed.claims import RATIOS, REDUCTIONS, Claim
from app.reconstruct.interval_p import PRange, Scale, on_scale, p_range, skewness, symmetric
from app.reconstruct.p_prints import AskedP, p_window
from app.reconstruct.stated import Stated, risk_span
from app.reconstruct.verdict import Finding
from app.reconstruct.window import Window, exact, near, whole_unit

PLAUSIBLE_SKEW = 1.35
"""Halves of a legitimate interval differ by less than this factor beyond rounding, unless counts are small."""
MANY = 1_000_000
"""So many people that only the rounding of percentages matters."""
_GRID = 41
_VERY_MANY = 10**8


def scale_of(claim: Claim) -> Scale:
    """The scale on which the claim's interval is symmetric."""
    return "ratio" if claim.quantity in RATIOS or claim.quantity in REDUCTIONS else "difference"


def windows(claim: Claim) -> tuple[Window | None, Window, Window] | None:
    """What estimate and both limits may stand for, a reduction turned into its ratio; None without two limits."""
    interval = claim.interval
    if interval is None or interval.low is None or interval.high is None or claim.quantity == "number_needed_to_treat":
        return None
    estimate = exact(claim.number, claim.factor) if claim.number is not None else None
    low, high = exact(interval.low, claim.factor), exact(interval.high, claim.factor)
    if claim.quantity == "relative_risk_reduction":
        turned = [Window(1.0 - w.high, 1.0 - w.low) if w is not None else None for w in (estimate, high, low)]
    elif claim.quantity == "relative_risk_increase":
        turned = [Window(1.0 + w.low, 1.0 + w.high) if w is not None else None for w in (estimate, low, high)]
    else:
        turned = [estimate, low, high]
    middle, lower, upper = turned
    return None if lower is None or upper is None else (middle, lower, upper)


def _no_effect(scale: Scale) -> float:
    return 1.0 if scale == "ratio" else 0.0


def inside(claim: Claim) -> bool:
    """Whether the estimate may lie in its own interval."""
    if claim.number is None or claim.interval is None:
        return True
    estimate = exact(claim.number, claim.factor)
    low, high = claim.interval.limits
    below = low is not None and estimate.high < exact(low, claim.factor).low - 1e-12
    above = high is not None and estimate.low > exact(high, claim.factor).high + 1e-12
    return not (below or above)


def off_centre(claim: Claim) -> bool:
    """Whether no interval symmetric on its scale prints so, by more than a legitimate interval is skewed."""
    found = windows(claim)
    if found is None or found[0] is None or not inside(claim):
        return False
    scale = scale_of(claim)
    if symmetric(found[0], found[1], found[2], scale):
        return False
    least = [_skew_range(found[0], found[1], found[2], scale)]
    low, high = least[0]
    return low > PLAUSIBLE_SKEW or high < 1.0 / PLAUSIBLE_SKEW


def _skew_range(middle: Window, lower: Window, upper: Window, scale: Scale) -> tuple[float, float]:
    """Smallest and largest ratio of the upper half of the interval to the lower that prints so."""
    ends = [
        skewness(x, low, high, scale)
        for x, low, high in ((middle.high, lower.low, upper.low), (middle.low, lower.high, upper.high))
    ]
    return (min(ends), max(ends)) if not any(math.isnan(end) for end in ends) else (1.0, 1.0)


def plain_symmetric(claim: Claim) -> bool:
    """Whether a ratio's interval is symmetric on the plain scale though not on the logarithmic one."""
    found = windows(claim)
    if found is None or found[0] is None or scale_of(claim) != "ratio":
        return False
    return not symmetric(found[0], found[1], found[2], "ratio") and symmetric(found[0], found[1], found[2], "difference")


# -- p and an interval ----------------------------------------------------------------------------------


def p_from(claim: Claim) -> PRange | None:
    """The p that an estimate and its interval allow."""
    found = windows(claim)
    if found is None or claim.interval is None:
        return None
    scale = scale_of(claim)
    return p_range(found[0], found[1], found[2], scale, claim.interval.confidence_level, _no_effect(scale))


def p_agrees(question: AskedP, allowed: PRange, *, loose: bool) -> tuple[bool, bool]:
    """Whether the printed p lies in the joint range, and whether in the box (or, if `loose`, within a factor of 2 of it)."""
    window = p_window(question)
    if question.operator == "=":
        joint, box = window.meets(allowed.joint), window.meets(allowed.box)
        if loose:
            box = box or (window.high >= allowed.box.low / 2.0 and window.low <= allowed.box.high * 2.0)
        return joint, box
    least, most = allowed.joint
    low, high = allowed.box
    if question.operator in ("<", "<="):
        return least < window.high, low / (2.0 if loose else 1.0) < window.high
    return most >= window.low, high * (2.0 if loose else 1.0) >= window.low


# -- a measure and the printed percentages ----------------------------------------------------------------


def as_if_many(of: Stated, aside: Iterable[str]) -> Fourfold | None:
    """Tables of very many people over all risks that the printed percentages allow; None unless both arms print one."""
    out = set(aside)
    ends = []
    for arm in of.arms:
        spans = [risk_span(c, slips=False) for c in arm.risks if c.id not in out and c.number is not None]
        if not spans:
            return None
        low, high = max(s.low for s in spans), min(s.high for s in spans)
        if low > high:
            return None
        ends.append((max(0.0, float(low)), min(1.0, float(high))))
    grids = [np.rint(np.linspace(low, high, _GRID) * MANY).astype(np.int64) for low, high in ends]
    first, second = (axis.ravel() for axis in np.meshgrid(*grids))
    return Fourfold(first, MANY, second, MANY)


def as_if_equal(of: Stated, aside: Iterable[str]) -> Fourfold | None:
    """The printed events of both arms over very many people in arms of one size; None unless both print events alone."""
    out = set(aside)
    events = [[int(c.said.value) for c in arm.events if c.id not in out] for arm in of.arms]
    if not all(events) or any(arm.total for arm in of.arms):
        return None
    return Fourfold([events[0][0]], [_VERY_MANY], [events[1][0]], [_VERY_MANY])


def others_allow(claim: Claim, of: Stated, aside: Iterable[str]) -> bool:
    """Whether another printed figure of the outcome, rounded as it stands, gives this one.

    A reduction by its ratio and the reverse, a number needed to treat by its difference, a difference by the
    printed percentages as they stand.
    """
    if claim.number is None:
        return False
    out = set(aside)
    mine = exact(claim.number, claim.factor)
    for other in of.measures:
        if other.id == claim.id or other.id in out or other.number is None:
            continue
        theirs = exact(other.number, other.factor)
        if _linked(claim, other, mine, theirs):
            return True
    return _from_percentages(claim, of, out)


def _linked(claim: Claim, other: Claim, mine: Window, theirs: Window) -> bool:
    if claim.quantity == "relative_risk_reduction" and other.quantity in RATIOS:
        low, high = 1.0 - theirs.high, 1.0 - theirs.low
        return Window(min(abs(low), abs(high)), max(abs(low), abs(high))).meets(_size(mine))
    if claim.quantity == "relative_risk_increase" and other.quantity in RATIOS:
        return Window(theirs.low - 1.0, theirs.high - 1.0).meets(mine)
    if claim.quantity in RATIOS and other.quantity == "relative_risk_reduction" and claim.quantity != "hazard_ratio":
        return Window(1.0 - theirs.high, 1.0 - theirs.low).meets(mine)
    if claim.quantity == "number_needed_to_treat" and other.quantity == "risk_difference":
        size = _size(theirs)
        if size.low <= 0.0:
            return False
        return Window(1.0 / size.high, 1.0 / size.low).meets(_size(whole_unit(claim.said, claim.factor)))
    return False


def _size(window: Window) -> Window:
    low, high = sorted((abs(window.low), abs(window.high)))
    return Window(0.0 if window.low < 0.0 < window.high else low, high)


def _from_percentages(claim: Claim, of: Stated, out: set[str]) -> bool:
    """Whether the percentages as printed, taken as exact, give the claim."""
    risks = [[c for c in arm.risks if c.id not in out and c.number is not None] for arm in of.arms]
    for first in risks[0]:
        for second in risks[1]:
            p1, p2 = first.said.exact * first.factor, second.said.exact * second.factor
            difference = float(p1 - p2)
            values: dict[str, float] = {"risk_difference": difference}
            if p2:
                values |= {"risk_ratio": float(p1 / p2), "relative_risk_reduction": float(1 - p1 / p2)}
            if claim.quantity == "number_needed_to_treat" and difference:
                return whole_unit(claim.said, claim.factor).holds(np.asarray(abs(1.0 / difference))).item()
            value = values.get(claim.quantity)
            if value is not None:
                window = exact(claim.said, claim.factor)
                if window.holds(np.asarray(value)) or (claim.quantity != "risk_ratio" and window.holds(np.asarray(-value))):
                    return True
    return False


def rates_allow(claim: Claim, of: Stated) -> bool | None:
    """Whether the printed rates allow a rate ratio or difference; None if both are not printed."""
    ends = []
    for arm in of.arms:
        rates = [c for c in arm.rates if c.number is not None]
        if not rates:
            return None
        ends.append(exact(rates[0].said, rates[0].factor))
    first, second = ends
    mine = exact(claim.said, claim.factor)
    if claim.quantity in ("rate_ratio", "risk_ratio"):
        return second.low > 0.0 and Window(first.low / second.high, first.high / second.low).meets(mine)
    allowed = Window(first.low - second.high, first.high - second.low)
    return allowed.meets(mine) or allowed.mirrored().meets(mine)


# -- words ----------------------------------------------------------------------------------------------

_MORE = re.compile(r"times\s+(?:more|higher|greater|less|lower|fewer)", re.IGNORECASE)


def times_more(claim: Claim) -> bool:
    """Whether the label says "times more" of a ratio."""
    return claim.quantity in RATIOS and claim.label is not None and bool(_MORE.search(claim.label))


def direction_contradicts(claim: Claim, higher: bool | None) -> bool:
    """Whether the direction word contradicts the numbers; `higher`: whether the tables say the intervention arm has more.

    A number that carries its own direction is held against the word first.
    """
    if claim.sense is None:
        return False
    says_higher = claim.sense in ("higher", "increase")
    own = own_direction(claim)
    if claim.quantity in REDUCTIONS or claim.quantity in ("risk_difference", "rate_difference", "risk", "rate", "events"):
        own = higher  # printed without a sign of its own
    return own is not None and own != says_higher


def own_direction(claim: Claim) -> bool | None:
    """Whether a ratio or difference says that the intervention arm has more; None if it says neither."""
    if claim.number is None:
        return None
    value = float(claim.said.exact * claim.factor)
    if claim.quantity in RATIOS:
        return None if value == 1.0 else value > 1.0
    if claim.quantity in ("risk_difference", "rate_difference"):
        return None if value == 0.0 else value > 0.0
    return None


def excludes_no_effect(claim: Claim) -> bool | None:
    """Whether the printed interval excludes no effect; None without two limits."""
    found = windows(claim)
    if found is None:
        return None
    none = _no_effect(scale_of(claim))
    return found[1].low > none or found[2].high < none


def log_width(claim: Claim) -> float | None:
    """Width of the printed interval on its scale; None if it cannot be had."""
    found = windows(claim)
    if found is None:
        return None
    ends = [on_scale(Window(sum(w) / 2.0, sum(w) / 2.0), scale_of(claim)) for w in found[1:]]
    return None if ends[0] is None or ends[1] is None else ends[1].low - ends[0].low


def internal(claim: Claim) -> tuple[Finding, ...]:
    """What an estimate and its own interval say against each other."""
    if not inside(claim):
        return ("estimate_outside_interval",)
    return ("interval_off_centre",) if off_centre(claim) else ()


def nearly(claim: Claim, value: float) -> bool:
    """Whether a value prints as the claim within one unit of its last digit."""
    return claim.number is not None and near(claim.number, claim.factor).holds(np.asarray(value)).item()


_SPAN = re.compile(r"(?P<number>[0-9]+(?:[.,\u00b7][0-9]+)?)\s*-?\s*(?P<unit>year|month|week|day)", re.IGNORECASE)
_YEARS = {"year": 1.0, "month": 1.0 / 12.0, "week": 7.0 / 365.25, "day": 1.0 / 365.25}


def years(horizon: str | None) -> float | None:
    """The time of a horizon such as "12 months", in years; None if it names none."""
    found = _SPAN.search(horizon or "")
    if not found:
        return None
    return float(found["number"].replace(",", ".").replace("\u00b7", ".")) * _YEARS[found["unit"].lower()]
