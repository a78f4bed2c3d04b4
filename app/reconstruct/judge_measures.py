"""Ratios, differences, reductions and numbers needed to treat: against the tables, else against other print."""

from __future__ import annotations

from dataclasses import replace

import numpy as np

from app.measures.fourfold import Fourfold
from app.printed.claims import RATIOS, Claim
from app.reconstruct import between
from app.reconstruct.bench import REASONS, Bench, higher, printed_otherwise, wrong_word
from app.reconstruct.crude import crude_value, excused, lies_near
from app.reconstruct.prints import Asked, matches, normal_width
from app.reconstruct.readings import alternatives_by_print, readings_of
from app.reconstruct.recompute import needed_is_open, recomputed_measure
from app.reconstruct.verdict import Advice, Consequence, Finding, Judgement


def judge_measure(claim: Claim, bench: Bench) -> Judgement:
    """A ratio, difference, reduction or number needed to treat."""
    inner = between.internal(claim)
    notes = _measure_notes(claim, bench)
    if claim.quantity == "hazard_ratio" or not claim.checkable:
        found = _modelled(claim, bench, inner)
    elif bench.tables is not None and bench.of.ways(claim):
        found = _by_tables(claim, bench, inner)
    else:
        found = _by_print(claim, bench, inner)
    if "estimate_outside_interval" in inner and found.verdict != "does_not_agree":
        found = Judgement(claim, "does_not_agree", findings=inner, recomputed=found.recomputed, consequence="size")
    word = between.direction_contradicts(claim, higher(bench))
    if word and found.verdict in ("agrees", "agrees_within_rounding", "cannot_be_checked"):
        return wrong_word(claim, bench, notes)
    if word and found.verdict == "does_not_agree":
        found = replace(found, findings=(*found.findings, "direction_word_against_numbers"))
    return replace(found, notes=(*notes, *found.notes))


def _modelled(claim: Claim, bench: Bench, inner: tuple[Finding, ...]) -> Judgement:
    """An estimate that counts cannot give: its own interval, and what else is printed of it."""
    reason = "time_to_event" if claim.quantity == "hazard_ratio" and claim.checkable else REASONS.get(claim.basis, "adjusted")
    recomputed = recomputed_measure(claim, bench.of, bench.tables)[0] if bench.tables is not None else ()
    if inner:
        return Judgement(claim, "does_not_agree", findings=inner, reason=reason, recomputed=recomputed, consequence="size")
    readings = alternatives_by_print(claim, bench.of)
    if readings and not between.others_allow(claim, bench.of, bench.aside):
        return Judgement(claim, "agrees_under_another_reading", readings=readings, reason=reason, consequence="size")
    return Judgement(claim, "cannot_be_checked", reason=reason, recomputed=recomputed)


def _by_tables(claim: Claim, bench: Bench, inner: tuple[Finding, ...]) -> Judgement:
    tables = bench.tables
    if tables is None:
        raise ValueError("there are no tables to judge by")
    ways = bench.of.ways(claim)
    found = [matches(way, tables, bench.timed) for way in ways]
    any_of = {part: any(bool(getattr(m, part).any()) for m in found) for part in ("exact", "near", "seldom", "estimate_near")}
    way = next((w for w, m in zip(ways, found, strict=True) if (m.exact | m.near | m.seldom).any()), None)
    way = way or next((w for w, m in zip(ways, found, strict=True) if m.estimate_near.any()), None)
    recomputed, shown = recomputed_measure(claim, bench.of, tables, way)
    consequence = _consequence(claim, shown)
    if any_of["exact"]:
        return Judgement(claim, "agrees", recomputed=recomputed, evidence=_rounding_rule(claim, shown))
    if any_of["near"]:
        return Judgement(claim, "agrees_within_rounding", recomputed=recomputed)
    alone = claim.interval is None or _interval_alone(ways, tables, bench)
    if alone and between.others_allow(claim, bench.of, bench.aside):
        return Judgement(claim, "agrees_within_rounding", recomputed=recomputed)
    if any_of["seldom"]:
        return Judgement(
            claim, "agrees_under_another_reading", readings=("unusual_method",), recomputed=recomputed, consequence="nothing"
        )
    readings = readings_of(claim, bench.of, tables)
    named = readings.named + tuple(r for r in alternatives_by_print(claim, bench.of) if r not in readings.named)
    if claim.quantity == "number_needed_to_treat" and needed_is_open(claim, bench.of):
        named = (*named, "needed_from_another_difference")
    if named:
        return Judgement(
            claim,
            "agrees_under_another_reading",
            readings=named,
            possible=readings.possible,
            recomputed=recomputed,
            consequence=consequence if consequence != "nothing" else "size",
            evidence={"asked": readings.asked},
        )
    findings = _measure_findings(claim, inner, estimate_fits=any_of["estimate_near"])
    if excused(claim, bench.of, tables):
        return Judgement(
            claim,
            "cannot_be_checked",
            reason="adjusted",
            possible=readings.possible,
            recomputed=recomputed,
            evidence={"question": "crude_or_adjusted", "only_if_adjusted": True},
        )
    return Judgement(
        claim,
        "does_not_agree",
        findings=findings,
        possible=readings.possible,
        notes=_narrower(claim, tables) if "interval_does_not_fit" in findings else (),
        recomputed=recomputed,
        consequence=consequence if consequence != "nothing" else "size",
    )


