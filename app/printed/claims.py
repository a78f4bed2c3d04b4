"""A claim: one thing a paper says of one outcome, with the text it was printed as.

Typed boxes and pasted sentences both make claims; reconstruction only consumes them.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import Literal

from app.printed.number import PrintedNumber

Arm = Literal["intervention", "comparator"]
ARMS: tuple[Arm, Arm] = ("intervention", "comparator")
Quantity = Literal["events", "non_events", "total", "risk"]
Unit = Literal["people", "percent"]


@dataclass(frozen=True, slots=True)
class Claim:
    """What is printed of one quantity.

    `id` is unique within its outcome; for a typed box it is the name of its field.
    """

    id: str
    quantity: Quantity
    arm: Arm
    number: PrintedNumber
    unit: Unit
