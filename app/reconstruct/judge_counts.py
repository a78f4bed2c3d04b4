"""Counts, totals, percentages, rates and person-time against the tables that fit the other claims."""

from __future__ import annotations

from dataclasses import replace
from fractions import Fraction

import numpy as np

from app.measures.fourfold import Fourfold
from app.printed.claims import Claim
from app.reconstruct import between
from app.reconstruct.bench import REASONS, Bench, higher, printed_otherwise, wrong_word
from app.reconstruct.doubt import needed_value
from app.reconstruct.readings import risk_readings
from app.reconstruct.recompute import recomputed_risk
from app.reconstruct.stated import ArmStated, risk_span
from app.reconstruct.verdict import Advice, Finding, Judgement
from app.reconstruct.window import exact


def judge_count(claim: Claim, bench: Bench) -> Judgement:
    """A count, total, percentage, rate or person-time."""
    notes = _count_notes(claim, bench)
    if claim.quantity == "risk" and not claim.checkable:
        reason = "time_to_event" if claim.risk_kind in ("kaplan_meier", "cumulative_incidence") else REASONS[claim.basis]
        return Judgement(claim, "cannot_be_checked", reason=reason, notes=notes)
    recomputed = recomputed_risk(claim, bench.tables) if bench.tables is not None else ()
    if claim.id in bench.tied or claim.id in bench.aside or _impossible(claim, bench):
        return replace(_doubted(claim, bench), notes=notes, recomputed=recomputed)
    if claim in bench.arm(claim).other_totals:
        return replace(_other_total(claim, bench), notes=notes)
    if claim.quantity == "rate":
        return replace(_rate(claim, bench), notes=notes)
    if claim.quantity == "person_time":
        return replace(_person_time(claim, bench), notes=notes)
    if not _linked(claim, bench):
        return Judgement(claim, "cannot_be_checked", reason="too_little", notes=notes, recomputed=recomputed)
    if claim.quantity == "risk" and not _exact_risk(claim, bench):
        readings = () if bench.tables is None else risk_readings(claim, bench.of, bench.tables)
        if readings and not _exact_risk(claim, bench, slips=True):
            return replace(_doubted(claim, bench), notes=notes, recomputed=recomputed)
        return Judgement(claim, "agrees_within_rounding", notes=notes, recomputed=recomputed)
    if between.direction_contradicts(claim, higher(bench)):
        return wrong_word(claim, bench, notes)
    return Judgement(claim, "agrees", notes=notes, recomputed=recomputed)


def _linked(claim: Claim, bench: Bench) -> bool:
    """Whether any other printed number bears on this one."""
    arm = bench.arm(claim)
    kept = [c for c in arm.claims if c.id not in bench.aside and c.id != claim.id]
    if claim.arm is None:
        return bench.tables is not None and all(a.total for a in bench.of.arms)
    if any(c.quantity == "risk" for c in kept) or (claim.quantity == "risk" and kept):
        return True
    if {"events", "non_events", "total"} <= {c.quantity for c in (*kept, claim)}:
        return True
    measures = bench.of.constraining(bench.aside)
    if bench.tables is None:
        return claim.quantity == "risk" and bench.many is not None and bool(measures)
    return bool(measures) or bool(bench.of.constraining_p(bench.aside))


def _exact_risk(claim: Claim, bench: Bench, *, slips: bool = False) -> bool:
    span = risk_span(claim, slips=slips)
    counts = bench.counts(claim)
    if counts is not None:
        risk = counts[0] / counts[1]
        return bool(np.any((risk >= float(span.low) - 1e-12) & (risk <= float(span.high) + 1e-12)))
    arm = bench.arm(claim)
    totals, events = (_only(claims) for claims in (arm.total, arm.events))
    if totals is None:
        return True
    first, last = span.scaled(Fraction(totals)).whole(totals)
    return first <= last if events is None else first <= events <= last


def _only(claims: tuple[Claim, ...]) -> int | None:
    return int(claims[0].said.value) if claims and claims[0].number is not None else None


def _impossible(claim: Claim, bench: Bench) -> bool:
    """Whether no count among the printed total is within one and a half units of the percentage."""
    if claim.quantity != "risk":
        return False
    arm = bench.arm(claim)
    totals = [c for c in arm.total if c.id not in bench.aside]
    total = _only(tuple(totals))
    if total is None or len(totals) != 1:
        return False
    first, last = risk_span(claim, slips=True).scaled(Fraction(total)).whole(total)
    return first > last