def _interval_alone(ways: tuple[Asked, ...], tables: Fourfold, bench: Bench) -> bool:
    """Whether some method prints the interval, whatever its estimate."""
    found = [matches(replace(way, number=None), tables, bench.timed, seldom=False) for way in ways if way.interval]
    return any(bool((m.exact | m.near).any()) for m in found)


def _rounding_rule(claim: Claim, shown: float | None) -> dict[str, object]:
    """How a number needed to treat was rounded."""
    if claim.quantity != "number_needed_to_treat" or shown is None or claim.number is None or claim.said.decimals:
        return {}
    printed = abs(int(claim.said.value))
    rules = {"up": int(np.ceil(shown)), "down": int(np.floor(shown)), "nearest": int(np.floor(shown + 0.5))}
    return {"rounded": tuple(rule for rule, value in rules.items() if value == printed), "unrounded": shown}


def _measure_findings(claim: Claim, inner: tuple[Finding, ...], *, estimate_fits: bool) -> tuple[Finding, ...]:
    if claim.quantity == "number_needed_to_treat":
        return (*inner, "needed_does_not_fit")
    return (*inner, "interval_does_not_fit" if estimate_fits else "estimate_does_not_fit")


def _narrower(claim: Claim, tables: Fourfold) -> tuple[Advice, ...]:
    width = between.log_width(claim)
    least = crude_value(claim, tables)
    if width is None or least is None or claim.interval is None:
        return ()
    crude = least.error * normal_width(claim.interval.confidence_level)
    return (Advice("interval_narrower_than_counts", {"printed": width, "crude": crude}),) if width < 0.97 * crude else ()


def _by_print(claim: Claim, bench: Bench, inner: tuple[Finding, ...]) -> Judgement:
    """Without tables: against the percentages, rates and other figures as printed."""
    if inner:
        return Judgement(claim, "does_not_agree", findings=inner, consequence="size")
    if claim.number is None:
        return Judgement(claim, "cannot_be_checked", reason="too_little")
    printed = between.others_allow(claim, bench.of, bench.aside)
    if printed or (claim.quantity in ("rate_ratio", "risk_ratio", "rate_difference") and between.rates_allow(claim, bench.of)):
        return Judgement(claim, "agrees_within_rounding")
    equal = between.as_if_equal(bench.of, bench.aside) if claim.quantity in ("risk_ratio", "rate_ratio") else None
    if equal is not None and any(bool(matches(way, equal, None).near.any()) for way in bench.of.ways(claim)):
        return Judgement(claim, "agrees_within_rounding", evidence={"arms_of_one_size": True})
    if bench.many is not None and bench.of.ways(claim):
        return _by_percentages(claim, bench, bench.many)
    readings = alternatives_by_print(claim, bench.of)
    if readings:
        return Judgement(claim, "agrees_under_another_reading", readings=readings, consequence="size")
    return _against_ratio(claim, bench)


