"""A sheet to versioned JSON and back. Each version leaves a frozen sample that the migration test walks."""

from __future__ import annotations

import json
from dataclasses import asdict
from typing import Any, TypeVar

from app.appraisal.fields import FIGURES
from app.appraisal.sheet import (
    ARM_ORDERS,
    CONFIDENCE_LEVELS,
    DESIGNS,
    EVENT_IS,
    FIGURE_LEVELS,
    FOLLOW_UP,
    PART_OF,
    TRUST,
    WORDS,
    Filled,
    Sheet,
    TypedArm,
    TypedFigure,
    TypedOutcome,
    TypedRisk,
)
from app.printed.claims import ARMS, BASES, PLACES, TEST_KINDS

VERSION = 5

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


def _figure(figure: dict[str, Any]) -> TypedFigure:
    return TypedFigure(
        key=_text(figure["key"]),
        kind=_choice(figure["kind"], tuple(FIGURES)),
        value=_text(figure["value"]),
        low=_text(figure["low"]),
        high=_text(figure["high"]),
        level=_choice(figure["level"], FIGURE_LEVELS),
        basis=_choice(figure["basis"], BASES),
        place=_choice(figure["place"], ("", *PLACES)),
        arm=_choice(figure["arm"], ("", *ARMS)),
        word=_choice(figure["word"], WORDS),
        label=_text(figure["label"]),
        test=_choice(figure["test"], ("", *TEST_KINDS)),
    )


def _filled(item: dict[str, Any]) -> Filled:
    return Filled(
        outcome=int(item["outcome"]),
        part=_text(item["part"]),
        row=int(item["row"]),
        slot=_text(item["slot"]),
        text=_text(item["text"]),
        start=int(item["start"]),
        end=int(item["end"]),
    )


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
    if document["version"] < 3:
        sheet = {**sheet, "outcomes": [{**o, "figures": [], "trust": "", "part_of": ""} for o in sheet["outcomes"]]}
    if document["version"] < 4:
        figures = [[{**f, "test": ""} for f in o["figures"]] for o in sheet["outcomes"]]
        outcomes_then = [{**o, "figures": f} for o, f in zip(sheet["outcomes"], figures, strict=True)]
        sheet = {**sheet, "passage": "", "arm_order": "as_read", "filled": [], "outcomes": outcomes_then}
    if document["version"] < 5:
        sheet = {**sheet, "outcomes": [{**o, "risks": []} for o in sheet["outcomes"]]}
    outcomes = tuple(
        TypedOutcome(
            name=_text(outcome["name"]),
            counted=_text(outcome["counted"]),
            event_is=_choice(outcome["event_is"], EVENT_IS),
            horizon=_text(outcome["horizon"]),
            follow_up=_choice(outcome["follow_up"], FOLLOW_UP),
            arms=tuple(TypedArm(**{key: _text(value) for key, value in arm.items()}) for arm in outcome["arms"]),
            figures=tuple(_figure(figure) for figure in outcome["figures"]),
            trust=_choice(outcome["trust"], TRUST),
            part_of=_choice(outcome["part_of"], PART_OF),
            risks=tuple(TypedRisk(**{key: _text(value) for key, value in risk.items()}) for risk in outcome["risks"]),
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
        passage=_text(sheet["passage"]),
        arm_order=_choice(sheet["arm_order"], ARM_ORDERS),
        filled=tuple(_filled(item) for item in sheet["filled"]),
    )
