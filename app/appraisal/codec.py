"""A sheet to versioned JSON and back. Each version leaves a frozen sample that the migration test walks."""

from __future__ import annotations

import json
from dataclasses import asdict
from typing import Any, TypeVar

from app.appraisal.sheet import CONFIDENCE_LEVELS, DESIGNS, EVENT_IS, FOLLOW_UP, Sheet, TypedArm, TypedOutcome

VERSION = 2

_Choice = TypeVar("_Choice", bound=str)


def encode(sheet: Sheet) -> str:
    """The sheet as JSON text of the current version."""
    return json.dumps({"version": VERSION, "sheet": asdict(sheet)}, ensure_ascii=False, sort_keys=True)


def _text(value: Any) -> str:
    if not isinstance(value, str):
        raise ValueError("a sheet holds text only")
    return value


def _choice(value: Any, allowed: tuple[_Choice, ...]) -> _Choice:
    for choice in allowed:
        if value == choice:
            return choice
    raise ValueError(f"not one of {allowed}")


def decode(text: str) -> Sheet:
    """A sheet from JSON text of any version so far.

    Raises
    ------
    ValueError
        The text is not a sheet, or of a later version.
    """
    document = json.loads(text)
    if not isinstance(document, dict) or document.get("version") not in range(1, VERSION + 1):
        raise ValueError("not a sheet of a known version")
    sheet = document["sheet"]
    if document["version"] < 2:
        sheet = {**sheet, "design": "trial"}  # the only design there was
    outcomes = tuple(
        TypedOutcome(
            name=_text(outcome["name"]),
            counted=_text(outcome["counted"]),
            event_is=_choice(outcome["event_is"], EVENT_IS),
            horizon=_text(outcome["horizon"]),
            follow_up=_choice(outcome["follow_up"], FOLLOW_UP),
            arms=tuple(TypedArm(**{key: _text(value) for key, value in arm.items()}) for arm in outcome["arms"]),
        )
        for outcome in sheet["outcomes"]
    )
    return Sheet(
        title=_text(sheet["title"]),
        reference=_text(sheet["reference"]),
        arms=tuple(_text(name) for name in sheet["arms"]),
        outcomes=outcomes,
        confidence_level=_choice(sheet["confidence_level"], CONFIDENCE_LEVELS),
        design=_choice(sheet["design"], DESIGNS),
        invented=bool(sheet["invented"]),
    )
