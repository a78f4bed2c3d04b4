"""A sheet as typed: every box's text, valid or not. The shelf keeps this; results are recomputed."""

from __future__ import annotations

from dataclasses import dataclass, field
from typing import Literal

EventIs = Literal["not_said", "unwanted", "wanted"]
FollowUp = Literal["fixed", "varies", "not_said"]

Design = Literal["trial", "cohort", "case_control"]

EVENT_IS: tuple[EventIs, ...] = ("not_said", "unwanted", "wanted")
FOLLOW_UP: tuple[FollowUp, ...] = ("fixed", "varies", "not_said")
DESIGNS: tuple[Design, ...] = ("trial", "cohort", "case_control")
CONFIDENCE_LEVELS: tuple[str, ...] = ("90", "95", "99")


@dataclass(frozen=True, slots=True)
class TypedArm:
    """What is typed of one arm for one outcome."""

    events: str = ""
    non_events: str = ""
    total: str = ""
    percentage: str = ""


@dataclass(frozen=True, slots=True)
class TypedOutcome:
    """What is typed of one outcome; `arms` runs as the sheet's arms do."""

    name: str = ""
    counted: str = ""
    event_is: EventIs = "not_said"
    horizon: str = ""
    follow_up: FollowUp = "not_said"
    arms: tuple[TypedArm, ...] = (TypedArm(), TypedArm())


@dataclass(frozen=True, slots=True)
class Sheet:
    """One paper as typed.

    `arms` are the names of the arms; a contrast takes the first as intervention, the second as
    comparator. `design` of a case-control study forbids all that needs a risk. `invented` marks the
    examples.
    """

    title: str = ""
    reference: str = ""
    arms: tuple[str, ...] = ("", "")
    outcomes: tuple[TypedOutcome, ...] = field(default_factory=lambda: (TypedOutcome(),))
    confidence_level: str = "95"
    design: Design = "trial"
    invented: bool = False
