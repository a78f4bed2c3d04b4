"""The answer of /balance: every outcome in the same form, each with its own risk, never added."""

from __future__ import annotations

from app.api.answers import Json, number, versioned
from app.intake.balance import BalanceInput, BalanceOutcome
from app.transport.constant import carried


def balance_answer(given: BalanceInput) -> Json:
    """The answer of /balance."""
    horizons = {outcome.horizon for outcome in given.outcomes}
    return versioned(
        per=given.per,
        one_horizon=len(horizons) == 1 and None not in horizons,
        outcomes=[_row(outcome, given.per) for outcome in given.outcomes],
    )


def _row(outcome: BalanceOutcome, per: int) -> Json:
    """At the trial's own risk the interval of the difference; at another the carried one, the risk taken as known."""
    own = outcome.baseline_risk is None
    held = outcome.held
    risk = outcome.comparator_risk if outcome.baseline_risk is None else outcome.baseline_risk
    found = carried(held, risk)
    with_it, difference, low, high = (float(x) for x in (found.risk_with, found.difference, found.low, found.high))
    if own:
        low, high = held.effect.low, held.effect.high
    return {
        "name": outcome.name,
        "horizon": outcome.horizon,
        "event_is": outcome.event_is,
        "starting_risk": "trial" if own else "given",
        "held": held.scale,
        "possible": with_it == with_it,
        "without": number(per * risk),
        "with": number(per * with_it),
        "change": number(per * difference),
        "low": number(per * low),
        "high": number(per * high),
    }
