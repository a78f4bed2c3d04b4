"""The documented shapes of /apply."""

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
