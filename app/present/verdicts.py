"""What is said of each printed number: one sentence per slug, from the evidence. Neutral, and never of the authors."""

from __future__ import annotations

import math
from collections.abc import Mapping, Sequence
from fractions import Fraction

from app.measures.registry import everything
from app.present.numerals import fixed, p_value, people, percentages, spread
from app.present.wording import either
from app.printed.claims import COUNTS, Claim
from app.reconstruct.verdict import Advice, Finding, Judgement, OutcomeCheck, Reading, Reason, Recomputed

VERDICT_TEXT = {
    "agrees": "agrees",
    "agrees_within_rounding": "agrees within rounding",
    "agrees_under_another_reading": "another reading",
    "cannot_be_checked": "cannot be checked",
    "does_not_agree": "does not agree",
}
VERDICT_MARK = {
    "agrees": "✓",
    "agrees_within_rounding": "✓",
    "agrees_under_another_reading": "↷",
    "cannot_be_checked": "○",
    "does_not_agree": "≠",
}

QUANTITY_TEXT: Mapping[str, str] = {
    "events": "with the event",
    "non_events": "without the event",
    "total": "people",
    "risk": "percentage",
    "rate": "rate",
    "person_time": "person-time",
    "risk_difference": "risk difference",
    "risk_ratio": "risk ratio",
    "odds_ratio": "odds ratio",
    "rate_ratio": "rate ratio",
    "rate_difference": "rate difference",
    "hazard_ratio": "hazard ratio",
    "relative_risk_reduction": "relative reduction",
    "relative_risk_increase": "relative increase",
    "number_needed_to_treat": "number needed to treat",
    "p_value": "P",
    "margin": "margin",
}

CONSEQUENCE_TEXT = {
    "direction": "Changes the direction.",
    "conclusion": "Changes on which side of no effect, or of 0.05, it stands.",
    "size": "Changes the size.",
    "nothing": "",
}

_NAMES = {row.key: row.name for row in reversed(everything())}
_UNIT_SIGN = {"percent": "%", "points": " points"}
_RETYPE = "Check what was typed first."


def method_name(key: str) -> str:
    """The trade name of a method or test."""
    return _NAMES.get(key, QUANTITY_TEXT.get(key, key))


def unit_sign(claim: Claim) -> str:
    """What follows a number of the claim."""
    if claim.unit.startswith("per_"):
        return " " + claim.unit.replace("_", " ")
    return "" if claim.quantity in COUNTS else _UNIT_SIGN.get(claim.unit, "")


def printed_text(claim: Claim) -> str:
    """The claim as printed: number, unit, interval."""
    sign = unit_sign(claim)
    operator = "" if claim.operator == "=" else f"{claim.operator} "
    if claim.quantity == "p_value":
        operator = f"P {claim.operator} "
    number = claim.number.text.strip() if claim.number else ""
    text = f"{operator}{number}{sign if number and not number.endswith('%') else ''}"
    interval = claim.interval
    if interval is not None:
        low, high = (limit.text.strip() if limit else "–" for limit in interval.limits)
        text += f" ({low} to {high}; {fixed(100 * interval.confidence_level, 1).removesuffix('.0')}%)"
    return text.strip()


def _decimals(claim: Claim) -> int:
    """One digit more than is printed."""
    return max(0, (claim.number.decimals if claim.number else 2) + 1)


def _shown(ends: tuple[float, float] | None, decimals: int) -> str:
    if ends is None:
        return ""
    if math.isinf(ends[0]) or math.isinf(ends[1]):
        return "∞"
    return spread([fixed(end, decimals) for end in ends])


def recomputed_text(claim: Claim, found: Recomputed) -> str:
    """What one method gives: "0.672 (0.474 to 0.953)"."""
    if claim.quantity == "p_value" and found.estimate is not None:
        return spread([_p_text(end) for end in found.estimate])
    decimals = 0 if claim.quantity in COUNTS else _decimals(claim)
    text = _shown(found.estimate, decimals)
    if found.low is not None and found.high is not None:
        text += f" ({_shown(found.low, decimals)} to {_shown(found.high, decimals)})"
    return text


def _ranked(judged: Judgement) -> list[Recomputed]:
    """What prints the claim first, then what papers print most."""
    order = {"katz_log": 0, "woolf_logit": 0, "wald": 0, "log_wald": 0, "pearson": 0, "miettinen_nurminen": 1}
    return sorted(judged.recomputed, key=lambda r: (not r.prints, order.get(r.method, 2)))


