"""The JSON body of /balance -> outcomes of one trial, each with its counts and, if given, another starting risk."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Any

from app.appraisal.carry import held_from_counts, own_risk
from app.appraisal.sheet import EventIs
from app.intake.body import SAID, Body
from app.intake.counts import ARM_NAMES, table_of
from app.transport.constant import SCALES, Held, Scale

_MOST = 60
_LONGEST = 400


@dataclass(frozen=True, slots=True)
class BalanceOutcome:
    """One outcome: its name and time, the effect held, the starting risk (None for the trial's own), and the trial's."""

    name: str
    horizon: str | None
    event_is: EventIs
    held: Held
    baseline_risk: float | None
    comparator_risk: float


@dataclass(frozen=True, slots=True)
class BalanceInput:
    """The outcomes in the order given, and what they are counted per."""

    outcomes: tuple[BalanceOutcome, ...]
    per: int


def balance_input(given: Any) -> BalanceInput:
    """Read the body of /balance.

    Raises
    ------
    InputProblems
        Everything that is wrong with it.
    """
    body = Body(given, ("outcomes", "per", "confidence_level"))
    level = body.confidence_level()
    per = (body.whole("per", 1) or 1000) if body.has("per") else 1000
    fields = ("name", "horizon", "event_is", *ARM_NAMES, "baseline_risk", "held")
    outcomes = tuple(_outcome(inner, level) for inner in body.each("outcomes", fields, _MOST))
    body.finish()
    return BalanceInput(outcomes, per)


def _outcome(body: Body, level: float) -> BalanceOutcome:
    table = table_of(body)
    scale: Scale = body.choice("held", SCALES, "risk_ratio")
    risk = body.number("baseline_risk", 0.0, 1.0) if body.has("baseline_risk") else None
    if risk is None:
        scale = "risk_difference"  # at the trial's own risk all scales agree; this one's interval is shown
    held = next(h for h in held_from_counts(table, level) if h.scale == scale)
    event_is = body.choice("event_is", SAID, "unwanted")
    return BalanceOutcome(_text(body, "name") or "", _text(body, "horizon"), event_is, held, risk, own_risk(table))


def _text(body: Body, field: str) -> str | None:
    value = body.given.get(field)
    if value is not None and (not isinstance(value, str) or len(value) > _LONGEST):
        body.add(field, f"Text of at most {_LONGEST} characters is needed.", "Give the name as the paper does.", "not_text")
        return None
    return value
