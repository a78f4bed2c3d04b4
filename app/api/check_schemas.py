"""The documented shapes of /check."""

from __future__ import annotations

from typing import Annotated, Literal

from pydantic import Field

from app.api.schemas import Total
from app.api.shapes import Level, Number, Shape
from app.printed.claims import Arm, Basis, Operator, Place, Quantity, RiskKind, Sense, TestKind, TotalKind
from app.reconstruct.verdict import Consequence, Finding, NoteSlug, Reading, Reason, Verdict


class PrintedIntervalShape(Shape):
    """An interval as printed; a limit that is not given is null."""

    low: str | None = None
    high: str | None = None
    low_value: str | None = None
    high_value: str | None = None
    confidence_level: Level = 0.95
    kind: Literal["confidence", "credible"] = "confidence"


class ClaimShape(Shape):
    """One printed number, or a bound, of one outcome. Needed are the quantity, the arm where it has one, and the number."""

    id: str | None = None
    quantity: Quantity
    arm: Arm | None = None
    printed: str | None = None
    value: str | None = None
    unit: str | None = None
    operator: Operator = "="
    interval: PrintedIntervalShape | None = None
    basis: Basis = "unstated"
    sense: Sense | None = None
    test: TestKind | None = None
    sides: Literal[1, 2] | None = None
    risk_kind: RiskKind | None = None
    total_kind: TotalKind | None = None
    outcome: str | None = None
    horizon: str | None = None
    place: Place | None = None
    span: list[int] | None = None
    label: str | None = None


class TotalsShape(Shape):
    """People analysed, where claims print no total of their own."""

    intervention: Total | None = None
    comparator: Total | None = None


class BelongingShape(Shape):
    """Outcomes that are components of a whole, or groups of which a person is in one, by name."""

    kind: Literal["components", "categories"]
    whole: str | None = None
    parts: Annotated[list[str], Field(min_length=1)]


class CheckRequest(Shape):
    """The printed numbers of a paper."""

    claims: Annotated[list[ClaimShape], Field(min_length=1, max_length=400)] | None = None
    passage: Annotated[str, Field(max_length=200_000)] | None = None
    totals: TotalsShape | None = None
    belongings: Annotated[list[BelongingShape], Field(min_length=1, max_length=60)] | None = None


Ends = list[Number]
Rows = list[list[int]]
Ids = list[str]


class RecomputedShape(Shape):
    """What the tables give by one method, in the printed unit; a value is null where the tables differ in it."""

    method: str
    estimate: Number
    low: Number
    high: Number
    estimate_range: Ends | None
    low_range: Ends | None
    high_range: Ends | None
    prints: bool


class JudgedClaimShape(ClaimShape):
    """A claim with its verdict."""

    verdict: Verdict
    reading: Reading | None
    readings: list[Reading]
    possible: list[Reading]
    finding: Finding | None
    findings: list[Finding]
    reason: Reason | None
    notes: list[NoteSlug]
    recomputed: list[RecomputedShape]
    consequence: Consequence
    because: str


class ChoiceShape(Shape):
    """One way out of a contradiction."""

    slug: Literal["if_counts", "if_percentages", "if_measures"]
    set_aside: Ids
    count: int
    list: Rows


Choices = list[ChoiceShape]


class TablesShape(Shape):
    """The tables that fit: how many, the first 200, the range of every cell and measure."""

    count: int
    complete: bool
    list: Rows
    ranges: dict[str, Ends]
    narrow_with: str | None
    set_aside: Ids
    choices: Choices


class CheckedOutcomeShape(Shape):
    """One outcome: its claims judged, and the tables that fit."""

    name: str | None
    horizon: str | None
    claims: list[JudgedClaimShape]
    tables: TablesShape


class QuestionShape(Shape):
    """Something only the reader can say."""

    slug: str
    text: str


class UnreadShape(Shape):
    """A number in a passage of which no claim was made."""

    span: list[int]
    text: str
    why: str


class ReadRequest(Shape):
    """Sentences of results, or a table, as copied from a paper."""

    passage: Annotated[str, Field(max_length=200_000)]


class ReadOutcomeShape(Shape):
    """One outcome as read."""

    name: str | None
    horizon: str | None
    claims: list[ClaimShape]


class ReadAnswer(Shape):
    """What a passage prints, what was not understood, and what only the reader can say."""

    outcomes: list[ReadOutcomeShape]
    unread: list[UnreadShape]
    questions: list[QuestionShape]
    repairs: list[QuestionShape]
    version: str


class CheckAnswer(Shape):
    """Every printed number with its verdict."""

    outcomes: list[CheckedOutcomeShape]
    unread: list[UnreadShape]
    questions: list[QuestionShape]
    repairs: list[QuestionShape]
    version: str
