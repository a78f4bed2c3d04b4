"""P values: against counts by every usual test, else against the printed estimate and interval."""

from __future__ import annotations

from fractions import Fraction

from app.printed.claims import Claim
from app.reconstruct import between
from app.reconstruct.bench import REASONS, Bench
from app.reconstruct.crude import p_lies_near
from app.reconstruct.p_prints import AskedP, asked_p, p_matches, p_window
from app.reconstruct.readings import one_sided
from app.reconstruct.recompute import recomputed_p
from app.reconstruct.verdict import Advice, Consequence, Judgement, Reading, Reason
from app.reconstruct.window import Window

_USUAL_BOUNDS = frozenset(Fraction(text) for text in ("0.05", "0.01", "0.005", "0.001", "0.0005", "0.0001", "0.00001"))


def judge_p(claim: Claim, bench: Bench, measured: list[Judgement]) -> Judgement:
    """A p value: against counts by every usual test, else against the printed estimate and interval."""
    question = asked_p(claim)
    if question is None:
        return Judgement(claim, "cannot_be_checked", reason="unread")
    if question.number.exact > 1 or (question.number.exact == 0 and question.operator in ("=", "<")):
        recomputed = recomputed_p(bench.tables, bench.timed, question)[0] if bench.tables is not None else ()
        return Judgement(claim, "does_not_agree", findings=("impossible_p",), recomputed=recomputed, consequence="nothing")
    if claim.test in ("noninferiority", "interaction", "trend"):
        return Judgement(claim, "cannot_be_checked", reason="too_little", evidence={"test": claim.test})
    if bench.tables is None or _modelled_test(claim) or bench.of.p_is_modelled:
        return _p_by_interval(claim, question, bench, measured)
    by_counts = _p_by_counts(claim, question, bench, measured)
    if by_counts.verdict == "does_not_agree" and _maybe_modelled(measured):
        return _p_by_interval(claim, question, bench, measured)  # an estimate that may be adjusted may bring its own p
    return by_counts


def _modelled_test(claim: Claim) -> bool:
    return not claim.checkable or claim.test == "logrank"


def _maybe_modelled(measured: list[Judgement]) -> bool:
    """Whether every estimate with an interval is one that may be adjusted."""
    estimates = [j for j in measured if j.claim.quantity != "number_needed_to_treat" and j.claim.interval is not None]
    return bool(estimates) and all(
        j.claim.quantity == "hazard_ratio" or not j.claim.checkable or bool(j.evidence.get("only_if_adjusted"))
        for j in estimates
    )


def _p_by_counts(claim: Claim, question: AskedP, bench: Bench, measured: list[Judgement]) -> Judgement:
    tables = bench.tables
    if tables is None:
        raise ValueError("there are no tables to judge by")
    match = p_matches(question, tables, bench.timed)
    recomputed, spread = recomputed_p(tables, bench.timed, question)
    notes = _p_notes(question, spread)
    evidence: dict[str, object] = {"spread": spread, "straddles": spread[0] < 0.05 <= spread[1]}
    if match.exact.any():
        return Judgement(claim, "agrees", recomputed=recomputed, notes=notes, evidence=evidence)
    fitting = [j for j in measured if j.verdict in ("agrees", "agrees_within_rounding") and j.claim.interval is not None]
    for judged in fitting:
        allowed = between.p_from(judged.claim)
        if allowed is not None and between.p_agrees(question, allowed, loose=False)[0] and _between_tests(question, spread):
            return Judgement(claim, "agrees_within_rounding", recomputed=recomputed, notes=notes, evidence=evidence)
    if match.seldom.any():
        return Judgement(
            claim,
            "agrees_under_another_reading",
            readings=("unusual_method",),
            recomputed=recomputed,
            notes=notes,
            evidence=evidence,
        )
    fits, enough = one_sided(claim, bench.of, tables)
    if enough:
        consequence: Consequence = "conclusion" if spread[0] >= 0.05 > float(question.number.exact) else "size"
        return Judgement(
            claim,
            "agrees_under_another_reading",
            readings=("one_sided_p",),
            recomputed=recomputed,
            consequence=consequence,
            notes=notes,
            evidence=evidence,
        )
    if claim.basis == "unstated" and p_lies_near(question, spread, closely=bool(fitting)):
        evidence |= {"question": "crude_or_adjusted", "only_if_adjusted": True}
        return Judgement(claim, "cannot_be_checked", reason="adjusted", recomputed=recomputed, notes=notes, evidence=evidence)
    possible: tuple[Reading, ...] = ("one_sided_p",) if fits else ()
    return Judgement(
        claim,
        "does_not_agree",
        findings=("p_against_counts",),
        possible=possible,
        recomputed=recomputed,
        notes=notes,
        consequence=_p_consequence(question, spread),
        evidence=evidence,
    )


def _between_tests(question: AskedP, spread: tuple[float, float]) -> bool:
    window = p_window(question)
    return window.high >= spread[0] and window.low <= spread[1]


def _p_consequence(question: AskedP, spread: tuple[float, float]) -> Consequence:
    printed = float(question.number.exact) * question.two_sided
    below = printed < 0.05 or (question.operator in ("<", "<=") and printed <= 0.05)
    return "conclusion" if (below and spread[0] >= 0.05) or (not below and spread[1] < 0.05) else "size"


def _p_notes(question: AskedP, spread: tuple[float, float]) -> tuple[Advice, ...]:
    """A bound that hides a much smaller p, or is no usual threshold."""
    if question.operator not in ("<", "<=") or question.number.exact <= Fraction(1, 1000):
        return ()
    far = spread[1] < float(question.number.exact) / 10.0
    odd = question.number.exact not in _USUAL_BOUNDS
    return (Advice("p_mirrors_threshold", {"spread": spread}),) if far or odd else ()


def _p_by_interval(claim: Claim, question: AskedP, bench: Bench, measured: list[Judgement]) -> Judgement:
    """Against every printed estimate with an interval: jointly over all that print so."""
    loose = True  # without counts a p may be log-rank, score or exact
    states = []
    for judged in measured:
        other = judged.claim
        if other.interval is None or "estimate_outside_interval" in judged.findings:
            continue
        allowed = between.p_from(other)
        if allowed is not None:
            states.append((between.p_agrees(question, allowed, loose=loose), allowed, other))
    if not states:
        if bench.tables is not None and not _modelled_test(claim):
            return _p_by_counts(claim, question, bench, measured)
        reason: Reason = (
            "too_little" if claim.checkable and claim.test != "logrank" else REASONS.get(claim.basis, "time_to_event")
        )
        return Judgement(claim, "cannot_be_checked", reason=reason)
    allowed, other = states[0][1], states[0][2]
    evidence: dict[str, object] = {"joint": tuple(allowed.joint), "against": other.id}
    if any(joint for (joint, _), _, _ in states):
        return Judgement(claim, "agrees", evidence=evidence)
    if any(box for (_, box), _, _ in states):
        evidence |= _sides(question, allowed.joint)
        return Judgement(claim, "agrees_within_rounding", evidence=evidence)
    return Judgement(
        claim,
        "does_not_agree",
        findings=("p_against_interval",),
        consequence=_p_consequence(question, tuple(allowed.joint)),  # type: ignore[arg-type]
        evidence=evidence,
    )


def _sides(question: AskedP, joint: Window) -> dict[str, object]:
    """Opposite sides of 0.05 are a question, not a finding."""
    window = p_window(question)
    apart = (window.high < 0.05 <= joint.low) or (window.low >= 0.05 > joint.high)
    return {"question": "which_test_gave_p"} if apart else {}