def _by_percentages(claim: Claim, bench: Bench, many: Fourfold) -> Judgement:
    """Against the printed percentages of arms whose totals are open: the estimate alone."""
    bare = replace(claim, interval=None)
    if any(bool(matches(way, many, None).estimate.any()) for way in bench.of.ways(bare)):
        return Judgement(claim, "agrees_within_rounding")
    more = readings_of(bare, bench.of, many)
    readings = tuple(dict.fromkeys((*alternatives_by_print(claim, bench.of), *more.named)))
    if readings:
        return Judgement(claim, "agrees_under_another_reading", readings=readings, consequence="size")
    if claim.basis == "unstated" and lies_near(claim, many, own_width=True):
        evidence: dict[str, object] = {"question": "crude_or_adjusted", "only_if_adjusted": True}
        return Judgement(claim, "cannot_be_checked", reason="adjusted", possible=more.possible, evidence=evidence)
    findings = _measure_findings(bare, (), estimate_fits=False)
    return Judgement(claim, "does_not_agree", findings=findings, possible=more.possible, consequence="size")


def _against_ratio(claim: Claim, bench: Bench) -> Judgement:
    """A reduction that its ratio does not give, or a number needed to treat that its difference does not."""
    linked = {
        "relative_risk_reduction": ("risk_ratio", "odds_ratio", "rate_ratio", "hazard_ratio"),
        "relative_risk_increase": ("risk_ratio", "odds_ratio", "rate_ratio", "hazard_ratio"),
        "number_needed_to_treat": ("risk_difference",),
    }
    partners = [c for c in bench.of.measures if c.quantity in linked.get(claim.quantity, ()) and c.number is not None]
    if partners and bench.tables is None:
        findings = _measure_findings(claim, (), estimate_fits=False)
        return Judgement(claim, "does_not_agree", findings=findings, consequence="size", evidence={"against": partners[0].id})
    return Judgement(claim, "cannot_be_checked", reason="too_little")


def _consequence(claim: Claim, shown: float | None) -> Consequence:
    """What changes if the recomputed estimate is taken for the printed one."""
    if shown is None or claim.number is None or claim.quantity == "number_needed_to_treat":
        return "size"
    no_effect = 1.0 if claim.quantity in RATIOS else 0.0
    printed = float(claim.said.exact * claim.factor)
    return "direction" if (printed - no_effect) * (shown - no_effect) < 0.0 else "size"


def _measure_notes(claim: Claim, bench: Bench) -> tuple[Advice, ...]:
    notes: list[Advice] = []
    if between.plain_symmetric(claim):
        notes.append(Advice("interval_symmetric_on_plain_scale"))
    if between.times_more(claim):
        notes.append(Advice("times_more_wording"))
    if claim.quantity == "number_needed_to_treat":
        notes += _needed_notes(claim, bench)
    if claim.quantity == "hazard_ratio":
        more, own = higher(bench), between.own_direction(claim)
        if more is not None and own is not None and more != own:
            notes.append(Advice("hazard_against_counts", {"higher": more}))
    if printed_otherwise(claim, bench.of):
        notes.append(Advice("differs_between_places"))
    return tuple(notes)


def _needed_notes(claim: Claim, bench: Bench) -> list[Advice]:
    notes = []
    lacking = tuple(part for part, given in (("horizon", claim.horizon), ("interval", claim.interval)) if not given)
    if lacking:
        notes.append(Advice("needed_incomplete", {"lacking": lacking}))
    if claim.interval is not None and None not in claim.interval.limits:
        across = _difference_spans_zero(bench)
        both_positive = all(limit is not None and limit.exact > 0 for limit in claim.interval.limits)
        if across and both_positive:
            notes.append(Advice("needed_interval_through_zero"))
    if bench.timed is not None or any(c.quantity == "hazard_ratio" or c.basis == "time_to_event" for c in bench.of.measures):
        notes.append(Advice("needed_from_rates"))
    return notes


def _difference_spans_zero(bench: Bench) -> bool:
    for other in bench.of.measures:
        if other.quantity == "risk_difference" and between.excludes_no_effect(other) is False:
            return True
    if bench.tables is None:
        return False
    found = crude_value(Claim("", "risk_difference", None, None, "points"), bench.tables)
    return found is not None and abs(found.value) < 1.96 * found.error