def _best(judged: Judgement) -> Recomputed | None:
    return next(iter(_ranked(judged)), None)


def _also(names: Sequence[str]) -> str:
    """Other methods that print the same."""
    if not names:
        return ""
    return f"; the same by {names[0]}" if len(names) == 1 else f"; the same by {names[0]} and others"


def _gives(judged: Judgement) -> str:
    """What the counts give, in a sentence; empty where nothing is recomputed."""
    best = _best(judged)
    if best is None:
        return ""
    value = recomputed_text(judged.claim, best) + unit_sign(judged.claim)
    by = f" by {method_name(best.method)}" if best.low is not None or judged.claim.quantity == "p_value" else ""
    return f"The counts give {value}{by}."


def _join(*sentences: str) -> str:
    return " ".join(sentence for sentence in sentences if sentence)


# -- agreeing -------------------------------------------------------------------------------------------


def _agrees(judged: Judgement) -> str:
    claim = judged.claim
    if claim.quantity == "p_value":
        return _p_agrees(judged)
    if "rounded" in judged.evidence:
        rules = {"up": "rounded up", "down": "rounded down", "nearest": "rounded to the nearest"}
        rounded: Sequence[str] = judged.evidence["rounded"]  # type: ignore[assignment]
        unrounded = fixed(float(str(judged.evidence["unrounded"])), 1)
        return f"{unrounded} before rounding{', ' + either([rules[r] for r in rounded]) if rounded else ''}."
    prints = [method_name(found.method) for found in _ranked(judged) if found.prints and found.low is not None]
    if prints:
        return f"{_value(judged)} by {prints[0]}{_also(prints[1:])}."
    return f"Recomputed: {_value(judged)}{unit_sign(claim)}." if judged.recomputed and claim.quantity not in COUNTS else ""


def _value(judged: Judgement) -> str:
    best = _best(judged)
    return "" if best is None else recomputed_text(judged.claim, best)


def _p_agrees(judged: Judgement) -> str:
    if "joint" in judged.evidence:
        return f"The printed estimate and interval allow {_p_span(judged, 'joint')}."
    prints = [method_name(found.method) for found in judged.recomputed if found.prints]
    by = f"By {either(prints[:2])}. " if prints else ""
    sides = " They stand on both sides of 0.05." if judged.evidence.get("straddles") else ""
    return f"{by}The usual tests give {_p_span(judged, 'spread')}.{sides}"


def _p_span(judged: Judgement, key: str) -> str:
    ends: tuple[float, float] = judged.evidence[key]  # type: ignore[assignment]
    return spread([_p_text(end) for end in ends])


def _p_text(p: float) -> str:
    """A recomputed p: small ones to one digit, where a printed bound may need it."""
    if 1e-5 <= p < 0.001:
        digits = 1 - math.floor(math.log10(p))
        return fixed(p, digits).rstrip("0")
    return "<0.00001" if p < 1e-5 else p_value(p).replace("=", "").strip()


def _within(judged: Judgement) -> str:
    if judged.claim.quantity == "p_value":
        return _p_agrees(judged)
    if judged.evidence.get("arms_of_one_size"):
        return "It follows from the events if the arms are of one size."
    if not judged.recomputed:
        return "It follows from the other printed figures as they are rounded."
    value = f"{_value(judged)}{unit_sign(judged.claim)}"
    return f"Recomputed: {value}; within one unit of the last digit, or from figures already rounded."


# -- another reading ------------------------------------------------------------------------------------

_READINGS: Mapping[Reading, str] = {
    "arms_swapped": "It is what the arms give exchanged: comparator over intervention.",
    "complement_outcome": "It is what those without the event give.",
    "odds_ratio_called_risk_ratio": "It is the odds ratio, or comes from it.",
    "risk_ratio_called_odds_ratio": "It is the risk ratio.",
    "rate_ratio_called_risk_ratio": "It is the ratio of rates.",
    "hazard_ratio_called_risk_ratio": "It equals the printed hazard ratio.",
    "ratio_read_as_reduction": "It is the ratio as a percentage, not the reduction.",
    "reduction_read_as_ratio": "It is the relative change, not the ratio.",
    "points_called_percent": "It is the difference in percentage points, not a relative change.",
    "percent_called_points": "It is the relative change in per cent, not a difference in points.",
    "per_thousand_called_percent": "It fits per 1000.",
    "other_denominator": "It fits out of another printed total.",
    "other_confidence_level": "Its interval fits another confidence level.",
    "one_sided_p": "It is half the two-sided P.",
    "needed_from_another_difference": "It is 1 divided by another printed figure, not by the risk difference.",
    "opposite_sign": "It fits with the opposite sign.",
    "unusual_method": "Only a method that is seldom printed gives this.",
}


