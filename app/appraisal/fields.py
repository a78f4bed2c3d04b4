"""The fields of a sheet: their names in a form, and what each asks for. Forms and messages read this."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Literal

from app.printed.claims import Quantity
from app.printed.number import Kind

ArmPart = Literal["events", "non_events", "total", "percentage"]


@dataclass(frozen=True, slots=True)
class NumberField:
    """A box for one printed number of an arm."""

    part: ArmPart
    quantity: Quantity
    kind: Kind
    label: str
    example: str


NUMBER_FIELDS: tuple[NumberField, ...] = (
    NumberField("events", "events", "count", "With the event", "46"),
    NumberField("non_events", "non_events", "count", "Without", "372"),
    NumberField("total", "total", "count", "Analysed", "418"),
    NumberField("percentage", "risk", "percentage", "Per cent", "11.0"),
)

TEXT_LIMIT = 4000
"""Longest text kept of one field; longer is refused with a message."""


def arm_field(outcome: int, arm: int, part: str) -> str:
    """Form name of a box of one arm of one outcome."""
    return f"outcome-{outcome}-arm-{arm}-{part}"


def outcome_field(outcome: int, part: str) -> str:
    """Form name of a field of one outcome."""
    return f"outcome-{outcome}-{part}"


def arm_name_field(arm: int) -> str:
    """Form name of the name of an arm."""
    return f"arm-{arm}-name"
