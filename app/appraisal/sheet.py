"""A sheet as typed: every box's text, valid or not. The shelf keeps this; results are recomputed."""

from __future__ import annotations

from dataclasses import dataclass, field
from typing import Literal

from app.printed.claims import Basis, Place, TestKind

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


Trust = Literal["", "counts", "percentages"]
PartOf = Literal["", "component", "category"]
TRUST: tuple[Trust, ...] = ("", "counts", "percentages")
PART_OF: tuple[PartOf, ...] = ("", "component", "category")
FIGURE_LEVELS: tuple[str, ...] = ("80", "90", "95", "97.5", "98", "99", "99.5", "99.9")
MOST_OUTCOMES = 60
WORDS: tuple[str, ...] = ("", "lower", "higher")


@dataclass(frozen=True, slots=True)
class TypedFigure:
    """One more number that the paper prints, as typed.

    `key` is its own among the figures of the outcome and never used again; `kind` is a key of
    `app.appraisal.fields.FIGURES`; `word` is the paper's word of direction; `label` what the paper calls it.
    """

    key: str
    kind: str = "risk_ratio"
    value: str = ""
    low: str = ""
    high: str = ""
    level: str = "95"
    basis: Basis = "unstated"
    place: Place | Literal[""] = ""
    arm: Literal["", "intervention", "comparator"] = ""
    word: str = ""
    label: str = ""
    test: TestKind | Literal[""] = ""


@dataclass(frozen=True, slots=True)
class TypedRisk:
    """A group of the reader's own patients: its name, its risk without the intervention as typed, and where that is from."""

    key: str
    name: str = ""
    risk: str = ""
    source: str = ""


@dataclass(frozen=True, slots=True)
class TypedOutcome:
    """What is typed of one outcome; `arms` runs as the sheet's arms do.

    `risks` are the reader's own patients.
    `trust` is what the reader goes by where counts and percentages contradict each other; `part_of` how
    the outcome belongs to the first one of the sheet.
    """

    name: str = ""
    counted: str = ""
    event_is: EventIs = "not_said"
    horizon: str = ""
    follow_up: FollowUp = "not_said"
    arms: tuple[TypedArm, ...] = (TypedArm(), TypedArm())
    figures: tuple[TypedFigure, ...] = ()
    trust: Trust = ""
    part_of: PartOf = ""
    risks: tuple[TypedRisk, ...] = ()


@dataclass(frozen=True, slots=True)
class Filled:
    """Where a box got its text from: a stretch of the passage.

    `outcome` and `part` say which box; `row` is the outcome's place in the passage, -1 where a reader
    assigned the number by hand; `slot` names what it is there whatever box it went to. `text` is what was
    put into the box: if the box says otherwise, it was corrected. `start` is -1 where no one stretch says it.
    """

    outcome: int
    part: str
    row: int
    slot: str
    text: str
    start: int = -1
    end: int = -1


ArmOrder = Literal["as_read", "exchanged"]
ARM_ORDERS: tuple[ArmOrder, ...] = ("as_read", "exchanged")


@dataclass(frozen=True, slots=True)
class Sheet:
    """One paper as typed.

    `arms` are the names of the arms; a contrast takes the first as intervention, the second as
    comparator. `design` of a case-control study forbids all that needs a risk. `invented` marks the
    examples. `passage` is what was pasted, `arm_order` whether its arms are taken the other way round,
    `filled` what it put into the boxes.
    """

    title: str = ""
    reference: str = ""
    arms: tuple[str, ...] = ("", "")
    outcomes: tuple[TypedOutcome, ...] = field(default_factory=lambda: (TypedOutcome(),))
    confidence_level: str = "95"
    design: Design = "trial"
    invented: bool = False
    passage: str = ""
    arm_order: ArmOrder = "as_read"
    filled: tuple[Filled, ...] = ()