def _level(judged: Judgement) -> str:
    asked = judged.evidence.get("asked")
    interval = getattr(asked, "interval", None)
    if interval is None or "other_confidence_level" not in judged.readings:
        return ""
    return f"It is a {fixed(100 * interval.confidence_level, 1).removesuffix('.0')}% interval."


def _reading(judged: Judgement) -> str:
    told = [_level(judged) if r == "other_confidence_level" and _level(judged) else _READINGS[r] for r in judged.readings]
    if {"arms_swapped", "complement_outcome"} <= set(judged.readings):
        told = [text for r, text in zip(judged.readings, told, strict=True) if r not in ("arms_swapped", "complement_outcome")]
        told.append("The arms are exchanged, or those without the event counted; an odds ratio cannot tell which.")
    return _join(*told, _gives(judged))


# -- not checkable ----------------------------------------------------------------------------------------

_REASONS: Mapping[Reason, str] = {
    "adjusted": "Adjusted or from a model: counts cannot give it.",
    "time_to_event": "From times to the event: counts cannot give it.",
    "clustered": "Clusters were allowed for: counts cannot give it.",
    "imputed": "Missing outcomes were filled in: counts cannot give it.",
    "too_little": "Nothing else typed bears on it.",
    "unread": "It could not be read.",
}


def _unchecked(judged: Judgement) -> str:
    if judged.evidence.get("only_if_adjusted"):
        return _join("It fits only if adjusted or stratified.", _gives(judged))
    reason = _REASONS[judged.reason or "too_little"]
    if judged.evidence.get("test") in ("noninferiority", "interaction", "trend"):
        return "A test of another question than no difference: counts alone cannot give it."
    crude = (
        _gives(judged).replace("The counts give", "Crude, for orientation:")
        if judged.recomputed and judged.reason != "too_little"
        else ""
    )
    return _join(reason, crude)


# -- found against ----------------------------------------------------------------------------------------

_FINDINGS: Mapping[Finding, str] = {
    "count_exceeds_total": "More than the people it is out of.",
    "impossible_percentage": "No whole number of people gives this percentage.",
    "percentage_does_not_fit": "The percentage does not fit the count and the other numbers.",
    "total_does_not_fit": "The total does not fit the other numbers.",
    "count_does_not_fit": "The count does not fit the other numbers.",
    "contradict_each_other": "Count, total and percentage contradict each other; nothing printed tells which is off.",
    "estimate_outside_interval": "The estimate lies outside its own interval.",
    "interval_off_centre": "The interval is not centred on its estimate, on any usual scale.",
    "estimate_does_not_fit": "No usual method gives this estimate.",
    "interval_does_not_fit": "The estimate fits; no usual method gives this interval.",
    "impossible_p": "No test gives this P; it is read as smaller than half its last digit.",
    "p_against_counts": "No usual test on the counts gives this P.",
    "p_against_interval": "It does not go with the printed estimate and interval.",
    "needed_does_not_fit": "It is not 1 divided by the risk difference, rounded either way.",
    "direction_word_against_numbers": "The word of direction goes against the numbers.",
    "totals_do_not_add": "The totals do not add up.",
    "impossible_person_time": "More person-time than the people can have been followed for.",
}


