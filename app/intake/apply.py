"""The JSON body of /apply -> an effect on every scale that may be held, and the starting risks to carry it to."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Any

from app.appraisal.carry import held_from_counts
from app.appraisal.sheet import EventIs
from app.intake.body import SAID, Body
from app.intake.counts import ARM_NAMES, table_of
from app.transport.constant import FACES, SCALES, Effect, Face, Held, Scale, of_event, on_every_scale

_LARGEST = 1e9
_MOST_RISKS = 1000
_EXAMPLE = '{"measure": "risk_ratio", "estimate": 0.67, "low": 0.47, "high": 0.95}'


@dataclass(frozen=True, slots=True)
class ApplyInput:
    """An effect on the scales that may be held constant, and the starting risks."""

    held: tuple[Held, ...]
    baseline_risks: tuple[float, ...]
    event_is: EventIs


def apply_input(given: Any) -> ApplyInput:
    """Read the body of /apply.

    Raises
    ------
    InputProblems
        Everything that is wrong with it.
    """
    fields = ("effect", "comparator_risk", "baseline_risks", "event_is", "face", "counts", "confidence_level")
    body = Body(given, fields)
    face: Face = body.choice("face", FACES, "event")
    level = body.confidence_level()
    counted = body.inner("counts", ARM_NAMES, "counts of both arms") if body.has("counts") else None
    table = table_of(counted) if counted is not None else None
    measure, effect = ("risk_ratio", Effect(1.0, 1.0, 1.0)) if table is not None and not body.has("effect") else _effect(body)
    risk = body.number("comparator_risk", 0.0, 1.0) if body.has("comparator_risk") else None
    risks = _risks(body)
    event_is = body.choice("event_is", SAID, "unwanted")
    body.finish()
    given_held = of_event(measure, effect, face)  # type: ignore[arg-type]
    if table is None:
        return ApplyInput(on_every_scale(given_held, risk), risks, event_is)
    kept = given_held if body.has("effect") else None
    return ApplyInput(held_from_counts(table, level, kept, face), risks, event_is)


def _effect(body: Body) -> tuple[Scale, Effect]:
    inner = body.inner("effect", ("measure", "estimate", "low", "high"), _EXAMPLE)
    if not body.has("effect"):
        return "risk_ratio", Effect(1.0, 1.0, 1.0)
    measure = inner.choice("measure", SCALES)
    ends = (-1.0, 1.0) if measure == "risk_difference" else (0.0, _LARGEST)
    found = [inner.number(name, *ends) for name in ("estimate", "low", "high")]
    estimate, low, high = (1.0 if value is None else value for value in found)
    if not any(value is None for value in found) and not low <= estimate <= high:
        inner.add(
            "estimate", "The estimate must lie within its interval.", "Check the three numbers.", "estimate_outside_interval"
        )
    return measure, Effect(estimate, low, high)


def _risks(body: Body) -> tuple[float, ...]:
    values = body.given.get("baseline_risks")
    if not isinstance(values, list) or not 1 <= len(values) <= _MOST_RISKS:
        body.add("baseline_risks", f"A list of 1 to {_MOST_RISKS} risks is needed.", "Give [0.05, 0.2].", "missing_field")
        return ()
    inner = Body({f"[{i}]": value for i, value in enumerate(values)}, [f"[{i}]" for i in range(len(values))], body.problems)
    inner.path = "baseline_risks"
    return tuple(inner.number(f"[{i}]", 0.0, 1.0) or 0.0 for i in range(len(values)))
