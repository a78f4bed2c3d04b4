"""The answer of /check: every claim as given, with its verdict, and the tables that fit."""

from __future__ import annotations

import math
from collections.abc import Iterable
from typing import Any

from app.api.answers import Json, versioned
from app.intake.claims import CheckInput, NamedOutcome
from app.present.asked import QUESTIONS, REPAIR_TEXT
from app.present.verdicts import because
from app.printed.claims import Claim, PrintedInterval
from app.printed.number import PrintedNumber
from app.reading.read import Reading
from app.reconstruct.across import together
from app.reconstruct.judge import check_outcome
from app.reconstruct.narrowing import ranges
from app.reconstruct.verdict import Choice, Judgement, OutcomeCheck, Recomputed, Spread, Tables

LISTED = 200
"""Tables that an answer lists; the count says how many there are."""


def _finite(value: float) -> float | str | None:
    if math.isnan(value):
        return None
    return value if math.isfinite(value) else ("inf" if value > 0 else "-inf")


def _one(spread: Spread | None) -> float | str | None:
    """The value that all tables share; null where they differ."""
    return None if spread is None or spread[0] != spread[1] else _finite(spread[0])


def _ends(spread: Spread | None) -> list[float | str | None] | None:
    return None if spread is None else [_finite(end) for end in spread]


def _plain(number: PrintedNumber | None) -> str | None:
    return None if number is None else f"{number.value:f}"


def _interval(interval: PrintedInterval | None) -> Json | None:
    if interval is None:
        return None
    low, high = interval.limits
    return {
        "low": low.text if low else None,
        "high": high.text if high else None,
        "low_value": _plain(low),
        "high_value": _plain(high),
        "confidence_level": interval.confidence_level,
        "kind": interval.kind,
    }


def claim_json(claim: Claim) -> Json:
    """A claim as the interface writes it."""
    return {
        "id": claim.id,
        "quantity": claim.quantity,
        "arm": claim.arm,
        "printed": claim.number.text if claim.number else None,
        "value": _plain(claim.number),
        "unit": claim.unit,
        "operator": claim.operator,
        "interval": _interval(claim.interval),
        "basis": claim.basis,
        "sense": claim.sense,
        "test": claim.test,
        "sides": claim.sides,
        "risk_kind": claim.risk_kind,
        "total_kind": claim.total_kind,
        "outcome": claim.outcome,
        "horizon": claim.horizon,
        "place": claim.place,
        "span": list(claim.span) if claim.span else None,
        "label": claim.label,
    }


def _recomputed(found: Recomputed) -> Json:
    return {
        "method": found.method,
        "estimate": _one(found.estimate),
        "low": _one(found.low),
        "high": _one(found.high),
        "estimate_range": _ends(found.estimate),
        "low_range": _ends(found.low),
        "high_range": _ends(found.high),
        "prints": found.prints,
    }


def _judged(judged: Judgement, check: OutcomeCheck) -> Json:
    return {
        **claim_json(judged.claim),
        "verdict": judged.verdict,
        "reading": judged.reading,
        "readings": list(judged.readings),
        "possible": list(judged.possible),
        "finding": judged.finding,
        "findings": list(judged.findings),
        "reason": judged.reason,
        "notes": [note.slug for note in judged.notes],
        "recomputed": [_recomputed(found) for found in judged.recomputed],
        "consequence": judged.consequence,
        "because": because(judged, check),
    }


def _rows(tables: Any) -> list[list[int]]:
    columns = (tables.events_intervention, tables.total_intervention, tables.events_comparator, tables.total_comparator)
    return [[int(x) for x in row] for row in zip(*(column[:LISTED] for column in columns), strict=True)]


def _tables(found: Tables) -> Json:
    listed = found.tables if found.complete else None
    return {
        "count": found.count,
        "complete": found.complete,
        "list": [] if listed is None else _rows(listed),
        "ranges": {} if found.tables is None else {name: _ends(ends) for name, ends in ranges(found.tables).items()},
        "narrow_with": found.narrow_with,
    }


def _choice(choice: Choice) -> Json:
    return {
        "slug": choice.slug,
        "set_aside": list(choice.set_aside),
        "count": int(choice.tables.events_intervention.size),
        "list": _rows(choice.tables),
    }


def _outcome(given: NamedOutcome, check: OutcomeCheck) -> Json:
    return {
        "name": given.name,
        "horizon": given.horizon,
        "claims": [_judged(judged, check) for judged in check.judgements],
        "tables": {
            **_tables(check.tables),
            "set_aside": list(check.set_aside),
            "choices": [_choice(choice) for choice in check.choices],
        },
    }


def check_answer(given: CheckInput) -> Json:
    """The answer of /check."""
    checks = together([check_outcome(outcome.claims) for outcome in given.outcomes], given.belongings)
    questions = dict.fromkeys(slug for check in checks for slug in check.questions)
    return versioned(
        outcomes=[_outcome(outcome, check) for outcome, check in zip(given.outcomes, checks, strict=True)],
        unread=_unread(given.reading),
        questions=_questions((*(given.reading.questions if given.reading else ()), *questions)),
        repairs=_repairs(given.reading),
    )


def _unread(reading: Reading | None) -> list[Json]:
    return [{"span": list(u.span), "text": u.text, "why": u.why} for u in reading.unread] if reading else []


def _questions(slugs: Iterable[str]) -> list[Json]:
    return [{"slug": slug, "text": QUESTIONS[slug]} for slug in slugs]


def _repairs(reading: Reading | None) -> list[Json]:
    """What was put right in the passage before it was read."""
    return [{"slug": slug, "text": REPAIR_TEXT[slug]} for slug in reading.repairs] if reading else []


def read_answer(found: Reading) -> Json:
    """The answer of /read."""
    return versioned(
        outcomes=[{"name": o.name, "horizon": o.horizon, "claims": [claim_json(c) for c in o.claims]} for o in found.outcomes],
        unread=_unread(found),
        questions=_questions(found.questions),
        repairs=_repairs(found),
    )