def _found(judged: Judgement) -> str:
    parts = [_FINDINGS[judged.finding or "estimate_does_not_fit"]]
    evidence = judged.evidence
    fits: tuple[Fraction, Fraction] | None = evidence.get("would_fit")  # type: ignore[assignment]
    if fits is not None and judged.claim.number is not None:
        decimals = 0 if judged.claim.quantity in COUNTS else judged.claim.number.decimals
        would = spread([fixed(float(end), decimals) for end in fits]) + unit_sign(judged.claim)
        parts.append(f"The other {evidence['others']} agree with each other; {would} would fit.")
    nearest: Sequence[tuple[int, int]] = evidence.get("nearest", ())  # type: ignore[assignment]
    if nearest and fits is None:
        parts.append("; ".join(f"{people(k)} of {people(n)} is {percentages([k / n], 2)[0]}%" for k, n in nearest) + ".")
    if judged.finding == "p_against_interval":
        parts.append(_p_agrees(judged))
    elif judged.finding == "p_against_counts":
        parts.append(f"They give {_p_span(judged, 'spread')}.")
    elif judged.finding == "direction_word_against_numbers" or fits is None:
        parts.append(_gives(judged))
    if judged.possible:
        parts.append("Possible, on less evidence: " + " ".join(_READINGS[r] for r in judged.possible))
    return _join(*parts, _RETYPE)


# -- notes ------------------------------------------------------------------------------------------------


def note_sentence(note: Advice) -> str:
    """An advisory note in a sentence."""
    lacking = {"horizon": "a time", "interval": "an interval"}
    evidence = note.evidence
    if note.slug == "needed_incomplete":
        missing: Sequence[str] = evidence["lacking"]  # type: ignore[assignment]
        return (
            f"A number needed to treat wants {either([lacking[part] for part in missing]).replace(' or ', ' and ')} beside it."
        )
    if note.slug == "hazard_against_counts":
        return (
            f"The counts say {'more' if evidence['higher'] else 'fewer'} with the intervention, the hazard ratio the other "
            "way round. That may be so with unequal follow-up, adjustment or crossing curves."
        )
    if note.slug == "parts_do_not_add":
        return _PARTS[str(evidence["why"])]
    if note.slug == "more_digits_than_people":
        return f"Two decimals say more than {people(int(str(evidence['total'])))} people can."
    return _NOTES[note.slug]


_NOTES: Mapping[str, str] = {
    "interval_symmetric_on_plain_scale": "The interval is symmetric on the plain scale; ratios are symmetric on the log scale.",
    "times_more_wording": "“Times more” is read as one more than the ratio by some; “times as many” is the ratio.",
    "needed_interval_through_zero": (
        "The difference reaches both sides of 0, so the number needed to treat runs through infinity, not between two ends."
    ),
    "needed_from_rates": (
        "Times to the event or rates are printed too: one over a risk difference from counts is naive if follow-up varied."
    ),
    "differs_between_places": "The same quantity is printed with another value elsewhere.",
    "p_mirrors_threshold": "A bound is printed where a value could be: the P itself may be far smaller.",
    "interval_narrower_than_counts": (
        "The interval is narrower than counts allow: clusters, repeated events or rates may be behind it."
    ),
    "percentages_do_not_sum": "The percentages of these groups do not add up to 100.",
    "repeated_numbers": "The same numbers stand at another outcome.",
    "naive_follow_up": "Naive if follow-up varied.",
}


NARROW_TEXT: Mapping[str, str] = {
    key: f"To narrow the tables most, add {what}."
    for key, what in {
        "events_intervention": "how many had the event in the intervention arm",
        "events_comparator": "how many had the event in the comparator arm",
        "total_intervention": "how many were analysed in the intervention arm",
        "total_comparator": "how many were analysed in the comparator arm",
        "risk_intervention": "the percentage of the intervention arm with one decimal",
        "risk_comparator": "the percentage of the comparator arm with one decimal",
        "risk_ratio": "the risk ratio",
        "odds_ratio": "the odds ratio",
        "risk_difference": "the risk difference",
    }.items()
}
"""Which further printed figure would tell the tables apart, by the name of the figure."""

_PARTS: Mapping[str, str] = {
    "part_exceeds_whole": "More have this component than have the whole outcome, in every table that fits.",
    "parts_fewer_than_whole": "The components together are fewer than the whole: one may not be listed.",
    "groups_exceed_all": "The groups that exclude each other hold more people together than there are.",
}


def because(judged: Judgement, _check: OutcomeCheck | None = None) -> str:
    """Why a claim got its verdict."""
    told = {
        "agrees": _agrees,
        "agrees_within_rounding": _within,
        "agrees_under_another_reading": _reading,
        "cannot_be_checked": _unchecked,
        "does_not_agree": _found,
    }
    return told[judged.verdict](judged)
