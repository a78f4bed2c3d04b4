"""JSON bodies of printed estimates -> numbers, or every problem at once."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Any, Literal

from app.appraisal.sheet import EventIs
from app.intake.body import SAID, Body
from app.measures.backcalc import Scale
from app.measures.evalue import Reported

_SMALLEST, _LARGEST = 1e-9, 1e9
_SMALLEST_P = 1e-300
_ESTIMATE = ("estimate", "low", "high")
_EXAMPLE = '{"estimate": 0.78, "low": 0.66, "high": 0.92}'
_SCALES: tuple[Scale, ...] = ("ratio", "difference")
_REPORTED: tuple[Reported, ...] = ("RR", "OR_common_outcome", "HR_common_outcome")
RatioIsFor = Literal["event", "event_free"]
_RATIO_IS_FOR: tuple[RatioIsFor, ...] = ("event", "event_free")

Estimate = tuple[float, float, float]


@dataclass(frozen=True, slots=True)
class HazardInput:
    """A hazard ratio for the event with its limits, the comparator's risk at the time, and what the event is."""

    hazard_ratio: Estimate
    comparator_risk: float
    event_is: EventIs


@dataclass(frozen=True, slots=True)
class BackInput:
    """An estimate with either its limits or its p."""

    scale: Scale
    estimate: float
    limits: tuple[float, float] | None
    p: float | None
    confidence_level: float
    sides: int


@dataclass(frozen=True, slots=True)
class TranslateInput:
    """A ratio and the starting risks to carry it to."""

    measure: Literal["odds_ratio", "risk_ratio"]
    ratio: float
    starting_risks: tuple[float, ...]


@dataclass(frozen=True, slots=True)
class EValueInput:
    """An observational estimate with its limits, and what it was reported as."""

    reported: Reported
    estimate: Estimate


@dataclass(frozen=True, slots=True)
class InteractionInput:
    """Two independent estimates of one scale."""

    scale: Scale
    first: Estimate
    second: Estimate
    confidence_level: float


def _estimate(body: Body, name: str, *, ratio: bool) -> Estimate:
    """An estimate with its limits, in order."""
    inner = body.inner(name, _ESTIMATE, _EXAMPLE)
    if not body.has(name):
        return 1.0, 1.0, 1.0
    return _estimate_in(inner, ratio=ratio)


def _estimate_in(body: Body, *, ratio: bool) -> Estimate:
    low = _SMALLEST if ratio else -_LARGEST
    found = [body.number(field, low, _LARGEST) for field in _ESTIMATE]
    if any(value is None for value in found):
        return 1.0, 1.0, 1.0
    estimate, lower, upper = (value or 0.0 for value in found)
    if not lower <= estimate <= upper or lower == upper:
        body.add(
            "estimate", "The estimate must lie within its interval.", "Check the three numbers.", "estimate_outside_interval"
        )
    return estimate, lower, upper


def hazard_input(given: Any) -> HazardInput:
    """Read the body of /hazard: a ratio for being free of the event is turned round here.

    Raises
    ------
    InputProblems
        Everything that is wrong with it.
    """
    body = Body(given, ("hazard_ratio", "comparator_risk", "comparator_survival", "ratio_is_for", "event_is"))
    ratio = _estimate(body, "hazard_ratio", ratio=True)
    if body.choice("ratio_is_for", _RATIO_IS_FOR, "event") == "event_free":
        ratio = 1.0 / ratio[0], 1.0 / ratio[2], 1.0 / ratio[1]
    if body.has("comparator_survival") and not body.has("comparator_risk"):
        survival = body.number("comparator_survival", 0.0, 1.0)
        risk = None if survival is None else 1.0 - survival
    else:
        risk = body.number("comparator_risk", 0.0, 1.0)
        if body.has("comparator_survival"):
            body.add("comparator_survival", "Risk and survival are both given.", "Give one of them.", "unknown_field")
    event_is = body.choice("event_is", SAID, "unwanted")
    body.finish()
    return HazardInput(ratio, risk or 0.0, event_is)


def back_input(given: Any) -> BackInput:
    """Read the body of /back-calculation: an estimate with its limits, or with its p.

    Raises
    ------
    InputProblems
        Everything that is wrong with it.
    """
    body = Body(given, ("scale", *_ESTIMATE, "p", "confidence_level", "sides"))
    scale = body.choice("scale", _SCALES)
    level = body.confidence_level()
    sides = 2
    if body.has("sides"):
        given_sides = body.given["sides"]
        if given_sides in (1, 2) and not isinstance(given_sides, bool):
            sides = int(given_sides)
        else:
            body.add("sides", "A test has one side or two.", "Give 1 or 2.", "unknown_choice")
    if body.has("p"):
        estimate = body.number("estimate", _SMALLEST if scale == "ratio" else -_LARGEST, _LARGEST)
        p = body.number("p", _SMALLEST_P, 1.0)
        if estimate is not None and estimate == (1.0 if scale == "ratio" else 0.0):
            body.add(
                "estimate", "From no effect and a p no interval can be had.", "Give an estimate with an effect.", "no_effect"
            )
        for field in ("low", "high"):
            if body.has(field):
                body.add(field, "Limits and p are both given.", "Give the limits, or p.", "unknown_field")
        body.finish()
        return BackInput(scale, estimate or 0.0, None, p, level, sides)
    estimate, low, high = _estimate_in(body, ratio=scale == "ratio")
    body.finish()
    return BackInput(scale, estimate, (low, high), None, level, sides)


def translate_input(given: Any) -> TranslateInput:
    """Read the body of /translate: an odds ratio or a risk ratio, and starting risks.

    Raises
    ------
    InputProblems
        Everything that is wrong with it.
    """
    body = Body(given, ("odds_ratio", "risk_ratio", "starting_risks"))
    measure: Literal["odds_ratio", "risk_ratio"] = "odds_ratio" if body.has("odds_ratio") else "risk_ratio"
    ratio = body.number(measure, 0.0, _LARGEST)
    if body.has("odds_ratio") and body.has("risk_ratio"):
        body.add("risk_ratio", "Two ratios are given.", "Give one of them.", "unknown_field")
    risks = body.given.get("starting_risks")
    found: list[float] = []
    if not isinstance(risks, list) or not 1 <= len(risks) <= 1000:
        body.add("starting_risks", "A list of 1 to 1000 is needed.", "Give risks from 0 to 1.", "missing_field")
    else:
        listed = Body(
            {str(i): risk for i, risk in enumerate(risks)}, [str(i) for i in range(len(risks))], body.problems, "starting_risks"
        )
        found = [listed.number(str(i), 0.0, 1.0) or 0.0 for i in range(len(risks))]
    body.finish()
    return TranslateInput(measure, ratio or 0.0, tuple(found))


def e_value_input(given: Any) -> EValueInput:
    """Read the body of /e-value.

    Raises
    ------
    InputProblems
        Everything that is wrong with it.
    """
    body = Body(given, ("reported", *_ESTIMATE))
    found = EValueInput(body.choice("reported", _REPORTED), _estimate_in(body, ratio=True))
    body.finish()
    return found


def interaction_input(given: Any) -> InteractionInput:
    """Read the body of /interaction.

    Raises
    ------
    InputProblems
        Everything that is wrong with it.
    """
    body = Body(given, ("scale", "first", "second", "confidence_level"))
    scale = body.choice("scale", _SCALES)
    ratio = scale == "ratio"
    found = InteractionInput(
        scale, _estimate(body, "first", ratio=ratio), _estimate(body, "second", ratio=ratio), body.confidence_level()
    )
    body.finish()
    return found