def _doubted(claim: Claim, bench: Bench) -> Judgement:
    findings: list[Finding] = []
    evidence: dict[str, object] = {"others": 0}
    arm = bench.arm(claim)
    if claim.quantity == "events" and (total := _only(arm.total)) is not None and int(claim.said.value) > total:
        findings.append("count_exceeds_total")
    if _impossible(claim, bench):
        findings.append("impossible_percentage")
        evidence["nearest"] = _nearest(claim, arm)
    if claim.id in bench.tied:
        findings.append("contradict_each_other")
    elif claim.arm is None:
        findings.append("totals_do_not_add")
    elif claim.id in bench.aside:
        named: dict[str, Finding] = {
            "risk": "percentage_does_not_fit",
            "total": "total_does_not_fit",
            "rate": "estimate_does_not_fit",
            "person_time": "impossible_person_time",
        }
        findings.append(named.get(claim.quantity, "count_does_not_fit"))
    if bench.tables is not None and claim.id not in bench.tied:
        evidence |= _would_fit(claim, bench.tables)
        readings = risk_readings(claim, bench.of, bench.tables)
        if readings:
            return Judgement(claim, "agrees_under_another_reading", readings=readings, consequence="size", evidence=evidence)
    return Judgement(claim, "does_not_agree", findings=tuple(findings), consequence="size", evidence=evidence)


def _nearest(claim: Claim, arm: ArmStated) -> tuple[tuple[int, int], ...]:
    """The two counts next to an impossible percentage, with their total."""
    total = _only(arm.total) or 1
    below = int(claim.said.exact * claim.factor * total)
    return tuple((k, total) for k in (below, below + 1) if 0 <= k <= total)


def _would_fit(claim: Claim, tables: Fourfold) -> dict[str, object]:
    """The smallest and largest value, in the printed unit, that the other claims allow."""
    size = tables.events_intervention.size
    values = [needed_value(claim, tables, row) for row in (range(size) if size <= 200 else (0, size - 1))]
    known = [v for v in values if v is not None]
    return {"would_fit": (min(known), max(known))} if known else {}


def _other_total(claim: Claim, bench: Bench) -> Judgement:
    """People randomised cannot be fewer than those analysed."""
    total = _only(bench.arm(claim).total)
    if total is not None and claim.total_kind == "randomised" and int(claim.said.value) < total:
        return Judgement(
            claim, "does_not_agree", findings=("totals_do_not_add",), consequence="size", evidence={"analysed": total}
        )
    return Judgement(claim, "cannot_be_checked", reason="too_little")


def _rate(claim: Claim, bench: Bench) -> Judgement:
    arm = bench.arm(claim)
    events, time = _only(arm.events), arm.time()
    if events is None or time is None:
        linked = any(c.quantity in ("rate_ratio", "risk_ratio", "rate_difference") for c in bench.of.measures)
        return Judgement(
            claim,
            "agrees" if linked and _rates_meet(bench) else "cannot_be_checked",
            reason=None if linked and _rates_meet(bench) else "too_little",
        )
    value = events / time
    evidence = {"rate": value / float(claim.factor)}
    if exact(claim.said, claim.factor).holds(np.asarray(value)).item():
        return Judgement(claim, "agrees", evidence=evidence)
    if between.nearly(claim, value):
        return Judgement(claim, "agrees_within_rounding", evidence=evidence)
    return Judgement(claim, "does_not_agree", findings=("estimate_does_not_fit",), consequence="size", evidence=evidence)


def _rates_meet(bench: Bench) -> bool:
    return any(between.rates_allow(c, bench.of) is True for c in bench.of.measures if c.number is not None)


def _person_time(claim: Claim, bench: Bench) -> Judgement:
    """Person-time against people and the time they can have been followed."""
    longest = between.years(claim.horizon)
    total = _only(bench.arm(claim).total)
    if longest is not None and total is not None and claim.unit in ("proportion", "person_years"):
        mean = float(claim.said.exact) / total
        if mean > longest * 1.0001:
            evidence = {"mean": mean, "longest": longest}
            return Judgement(
                claim, "does_not_agree", findings=("impossible_person_time",), consequence="size", evidence=evidence
            )
    arm = bench.arm(claim)
    if arm.rates and arm.events:
        return Judgement(claim, "agrees")
    return Judgement(claim, "cannot_be_checked", reason="too_little")


def _count_notes(claim: Claim, bench: Bench) -> tuple[Advice, ...]:
    notes = []
    total = _only(bench.arm(claim).total) if claim.arm is not None else None
    percent = claim.quantity == "risk" and claim.number is not None and claim.unit == "percent"
    if percent and total is not None and claim.said.decimals >= 2 and total < 1000:
        notes.append(Advice("more_digits_than_people", {"total": total}))
    if printed_otherwise(claim, bench.of):
        notes.append(Advice("differs_between_places"))
    return tuple(notes)
