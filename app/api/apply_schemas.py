"""The documented shapes of /apply and /balance."""

from __future__ import annotations

from typing import Annotated, Literal

from pydantic import Field

from app.api.schemas import ArmCounts, EventIs, NeededWithSegments
from app.api.shapes import Level, Number, Probability, Shape

Scale = Literal["risk_ratio", "odds_ratio", "hazard_ratio", "risk_difference"]


class EffectShape(Shape):
    """An estimate with its limits: 0 or more for a ratio, from -1 to 1 for a difference."""

    measure: Scale
    estimate: float
    low: float
    high: float


class CountsShape(Shape):
    """The trial's own counts."""

    intervention: ArmCounts
    comparator: ArmCounts


class ApplyRequest(Shape):
    """An effect or the trial's counts, and starting risks; `face` is what the effect is of."""

    effect: EffectShape | None = None
    counts: CountsShape | None = None
    comparator_risk: Probability | None = None
    baseline_risks: Annotated[list[Probability], Field(min_length=1, max_length=1000)]
    event_is: EventIs = "unwanted"
    face: Literal["event", "complement"] = "event"
    confidence_level: Level = 0.95


class CarriedShape(Shape):
    """What follows if one scale stays the same; nulls where a risk would leave 0 to 1 or the scale cannot be formed."""

    scale: Scale
    possible: bool
    converted: bool
    risk_with: Number
    difference: Number
    low: Number
    high: Number
    number_needed_to_treat: NeededWithSegments | None


class BaselineShape(Shape):
    """One starting risk."""

    baseline_risk: float
    scales: list[CarriedShape]


class ApplyAnswer(Shape):
    """Every starting risk under every scale."""

    baselines: list[BaselineShape]
    version: str


class BalanceOutcomeShape(Shape):
    """One outcome of a trial; without `baseline_risk` at the trial's own."""

    name: Annotated[str, Field(max_length=400)] = ""
    horizon: Annotated[str, Field(max_length=400)] | None = None
    event_is: EventIs = "unwanted"
    intervention: ArmCounts
    comparator: ArmCounts
    baseline_risk: Probability | None = None
    held: Scale = "risk_ratio"


class BalanceRequest(Shape):
    """Outcomes of one trial, and what they are counted per."""

    outcomes: Annotated[list[BalanceOutcomeShape], Field(min_length=1, max_length=60)]
    per: Annotated[int, Field(ge=1, le=1_000_000_000)] = 1000
    confidence_level: Level = 0.95


class BalanceRowShape(Shape):
    """One outcome: how many without and with the intervention; at a given risk it is taken as known."""

    name: str
    horizon: str | None
    event_is: EventIs
    starting_risk: Literal["trial", "given"]
    held: Scale
    possible: bool
    without: Number
    with_: Annotated[Number, Field(alias="with")]
    change: Number
    low: Number
    high: Number


class BalanceAnswer(Shape):
    """Every outcome in the same form; `one_horizon` says whether all refer to one time."""

    per: int
    one_horizon: bool
    outcomes: list[BalanceRowShape]
    version: str
