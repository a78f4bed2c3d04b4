"""The JSON of /effects -> a fourfold table and its settings, or every problem at once."""

from __future__ import annotations

import math
from dataclasses import dataclass
from typing import Any

from app.appraisal.sheet import EVENT_IS, EventIs
from app.errors import FieldProblem, InputProblems
from app.measures.fourfold import LARGEST_TOTAL, Fourfold

_ARMS = ("intervention", "comparator")
_FIELDS = (*_ARMS, "confidence_level", "event_is", "per", "missing", "exact_unconditional")


@dataclass(frozen=True, slots=True)
class EffectsInput:
    """One fourfold table, the level, and whether the event is unwanted."""

    table: Fourfold
    confidence_level: float
    event_is: EventIs


class Problems(list[FieldProblem]):
    """Problems found so far in one JSON body."""

    def add(self, field: str, message: str, hint: str, slug: str) -> None:
        """Add one problem."""
        self.append(FieldProblem(field, message, hint, slug))

    def unknown(self, given: dict[str, Any], known: tuple[str, ...], prefix: str = "") -> None:
        """Add a problem for every field that is not known."""
        for name in given:
            if name not in known:
                shown = "".join(c if c.isprintable() else "\N{REPLACEMENT CHARACTER}" for c in name[:40])
                self.add(
                    f"{prefix}{shown}", "This field is not known here.", f"Known are: {', '.join(known)}.", "unknown_field"
                )


def whole_number(problems: Problems, field: str, value: Any, least: int) -> int | None:
    """A whole number of people from JSON; true and "4" are not numbers here."""
    if isinstance(value, bool) or not isinstance(value, int | float):
        problems.add(field, "A whole number is needed.", "Give people as a number, such as 46.", "not_a_number")
    elif isinstance(value, float) and (not math.isfinite(value) or value != math.floor(value)):
        problems.add(field, "People are counted whole.", "Give a whole number, such as 46.", "not_whole")
    elif value < least:
        problems.add(field, f"{least} or more is needed.", "Check the number.", "negative" if value < 0 else "total_is_zero")
    elif value > LARGEST_TOTAL:
        problems.add(field, "More people than this program counts in an arm.", f"At most {LARGEST_TOTAL}.", "count_too_large")
    else:
        return int(value)
    return None


def confidence_level(problems: Problems, value: Any) -> float:
    """A two-sided level strictly between 0.5 and 1, as a proportion."""
    number = isinstance(value, int | float) and not isinstance(value, bool)
    if not number or not 0.5 <= value <= 0.9999:
        problems.add(
            "confidence_level",
            "A confidence level from 0.5 to 0.9999 is needed.",
            "Give a proportion, such as 0.95.",
            "confidence_level_out_of_range",
        )
        return 0.95
    return float(value)


def _arm(problems: Problems, body: dict[str, Any], arm: str) -> tuple[int, int] | None:
    given = body.get(arm)
    if not isinstance(given, dict):
        problems.add(arm, "This arm is missing.", 'Give {"events": 46, "total": 418}.', "missing_field")
        return None
    problems.unknown(given, ("events", "total"), f"{arm}.")
    numbers: list[int | None] = []
    for name, least in (("events", 0), ("total", 1)):
        field = f"{arm}.{name}"
        if name not in given:
            problems.add(field, "This number is missing.", "Give people as a number, such as 46.", "missing_field")
            numbers.append(None)
        else:
            numbers.append(whole_number(problems, field, given[name], least))
    events, total = numbers
    if events is None or total is None:
        return None
    if events > total:
        problems.add(
            f"{arm}.events", f"{events} events are more than the {total} people.", "Check both numbers.", "count_exceeds_total"
        )
        return None
    return events, total


def effects_input(body: Any) -> EffectsInput:
    """Read the body of /effects.

    Raises
    ------
    InputProblems
        Everything that is wrong with it.
    """
    problems = Problems()
    if not isinstance(body, dict):
        problems.add("", "A JSON object is needed.", "Give intervention and comparator.", "not_an_object")
        raise InputProblems(problems)
    problems.unknown(body, _FIELDS)
    arms = [_arm(problems, body, arm) for arm in _ARMS]
    level = confidence_level(problems, body.get("confidence_level", 0.95))
    event_is = body.get("event_is", "unwanted")
    if event_is not in EVENT_IS:
        problems.add(
            "event_is", "Say whether the event is unwanted or wanted.", 'Give "unwanted" or "wanted".', "unknown_choice"
        )
    if problems or arms[0] is None or arms[1] is None:
        raise InputProblems(problems)
    return EffectsInput(Fourfold(*arms[0], *arms[1]), level, event_is)
